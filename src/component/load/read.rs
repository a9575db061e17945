//! How a load is written in a scenario.

use super::periodic::TurnHarmonic;
use super::pitch::PitchLoop;
use super::power_coefficient::{DEFAULT, PowerCoefficient};
use super::propeller::TorqueCoefficient;
use super::read_coefficients::{power_coefficient, torque_coefficient};
use super::{Load, LoadLaw};
use crate::component::points::read_curve;
use crate::quantity::Dimension;
use crate::signal::Signal;
use crate::signal::read::{read_signal, read_signal_or};
use crate::tree::{Alternative, Fields, Range};

/// The highest order of a load over an angle.
const HIGHEST_ORDER: i64 = 10_000;

/// The laws a load may have.
const LAWS: [Alternative<LoadLaw>; 9] = [
    ("power_law", "Torque*|w/speed|^exponent against the motion.", power_law),
    ("friction", "Dry friction that sticks and slips.", friction),
    ("viscous", "Torque in proportion to the speed.", viscous),
    ("prescribed", "An external torque as a signal, positive drives forward.", prescribed),
    ("curve", "Points of speed and torque against the motion, read at |speed|.", curve),
    ("axial_rotor", "Wind or water rotor in a flow.", axial_rotor),
    ("periodic", "Torque by the body's angle.", periodic),
    ("propeller", "Ship's propeller.", propeller),
    ("reciprocating", "Inertia torque of a mass moved by crank and rod.", reciprocating),
];

impl Load {
    /// Reads the load called `name`.
    pub fn read(name: &str, fields: &mut Fields<'_>) -> Self {
        let body = fields.name("body", "The body it loads.");
        let law = fields.choice("law", true, "How its torque comes about.", &LAWS);
        let against = fields
            .name_optional("against", "Other body (friction and viscous); ground when absent.");
        let scale = read_signal(
            fields,
            "scale",
            Dimension::One,
            false,
            "Factor on what the law delivers; friction: on sliding and breakaway alike.",
        );
        let reversed = fields.flag("reversed", false, "Mirrors the law.");
        let source = fields.source();
        let between =
            matches!(law, Some(LoadLaw::Friction { .. } | LoadLaw::Viscous { .. }) | None);
        if against.is_some() && !between {
            fields.fault("against", "`against` is for friction and viscous loads only");
        }
        // `ground` typed out is the default.
        let against = against.filter(|other| other != "ground");
        // A law that is missing or faulty has been told; no torque stands in for it.
        let law = law.unwrap_or(LoadLaw::Prescribed { torque: Signal::Constant(0.0) });
        Self { name: name.to_owned(), body, against, law, scale, reversed, source }
    }
}

fn power_law(fields: &mut Fields<'_>) -> LoadLaw {
    let torque = fields.quantity_optional(
        "torque",
        Dimension::Torque,
        Range::NotNegative,
        "Torque at `speed`; or `power` instead.",
    );
    let power = fields.quantity_optional(
        "power",
        Dimension::Power,
        Range::NotNegative,
        "Power at `speed`, instead of `torque`.",
    );
    let speed = fields.quantity(
        "speed",
        Dimension::Speed,
        Range::Positive,
        "Speed at which torque or power is stated.",
    );
    let exponent =
        fields.quantity("exponent", Dimension::One, Range::Positive, "2 for pumps and fans.");
    let torque = match (torque, power) {
        (Some(torque), None) => torque,
        (None, Some(power)) => power / speed,
        (Some(_), Some(_)) => {
            fields.fault("power", "either `torque` or `power` is stated, not both");
            f64::NAN
        }
        (None, None) => {
            fields.fault_here("`torque` is missing (or `power` in its place)");
            f64::NAN
        }
    };
    LoadLaw::PowerLaw { torque, speed, exponent }
}

fn friction(fields: &mut Fields<'_>) -> LoadLaw {
    let sliding = fields.quantity(
        "sliding",
        Dimension::Torque,
        Range::NotNegative,
        "Torque while it slides.",
    );
    let breakaway = fields.quantity_or(
        "breakaway",
        Dimension::Torque,
        Range::NotNegative,
        sliding,
        "Torque that breaks it away, `sliding` or more; default `sliding`.",
    );
    if breakaway < sliding {
        fields.fault("breakaway", "`breakaway` must not be below `sliding`");
    }
    LoadLaw::Friction { sliding, breakaway }
}

fn viscous(fields: &mut Fields<'_>) -> LoadLaw {
    LoadLaw::Viscous {
        coefficient: fields.quantity(
            "coefficient",
            Dimension::Damping,
            Range::NotNegative,
            "Torque per speed.",
        ),
    }
}

