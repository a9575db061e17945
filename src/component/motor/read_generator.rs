//! How a generator with a square law is written.

use super::MotorLaw;
use super::optimal_power::{GeneratorFigures, Rated};
use crate::quantity::{Dimension, format_number};
use crate::tree::{Fields, Range};

/// Slip of the transition where none is stated: that of the reference turbine of 5 MW.
const TRANSITION_SLIP: f64 = 0.1;

pub(super) fn optimal_power(fields: &mut Fields<'_>) -> MotorLaw {
    let coefficient = fields.quantity(
        "coefficient",
        Dimension::TorquePerSpeedSquared,
        Range::Positive,
        "Braking torque per speed squared.",
    );
    let torque_limit = fields.quantity_optional(
        "torque_limit",
        Dimension::Torque,
        Range::Positive,
        "The braking torque stays below this at any speed; or a rated region instead.",
    );
    let cut_in = fields.group_optional(
        "cut_in",
        "Speeds between which the torque comes in, straight from nothing to the square law.",
        |inside| {
            let mut speed = |key, doc| inside.quantity(key, Dimension::Speed, Range::Positive, doc);
            let from = speed("from", "No torque up to this speed.");
            let to = speed("to", "The square law from this speed on.");
            if from >= to {
                inside.fault("to", "`to` must lie above `from`");
            }
            [from, to]
        },
    );
    let rated = rated(fields);
    match (&torque_limit, &rated) {
        (Some(_), Some(_)) => fields.fault(
            "torque_limit",
            "either `torque_limit` or a rated region (`rated_speed`) is stated, not both",
        ),
        (None, None) => fields.miss("torque_limit", "or `rated_speed` with `rated_power`"),
        _ => {}
    }
    let figures = GeneratorFigures { coefficient, torque_limit, cut_in, rated };
    check_order(fields, &figures);
    MotorLaw::OptimalPower { figures }
}

/// The rated region, when any of its keys stands there.
fn rated(fields: &mut Fields<'_>) -> Option<Rated> {
    let speed = fields.quantity_optional(
        "rated_speed",
        Dimension::Speed,
        Range::Positive,
        "Speed from which the rated power or torque is held.",
    );
    let power = fields.quantity_optional(
        "rated_power",
        Dimension::Power,
        Range::Positive,
        "Power at the shaft at `rated_speed`; or `rated_torque` instead.",
    );
    let torque = fields.quantity_optional(
        "rated_torque",
        Dimension::Torque,
        Range::Positive,
        "Torque at `rated_speed`, instead of `rated_power`.",
    );
    let transition_slip = fields.quantity_or(
        "transition_slip",
        Dimension::One,
        Range::Positive,
        TRANSITION_SLIP,
        "The line from the square law to the rated torque starts at rated_speed/(1 + this) with no torque.",
    );
    let above = fields.one_of(
        "above_rated",
        &["constant_power", "constant_torque"],
        false,
        "What is held beyond `rated_speed`.",
    );
    let Some(speed) = speed else {
        let keys = ["rated_power", "rated_torque", "transition_slip", "above_rated"];
        if let Some(key) = keys.into_iter().find(|key| fields.has(key)) {
            fields.fault(key, format!("`{key}` goes with `rated_speed`, which is absent"));
        }
        return None;
    };
    let torque = match (power, torque) {
        (Some(power), None) => power / speed,
        (None, Some(torque)) => torque,
        (Some(_), Some(_)) => {
            fields.fault(
                "rated_torque",
                "either `rated_power` or `rated_torque` is stated, not both",
            );
            f64::NAN
        }
        (None, None) => {
            fields.miss("rated_power", "or `rated_torque` in its place");
            f64::NAN
        }
    };
    Some(Rated { speed, torque, transition_slip, constant_power: above == "constant_power" })
}

/// Each region must begin where the one before can meet it.
fn check_order(fields: &mut Fields<'_>, figures: &GeneratorFigures) {
    if let Some(rated) = &figures.rated
        && rated.torque.is_finite()
        && rated.speed.is_finite()
    {
        let square = figures.coefficient * rated.speed * rated.speed;
        if square >= rated.torque {
            fields.fault_hint(
                "rated_speed",
                format!(
                    "the square law comes to {} N*m at the rated speed, more than the rated torque of {} N*m",
                    format_number(square, 6),
                    format_number(rated.torque, 6)
                ),
                "a lower `rated_speed`, a smaller `coefficient`, or `torque_limit` in place of the rated region",
            );
            return;
        }
    }
    let ends = figures.square_law_ends();
    if let Some([_, to]) = figures.cut_in
        && to >= ends
    {
        fields.fault(
            "cut_in.to",
            format!(
                "the square law must begin below {} rad/s, where it ends",
                format_number(ends, 5)
            ),
        );
    }
}
