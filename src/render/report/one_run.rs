//! Studies of the train as it stands or of its one run: tables and charts of the page.

use super::Material;
use super::figures::tidy;
use super::html::{HtmlTable, escape, rich};
use crate::analysis::estimates::EstimatesResult;
use crate::analysis::modes::ModesResult;
use crate::analysis::rainflow::RainflowResult;
use crate::analysis::study::results::SteadyAnswer;
use crate::quantity::to_unit;
use crate::render::chart::axes::Sheet;
use crate::render::chart::drawing::Drawing;
use crate::render::chart::interference::{Crossing, Interference, Mode, Order, interference_chart};
use crate::render::chart::number::{NBSP, number, percent, words};
use crate::render::chart::rainflow::{RainflowChart, rainflow_chart};
use crate::render::chart::units::Unit;
use crate::render::charts;
use crate::render::study::by_hand;

/// Cycles shown; the file on disk has all.
const MOST_CYCLES: usize = 20;

/// Frequencies, damping and the crossings that count.
pub fn modes(material: &Material<'_>, answer: &ModesResult) -> String {
    let mut table =
        HtmlTable::new("<>>>>", &["Mode", "Frequency", "Damped", "Damping", "Without load"]);
    for mode in &answer.modes {
        table.row([
            escape(&mode.label),
            format!("{}{NBSP}Hz", number(mode.frequency_hz, 4)),
            format!("{}{NBSP}Hz", number(mode.damped_hz, 4)),
            format!("{}{NBSP}%", number(100.0 * mode.damping_ratio, 3)),
            mode.unloaded_hz
                .map_or_else(|| "–".to_owned(), |it| format!("{}{NBSP}Hz", number(it, 4))),
        ]);
    }
    let mut html = table.html();
    let Some(diagram) = &answer.interference else { return html };
    let speed = charts::display(material.scenario).speed;
    let head = ["Excitation", "Mode", "Meets at", "Frequency", "Separation"];
    let mut table = HtmlTable::new("<<>>>", &head);
    for crossing in
        diagram.crossings.iter().filter(|crossing| crossing.in_range && crossing.counts())
    {
        table.row([
            escape(&crossing.order),
            escape(&crossing.label),
            crossing.speed.map_or_else(
                || "–".to_owned(),
                |it| format!("{}{NBSP}{}", number(speed.of(it), 4), speed.text),
            ),
            format!("{}{NBSP}Hz", number(crossing.frequency_hz, 4)),
            crossing.separation.map_or_else(|| "–".to_owned(), percent),
        ]);
    }
    html.push_str(&table.html());
    html
}

/// The largest cycles.
pub fn rainflow(answer: &RainflowResult) -> String {
    let mut cycles = answer.cycles.clone();
    cycles.sort_by(|a, b| b.range.total_cmp(&a.range));
    let head = ["Range", "Mean", "Cycles"].map(|name| match name {
        "Cycles" => name.to_owned(),
        _ => format!("{name}, {}", answer.unit),
    });
    let head: Vec<&str> = head.iter().map(String::as_str).collect();
    let mut table = HtmlTable::new(">>>", &head);
    for cycle in cycles.iter().take(MOST_CYCLES) {
        table.row([number(cycle.range, 4), number(cycle.mean, 4), number(cycle.count, 3)]);
    }
    table.html()
}

/// Closed forms beside what the run found, with the reasons where they differ.
pub fn estimates(material: &Material<'_>, answer: &EstimatesResult) -> String {
    let mut table = HtmlTable::new("<<>><", &["Gear", "Figure", "By hand", "Run", ""]);
    for gear in &answer.gears {
        for one in &gear.comparisons {
            let figure = |value: f64| {
                let unit =
                    if one.unit == "1" { String::new() } else { format!("{NBSP}{}", one.unit) };
                number(value, 4) + &unit
            };
            let why = match one.agree {
                Some(true) => "agrees".to_owned(),
                Some(false) => format!("differs: {}", one.why.join("; ")),
                None => one.why.join("; "),
            };
            table.row([
                escape(&words(&gear.gear)),
                escape(one.figure),
                figure(one.hand),
                one.found.map_or_else(|| "–".to_owned(), figure),
                rich(&why),
            ]);
        }
    }
    let mut html = table.html();
    let shown = material.written.shown();
    for sheet in [by_hand::members(answer, shown), by_hand::damping(answer, shown)] {
        let mut table = HtmlTable::new(sheet.sides, &sheet.head);
        for row in sheet.rows {
            let cells = row.iter().zip(sheet.sides.chars());
            table.row(cells.map(|(cell, side)| match side {
                '>' => escape(&tidy(cell)),
                _ => escape(&words(cell)),
            }));
        }
        html.push_str(&table.html());
    }
    if !answer.gears.is_empty() {
        html.push_str(&format!("<p><small>{}</small></p>", escape(by_hand::MEMBERS)));
    }
    html
}