fn reciprocating(fields: &mut Fields<'_>) -> LoadLaw {
    let length = |fields: &mut Fields<'_>, key, doc| {
        fields.quantity(key, Dimension::Length, Range::Positive, doc)
    };
    let crank_radius = length(fields, "crank_radius", "Radius of the crank: half the stroke.");
    let rod_length = length(fields, "rod_length", "Length of the connecting rod.");
    let mass = fields.quantity(
        "reciprocating_mass",
        Dimension::Mass,
        Range::Positive,
        "Mass that moves with the piston, the rod's share with it.",
    );
    let phase = fields.quantity_or(
        "phase",
        Dimension::Angle,
        Range::Any,
        0.0,
        "Crank angle at the start, from the dead centre far from the crank.",
    );
    if rod_length <= crank_radius {
        fields.fault("rod_length", "`rod_length` must be above `crank_radius`");
    }
    LoadLaw::Reciprocating { crank_radius, rod_length, mass, phase }
}

fn prescribed(fields: &mut Fields<'_>) -> LoadLaw {
    let torque =
        read_signal(fields, "torque", Dimension::Torque, true, "Torque, positive drives forward.");
    LoadLaw::Prescribed { torque: torque.unwrap_or(Signal::Constant(0.0)) }
}

fn curve(fields: &mut Fields<'_>) -> LoadLaw {
    let points = read_curve(
        fields,
        0.0,
        "Rows of speed and torque, speeds rising from 0; end values are held; a torque at 0 sticks.",
    );
    if points.first().is_some_and(|point| point[1] < 0.0) {
        fields.fault(
            "points.0.1",
            "the torque at standstill acts against the motion: it must not be negative",
        );
    }
    LoadLaw::Curve { points }
}

fn axial_rotor(fields: &mut Fields<'_>) -> LoadLaw {
    let radius =
        fields.quantity("radius", Dimension::Length, Range::Positive, "Radius of the rotor.");
    let density = fields.quantity(
        "density",
        Dimension::Density,
        Range::Positive,
        "Density of the fluid: air about 1.225 kg/m3, sea water 1025 kg/m3.",
    );
    let flow =
        read_signal(fields, "flow", Dimension::LinearSpeed, true, "Speed of the wind or water.");
    let pitch = read_signal_or(fields, "pitch", Dimension::Angle, 0.0, "Pitch of the blades.");
    let pitch_loop = fields.group_optional(
        "pitch_loop",
        "A controller that holds a speed with the pitch, in place of `pitch`.",
        PitchLoop::read,
    );
    if pitch_loop.is_some() && fields.has("pitch") {
        fields.fault("pitch", "either `pitch` or `pitch_loop` is stated, not both");
    }
    let coefficient = fields.group_optional(
        "power_coefficient",
        "Cp over tip speed ratio and pitch in one of these ways, in place of the built-in formula.",
        power_coefficient,
    );
    let coefficient = coefficient.flatten().unwrap_or(PowerCoefficient::Formula(DEFAULT));
    let flow = flow.unwrap_or(Signal::Constant(0.0));
    if let Some(pitch_loop) = &pitch_loop {
        pitch_loop.check(&coefficient, fields);
    }
    let pitch_loop = pitch_loop.map(Box::new);
    let coefficient = Box::new(coefficient);
    LoadLaw::AxialRotor { radius, density, flow, pitch, pitch_loop, coefficient }
}

fn periodic(fields: &mut Fields<'_>) -> LoadLaw {
    let mean = fields.quantity(
        "mean",
        Dimension::Torque,
        Range::NotNegative,
        "Mean torque, against the motion; holds at rest.",
    );
    let harmonics = fields.list("harmonics", "Harmonics of the resisting torque.", |wave| {
        let order = wave.whole("order", 1, HIGHEST_ORDER, "Periods a turn of the body.");
        let amplitude = wave.quantity(
            "amplitude",
            Dimension::Torque,
            Range::NotNegative,
            "Resisting torque of amplitude*sin(order*angle + phase).",
        );
        let phase =
            wave.quantity_or("phase", Dimension::Angle, Range::Any, 0.0, "Phase at the start.");
        TurnHarmonic { order: order as u32, amplitude, phase }
    });
    LoadLaw::Periodic { mean, harmonics }
}

fn propeller(fields: &mut Fields<'_>) -> LoadLaw {
    let diameter = fields.quantity("diameter", Dimension::Length, Range::Positive, "Diameter.");
    let density = fields.quantity_or(
        "density",
        Dimension::Density,
        Range::Positive,
        1025.0,
        "Density of the water: sea 1025 kg/m3, fresh 1000 kg/m3.",
    );
    let advance = read_signal_or(
        fields,
        "advance",
        Dimension::LinearSpeed,
        0.0,
        "Speed of the water past the propeller: ship's speed less wake; 0 is bollard pull.",
    );
    let coefficient = fields.group(
        "torque_coefficient",
        "KQ = torque/(density*n^2*diameter^5) over J = advance/(n*diameter), in one of these ways.",
        torque_coefficient,
    );
    let coefficient = coefficient.flatten().unwrap_or_else(|| TorqueCoefficient::constant(0.0));
    LoadLaw::Propeller { diameter, density, advance, coefficient }
}

#[cfg(test)]
#[path = "read_tests.rs"]
mod tests;
