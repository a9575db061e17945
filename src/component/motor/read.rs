//! How a motor is written in a scenario.

use super::circuit::CircuitFigures;
use super::read_drive::{speed_loop, torque_loop};
use super::read_generator::optimal_power;
use super::{Motor, MotorLaw, Plate};
use crate::component::points::read_curve;
use crate::quantity::{Dimension, format_number};
use crate::signal::Signal;
use crate::signal::read::{read_signal, read_signal_or};
use crate::tree::{Alternative, Fields, Range};

/// The laws a motor may have.
const LAWS: [Alternative<MotorLaw>; 8] = [
    ("rating_plate", "Cage motor from its rating plate.", rating_plate),
    ("induction", "Kloss's formula, right near synchronous speed.", induction),
    ("curve", "Points of speed and torque at full voltage, read at the signed speed.", curve),
    ("prescribed", "A torque as a signal.", prescribed),
    ("speed_loop", "PI speed controller with a torque limit.", speed_loop),
    ("torque_loop", "Drive that gives the torque asked for within its limits.", torque_loop),
    (
        "optimal_power",
        "Generator of a variable-speed rotor: coefficient*speed^2, then its limit or rated region.",
        optimal_power,
    ),
    ("induction_circuit", "Equivalent circuit of an induction motor.", induction_circuit),
];

impl Motor {
    /// Reads the motor called `name`.
    pub fn read(name: &str, fields: &mut Fields<'_>) -> Self {
        let body = fields.name("body", "The body it drives; the reaction goes to ground.");
        let law = fields.choice("law", true, "How its torque comes about.", &LAWS);
        let scale = read_signal(
            fields,
            "scale",
            Dimension::One,
            false,
            "Factor on what the law delivers, after its limits.",
        );
        if scale.is_some() && matches!(law, Some(MotorLaw::InductionCircuit { .. })) {
            fields.fault_hint(
                "scale",
                "`scale` has no meaning for `induction_circuit`",
                "`voltage` lowers its torque, `connected` switches it",
            );
        }
        let reversed = fields.flag("reversed", false, "Mirrors the law: forward is negative.");
        let source = fields.source();
        // A law that is missing or faulty has been told; no torque stands in for it.
        let law = law.unwrap_or(MotorLaw::Prescribed { torque: Signal::Constant(0.0) });
        Self { name: name.to_owned(), body, law, scale, reversed, source }
    }
}

fn voltage(fields: &mut Fields<'_>) -> Signal {
    let signal =
        read_signal_or(fields, "voltage", Dimension::One, 1.0, "Share of the rated voltage.");
    if matches!(signal, Signal::Constant(value) if value < 0.0) {
        fields.fault("voltage", "`voltage` must not be negative");
    }
    signal
}

fn positive(
    fields: &mut Fields<'_>,
    key: &'static str,
    dimension: Dimension,
    doc: &'static str,
) -> f64 {
    fields.quantity(key, dimension, Range::Positive, doc)
}

fn rating_plate(fields: &mut Fields<'_>) -> MotorLaw {
    let power = positive(fields, "power", Dimension::Power, "Rated power at the shaft.");
    let speed = fields.quantity("speed", Dimension::Speed, Range::NotZero, "Rated speed.");
    let synchronous_speed = fields.quantity(
        "synchronous_speed",
        Dimension::Speed,
        Range::NotZero,
        "Speed without load, above the rated speed.",
    );
    let mut share = |key, doc| positive(fields, key, Dimension::One, doc);
    let starting = share("starting_torque", "Torque at standstill over rated torque.");
    let pull_up = share("pull_up_torque", "Lowest torque on the way up over rated torque.");
    let breakdown = share("breakdown_torque", "Largest torque over rated torque.");
    let voltage = voltage(fields);
    if starting < pull_up {
        fields.fault("starting_torque", "`starting_torque` must not be below `pull_up_torque`");
    }
    if pull_up > breakdown {
        fields.fault("pull_up_torque", "`pull_up_torque` must not exceed `breakdown_torque`");
    }
    if breakdown <= 1.0 {
        fields.fault("breakdown_torque", "`breakdown_torque` must exceed the rated torque, 100 %");
    }
    let share = speed / synchronous_speed;
    if share >= 1.0 {
        fields.fault_hint(
            "speed",
            "the rated speed must lie below the synchronous speed",
            "a cage motor slips by a few percent under load, for example 1465 rpm of 1500 rpm",
        );
    } else if share < 0.0 {
        fields.fault_hint(
            "speed",
            "the rated speed must have the sign of the synchronous speed",
            "`reversed: true` mirrors a motor",
        );
    } else if breakdown > 1.0 {
        let plate = Plate { power, speed, synchronous_speed, starting, pull_up, breakdown };
        let slip = plate.breakdown_slip();
        if slip >= 1.0 {
            fields.fault(
                "breakdown_torque",
                format!(
                    "with a rated slip of {} % this breakdown torque would come at a slip of {} %, \
                     beyond standstill",
                    format_number(100.0 * plate.rated_slip(), 3),
                    format_number(100.0 * slip, 3)
                ),
            );
        }
    }
    MotorLaw::RatingPlate { power, speed, synchronous_speed, starting, pull_up, breakdown, voltage }
}