/// The interference diagram with its caption.
pub fn diagram(
    material: &Material<'_>,
    name: &str,
    answer: &ModesResult,
) -> Option<(Drawing, String)> {
    let found = answer.interference.as_ref()?;
    let operating = found.operating.unwrap_or(found.speeds);
    let orders = found
        .excitations
        .iter()
        .filter(|one| one.per_speed > 0.0)
        .map(|one| Order { label: one.label.clone(), per_speed: one.per_speed })
        .collect();
    let crossings = found
        .crossings
        .iter()
        .filter(|one| one.in_range && one.counts())
        .filter_map(|one| {
            let speed = one.speed?.abs();
            let inside = (operating[0].abs()..=operating[1].abs()).contains(&speed);
            Some(Crossing { speed, frequency: one.frequency_hz, inside })
        })
        .collect();
    let drawing = interference_chart(&Interference {
        id: format!("study_{name}"),
        title: "Natural frequencies and excitation over speed".to_owned(),
        modes: answer
            .modes
            .iter()
            .map(|mode| Mode { label: mode.label.clone(), frequency: mode.frequency_hz })
            .collect(),
        separation: answer.separation,
        orders,
        crossings,
        operating: operating.map(f64::abs),
        speed_of: words(&found.of),
        speed: charts::display(material.scenario).speed,
        sheet: Sheet::PAGE,
    });
    let caption = "Natural frequencies (lines) and what excites the train (dashed), over speed. \
                   Diamonds meet inside the operating range.";
    Some((drawing, caption.to_owned()))
}

/// The histogram of a rainflow count with its caption.
pub fn histogram(name: &str, answer: &RainflowResult) -> Option<(Drawing, String)> {
    if answer.cycles.is_empty() {
        return None;
    }
    let drawing = rainflow_chart(&RainflowChart {
        id: format!("study_{name}"),
        title: format!("Rainflow cycles of {}", answer.of),
        of: words(&answer.of.replace('.', " ")),
        cycles: answer.cycles.iter().map(|cycle| [cycle.range, cycle.count]).collect(),
        damage_equivalent: answer.damage_equivalent,
        slope: answer.slope,
        unit: Unit::new(&crate::render::chart::number::unit_text(answer.unit), 1.0),
        sheet: Sheet::PAGE,
    });
    Some((drawing, "Cycles by range (ASTM E1049), with the damage-equivalent range.".to_owned()))
}

/// Operating points: speeds, and how near each magnet stands to its pull-out.
pub fn steady(material: &Material<'_>, answer: &SteadyAnswer) -> String {
    let display = charts::display(material.scenario);
    let head = ["Point", "Thing", "Speed or torque", "Power", "Share of pull-out"];
    let mut table = HtmlTable::new("<<>>>", &head);
    for point in &answer.points {
        let mut name = match (&answer.varied, point.value) {
            (Some(varied), Some(value)) => {
                let shown = to_unit(value, varied.dimension, varied.unit).unwrap_or(value);
                format!("{}{NBSP}{}", number(shown, 4), escape(varied.unit))
            }
            _ => "as typed".to_owned(),
        };
        let found = match &point.point {
            Ok(found) => found,
            Err(reason) => {
                table.row([name, escape(reason), "–".to_owned(), "–".to_owned(), "–".to_owned()]);
                continue;
            }
        };
        let torque = |value: f64| {
            format!("{}{NBSP}{}", number(display.torque.of(value), 4), display.torque.text)
        };
        for (body, speed) in &found.bodies {
            let speed =
                format!("{}{NBSP}{}", number(display.speed.of(*speed), 4), display.speed.text);
            let cells = [escape(&words(body)), speed, String::new(), String::new()];
            table.row(std::iter::once(std::mem::take(&mut name)).chain(cells));
        }
        for actor in &found.actors {
            let power = format!("{}{NBSP}W", number(actor.power, 4));
            table.row([
                String::new(),
                escape(&words(&actor.name)),
                torque(actor.torque),
                power,
                String::new(),
            ]);
        }
        for magnet in &found.magnets {
            table.row([
                String::new(),
                escape(&words(&magnet.name)),
                format!("{}{NBSP}° electrical", number(magnet.load_angle.to_degrees(), 4)),
                format!("{}{NBSP}W lost", number(magnet.loss, 3)),
                percent(magnet.pull_out_share),
            ]);
        }
    }
    table.html()
}
