//! How the drives with a controller are written: what limits their torque, and how it follows.

use super::torque_limit::TorqueLimits;
use super::{Drive, MotorLaw};
use crate::quantity::Dimension;
use crate::signal::Signal;
use crate::signal::read::{read_signal, read_signal_or};
use crate::tree::{Fields, Range};

pub(super) fn speed_loop(fields: &mut Fields<'_>) -> MotorLaw {
    let speed = read_signal(fields, "speed", Dimension::Speed, true, "Speed asked for.");
    let gain =
        fields.quantity("gain", Dimension::Damping, Range::Positive, "Torque per speed error.");
    let integral_time = fields.quantity_optional(
        "integral_time",
        Dimension::Time,
        Range::Positive,
        "Time in which the integral part doubles the proportional one; absent: no integral.",
    );
    let feed_forward = read_signal_or(
        fields,
        "feed_forward",
        Dimension::Torque,
        0.0,
        "Torque added to the command before its limit.",
    );
    let drive = drive(fields);
    let speed = speed.unwrap_or(Signal::Constant(0.0));
    MotorLaw::SpeedLoop { speed, gain, integral_time, feed_forward, drive }
}

pub(super) fn torque_loop(fields: &mut Fields<'_>) -> MotorLaw {
    let torque = read_signal(
        fields,
        "torque",
        Dimension::Torque,
        true,
        "Torque asked for, positive drives forward.",
    );
    let drive = drive(fields);
    MotorLaw::TorqueLoop { torque: torque.unwrap_or(Signal::Constant(0.0)), drive }
}

/// What limits the torque of a drive, and how it follows its command.
fn drive(fields: &mut Fields<'_>) -> Drive {
    let torque_limit = fields.quantity(
        "torque_limit",
        Dimension::Torque,
        Range::Positive,
        "The command stays within plus and minus this.",
    );
    let base_speed = fields.quantity_optional(
        "base_speed",
        Dimension::Speed,
        Range::Positive,
        "Beyond it the limits fall as base_speed/|speed|: constant power; absent: they do not.",
    );
    let held = fields.quantity_optional(
        "regeneration_limit",
        Dimension::Torque,
        Range::NotNegative,
        "Limit while torque and speed have opposite signs; default `torque_limit`; 0: it cannot brake.",
    );
    let from = fields.quantity_optional(
        "regeneration_from",
        Dimension::Speed,
        Range::Positive,
        "Speed from which `regeneration_limit` holds; straight from `torque_limit` at rest up to it.",
    );
    if held.is_some_and(|held| held > torque_limit) {
        fields.fault("regeneration_limit", "`regeneration_limit` must not exceed `torque_limit`");
    }
    if held.is_some() && from.is_none() {
        fields.miss(
            "regeneration_from",
            "at rest no power flows and the drive gives `torque_limit`; state the speed from which it \
             can brake with `regeneration_limit` only, some 1 to 5 % of the rated speed",
        );
    }
    if held.is_none() && from.is_some() {
        fields.fault("regeneration_from", "it goes with `regeneration_limit`, which is absent");
    }
    let lag = fields.quantity_or(
        "lag",
        Dimension::Time,
        Range::NotNegative,
        0.0,
        "First-order lag of the torque behind the command.",
    );
    let torque_rate = fields.quantity_optional(
        "torque_rate",
        Dimension::TorqueRate,
        Range::Positive,
        "The torque changes no faster than this; needs a `lag`; absent: no such limit.",
    );
    if torque_rate.is_some() && lag == 0.0 {
        fields.fault_hint(
            "torque_rate",
            "`torque_rate` needs a `lag`",
            "the torque moves at this rate while it is more than torque_rate*lag behind the command; \
             a current loop has a lag of some 2 to 10 ms",
        );
    }
    let regeneration = held.zip(from).map(|(held, from)| [held, from]);
    let limits = TorqueLimits { torque_limit, base_speed, regeneration };
    Drive { limits, lag, torque_rate }
}