fn induction(fields: &mut Fields<'_>) -> MotorLaw {
    MotorLaw::Induction {
        synchronous_speed: fields.quantity(
            "synchronous_speed",
            Dimension::Speed,
            Range::NotZero,
            "Speed without load; negative turns backward.",
        ),
        breakdown_torque: positive(
            fields,
            "breakdown_torque",
            Dimension::Torque,
            "Largest torque at full voltage.",
        ),
        breakdown_slip: positive(
            fields,
            "breakdown_slip",
            Dimension::One,
            "Slip at the breakdown torque.",
        ),
        voltage: voltage(fields),
    }
}

fn curve(fields: &mut Fields<'_>) -> MotorLaw {
    MotorLaw::Curve {
        points: read_curve(
            fields,
            f64::NEG_INFINITY,
            "Rows of speed and torque, speeds rising; end values are held.",
        ),
        voltage: voltage(fields),
    }
}

fn prescribed(fields: &mut Fields<'_>) -> MotorLaw {
    let torque =
        read_signal(fields, "torque", Dimension::Torque, true, "Torque, positive drives forward.");
    MotorLaw::Prescribed { torque: torque.unwrap_or(Signal::Constant(0.0)) }
}

fn induction_circuit(fields: &mut Fields<'_>) -> MotorLaw {
    let line_voltage =
        positive(fields, "line_voltage", Dimension::Voltage, "Rated voltage between two lines.");
    let frequency = positive(fields, "frequency", Dimension::Frequency, "Frequency of the line.");
    let pole_pairs = fields.whole("pole_pairs", 1, 1000, "Pole pairs: 2 for 1500 rpm at 50 Hz.");
    let mut ohms = |key, range, doc| fields.quantity(key, Dimension::Resistance, range, doc);
    let stator_resistance =
        ohms("stator_resistance", Range::NotNegative, "Of a phase, star equivalent.");
    let stator_reactance =
        ohms("stator_reactance", Range::NotNegative, "Leakage of a phase at the line frequency.");
    let rotor_resistance =
        ohms("rotor_resistance", Range::Positive, "Of a phase, referred to the stator.");
    let rotor_reactance =
        ohms("rotor_reactance", Range::NotNegative, "Leakage of a phase, referred to the stator.");
    let magnetising_reactance =
        ohms("magnetising_reactance", Range::Positive, "Of a phase, at the line frequency.");
    if stator_reactance + rotor_reactance == 0.0 {
        fields.fault_hint(
            "rotor_reactance",
            "a machine without any leakage reactance has no limit to its torque",
            "`stator_reactance` and `rotor_reactance` together are some 10 to 25 % of V/I at rated load",
        );
    }
    let voltage = voltage(fields);
    let connected = read_signal_or(
        fields,
        "connected",
        Dimension::One,
        1.0,
        "0.5 or more: on the line; below: open, no stator current.",
    );
    let transient = fields.flag(
        "transient",
        false,
        "Flux equations: torque pulses after switching; else the circuit at each instant.",
    );
    let figures = CircuitFigures {
        line_voltage,
        frequency,
        pole_pairs: pole_pairs as u32,
        stator_resistance,
        stator_reactance,
        rotor_resistance,
        rotor_reactance,
        magnetising_reactance,
    };
    MotorLaw::InductionCircuit { figures, voltage, connected, transient }
}

#[cfg(test)]
#[path = "read_tests.rs"]
mod tests;
