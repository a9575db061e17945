//! The signal forms that are maps of keys: step, ramp, pulse, sine, table, extreme gust.

use super::kind::Kind;
use super::sampling::Sampling;
use super::table::{Across, TableColumns};
use super::turbulence::{LENGTH_SCALE, Spectrum};
use super::{Signal, gust};
use crate::quantity::{self, Dimension, format_number};
use crate::tree::{Fields, Range, Shape};

/// One form: its key, its documentation, how its map is read.
type Form = (&'static str, &'static str, fn(&mut Fields<'_>, &mut Kind) -> Option<Signal>);

const FORMS: [Form; 8] = [
    ("step", "One value before an instant, another from then on.", step),
    ("ramp", "A straight line between two held values.", ramp),
    ("pulse", "One value between two instants, another outside.", pulse),
    ("sine", "Mean + amplitude*sin(2 pi frequency t + phase).", sine),
    ("table", "Two columns of a CSV file, straight lines between its rows.", table),
    ("extreme_gust", "Extreme operating gust of IEC 61400-1, 10.5 s long.", extreme_gust),
    (
        "extreme_coherent_gust",
        "Extreme coherent gust of IEC 61400-1: the wind rises and stays; its turn is left out.",
        extreme_coherent_gust,
    ),
    (
        "turbulence",
        "Turbulent wind at one point by Kaimal's spectrum, drawn from a seed.",
        turbulence,
    ),
];

/// Reads the map of a form by its key.
pub(super) fn read(form: &str, fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    FORMS.iter().find(|(key, ..)| *key == form).and_then(|(.., read)| read(fields, kind))
}

/// Asks for every form, for the reference.
pub(super) fn describe(fields: &mut Fields<'_>, kind: &mut Kind) {
    for (key, doc, read) in FORMS {
        fields.group_optional(key, doc, |inside| read(inside, kind));
    }
}

/// A value of the signal's own dimension; NaN stands in for one that is missing or faulty.
fn value(fields: &mut Fields<'_>, key: &'static str, kind: &mut Kind, doc: &'static str) -> f64 {
    let shape = Shape::Quantity(kind.wanted.unwrap_or(Dimension::One), Range::Any);
    match fields.raw(key, shape, true, doc) {
        Some(node) => kind.value(&fields.path_of(key), node, fields.faults()),
        None => f64::NAN,
    }
}

fn value_or(
    fields: &mut Fields<'_>,
    key: &'static str,
    kind: &mut Kind,
    default: f64,
    doc: &'static str,
) -> f64 {
    let shape = Shape::Quantity(kind.wanted.unwrap_or(Dimension::One), Range::Any);
    match fields.raw(key, shape, false, doc) {
        Some(node) => kind.value(&fields.path_of(key), node, fields.faults()),
        None => default,
    }
}

fn time(fields: &mut Fields<'_>, key: &'static str, doc: &'static str) -> f64 {
    fields.quantity(key, Dimension::Time, Range::Any, doc)
}

/// `start` and `end`, of which the second must be later.
fn span(fields: &mut Fields<'_>) -> (f64, f64) {
    let start = time(fields, "start", "When it begins.");
    let end = time(fields, "end", "When it ends, later than `start`.");
    if start >= end {
        fields.fault_hint("end", "`end` must be later than `start`", "for a jump use `step`");
    }
    (start, end)
}

/// The signal, unless a stand-in is among its numbers.
fn sound<const N: usize>(numbers: [f64; N], signal: Signal) -> Option<Signal> {
    numbers.iter().all(|number| number.is_finite()).then_some(signal)
}

fn step(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let at = time(fields, "at", "When it jumps.");
    let from = value(fields, "from", kind, "Value before.");
    let to = value(fields, "to", kind, "Value from then on.");
    sound([at, from, to], Signal::Step { at, from, to })
}

fn ramp(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let (start, end) = span(fields);
    let from = value(fields, "from", kind, "Value until `start`.");
    let to = value(fields, "to", kind, "Value from `end` on.");
    sound([start, end, from, to], Signal::Ramp { start, end, from, to })
}

fn pulse(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let (start, end) = span(fields);
    let base = value(fields, "base", kind, "Value outside.");
    let peak = value(fields, "peak", kind, "Value for start <= t < end.");
    sound([start, end, base, peak], Signal::Pulse { start, end, base, peak })
}

fn sine(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let mean = value_or(fields, "mean", kind, 0.0, "Mean value.");
    let amplitude = value(fields, "amplitude", kind, "Amplitude about the mean.");
    let frequency =
        fields.quantity("frequency", Dimension::Frequency, Range::Positive, "Periods a second.");
    let phase = fields.quantity_or("phase", Dimension::Angle, Range::Any, 0.0, "Phase at time 0.");
    sound([mean, amplitude, frequency, phase], Signal::Sine { mean, amplitude, frequency, phase })
}

fn table(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let file = fields.name("file", "CSV file with a heading line, relative to the scenario.");
    let time = fields.name("time", "Heading of the time column.");
    let value = fields.name("value", "Heading of the value column.");
    let unit = fields.text("unit", "Unit of the values; SI when absent.");
    let time_unit = fields.text("time_unit", "Unit of the times; s when absent.");
    let faults = fields.faults();
    // A quantity of one such unit tells the dimension, and what is wrong with the unit.
    if let Some(unit) = &unit {
        match quantity::parse_any(&format!("1 {unit}")) {
            Ok((_, dimension)) => {
                kind.meet(&fields.path_of("unit"), dimension, &mut faults.borrow_mut());
            }
            Err(fault) => fault.report(&fields.path_of("unit"), &mut faults.borrow_mut()),
        }
    } else if matches!(kind.wanted, Some(Dimension::Speed | Dimension::Angle)) {
        fields.warn("unit", "the table has no unit, so its values are read in SI (rad, rad/s)");
    }
    if let Some(unit) = &time_unit
        && let Err(fault) = quantity::parse(&format!("1 {unit}"), Dimension::Time)
    {
        fault.report(&fields.path_of("time_unit"), &mut faults.borrow_mut());
    }
    let mut span = |key, doc| fields.quantity_optional(key, Dimension::Time, Range::Positive, doc);
    let every = span(
        "every",
        "Makes even rows this far apart, each the file's mean over that time: for fast records.",
    );
    let largest_gap = span(
        "largest_gap",
        "Longest time without a row, else a fault; absent: ten median steps, else a warning.",
    );
    let sampling = Sampling { largest_gap, every };
    let columns = TableColumns { time, value, time_unit, unit, across: Across::Time };
    let named = ![&file, &columns.time, &columns.value].iter().any(|text| text.is_empty());
    named.then_some(Signal::Table { file, columns, sampling, rows: Vec::new() })
}

fn extreme_gust(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let start = time(fields, "start", "When the gust begins.");
    let mut length = |key, doc| fields.quantity(key, Dimension::Length, Range::Positive, doc);
    let rotor_diameter = length("rotor_diameter", "Diameter of the rotor.");
    let hub_height = length("hub_height", "Height of the hub above ground.");
    let hub_wind = fields.quantity(
        "hub_wind",
        Dimension::LinearSpeed,
        Range::Positive,
        "Wind speed at the hub outside the gust.",
    );
    let turbine_class =
        fields.one_of("turbine_class", &["I", "II", "III"], true, "Turbine class of the standard.");
    let turbulence_class = fields.one_of(
        "turbulence_class",
        &["A+", "A", "B", "C"],
        true,
        "Turbulence class of the standard.",
    );
    let here = fields.path().to_owned();
    kind.meet(&here, Some(Dimension::LinearSpeed), &mut fields.faults().borrow_mut());
    let magnitude =
        gust::magnitude(hub_wind, rotor_diameter, hub_height, turbine_class, turbulence_class);
    if magnitude <= 0.0 {
        fields.fault(
            "hub_wind",
            format!(
                "`hub_wind` must lie below the 1-year extreme wind of class {turbine_class}, {} m/s",
                format_number(gust::extreme_one_year(turbine_class), 4)
            ),
        );
        return None;
    }
    sound([start, hub_wind, magnitude], Signal::ExtremeGust { start, hub_wind, magnitude })
}

fn extreme_coherent_gust(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let start = time(fields, "start", "When the gust begins.");
    let hub_wind = fields.quantity(
        "hub_wind",
        Dimension::LinearSpeed,
        Range::Positive,
        "Wind speed at the hub before the gust.",
    );
    let rise = fields.quantity_or(
        "rise",
        Dimension::LinearSpeed,
        Range::Positive,
        gust::COHERENT_RISE,
        "By how much the wind rises; 15 m/s in the standard.",
    );
    let rise_time = fields.quantity_or(
        "rise_time",
        Dimension::Time,
        Range::Positive,
        gust::COHERENT_TIME,
        "In what time; 10 s in the standard.",
    );
    let here = fields.path().to_owned();
    kind.meet(&here, Some(Dimension::LinearSpeed), &mut fields.faults().borrow_mut());
    let figures = [start, hub_wind, rise, rise_time];
    sound(figures, Signal::CoherentGust { start, hub_wind, rise, rise_time })
}

fn turbulence(fields: &mut Fields<'_>, kind: &mut Kind) -> Option<Signal> {
    let mean =
        fields.quantity("mean", Dimension::LinearSpeed, Range::Positive, "Mean speed of the wind.");
    let intensity = fields.quantity_optional(
        "intensity",
        Dimension::One,
        Range::Between(0.0, 1.0),
        "Standard deviation over mean; or `turbulence_class` instead.",
    );
    let classed = fields.has("turbulence_class");
    let class = fields.one_of(
        "turbulence_class",
        &["A+", "A", "B", "C"],
        false,
        "Class of IEC 61400-1: sigma = Iref (0.75 mean + 5.6 m/s).",
    );
    let length_scale = fields.quantity_or(
        "length_scale",
        Dimension::Length,
        Range::Positive,
        LENGTH_SCALE,
        "Integral scale of the spectrum: 340.2 m for hubs above 60 m, else 5.67 times the height.",
    );
    let seed =
        fields.whole_optional("seed", 0, i64::MAX, "Another seed is another wind; default 1.");
    let highest_frequency = fields.quantity_or(
        "highest_frequency",
        Dimension::Frequency,
        Range::Positive,
        2.0,
        "Eddies faster than this are left out, and their variance with them.",
    );
    let here = fields.path().to_owned();
    kind.meet(&here, Some(Dimension::LinearSpeed), &mut fields.faults().borrow_mut());
    match (intensity.is_some(), classed) {
        (true, true) => fields.fault(
            "turbulence_class",
            "either `intensity` or `turbulence_class` is stated, not both",
        ),
        (false, false) => {
            fields.fault_here("`intensity` is missing (or `turbulence_class` in its place)");
        }
        _ => {}
    }
    let deviation = match intensity {
        Some(intensity) => intensity * mean,
        None => gust::standard_deviation(class, mean),
    };
    let spectrum = Spectrum {
        mean,
        deviation,
        length_scale,
        highest_frequency,
        seed: seed.unwrap_or(1).unsigned_abs(),
    };
    sound([mean, deviation, length_scale, highest_frequency], Signal::Turbulence(spectrum))
}
