//! Brakes: friction pressed by a signal.

use crate::quantity::Dimension;
use crate::signal::read::read_signal;
use crate::tree::{Fields, Range};

use crate::signal::Signal;

/// A brake as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct Brake {
    /// Its name.
    pub name: String,
    /// The body it holds.
    pub body: String,
    /// Against which body; `None` is ground.
    pub against: Option<String>,
    /// Sliding torque when fully applied, N*m.
    pub torque: f64,
    /// Breakaway torque when fully applied, N*m, never below `torque`.
    pub breakaway: f64,
    /// 0 to 1.
    pub applied: Signal,
    /// Where its figures come from.
    pub source: Option<String>,
}

impl Brake {
    /// Reads a brake.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let body = fields.name("body", "The body it holds.");
        let against = fields.name_optional("against", "The other body; ground when absent.");
        let torque = fields.quantity(
            "torque",
            Dimension::Torque,
            Range::NotNegative,
            "Sliding torque when fully applied.",
        );
        let breakaway = fields.quantity_optional(
            "breakaway",
            Dimension::Torque,
            Range::NotNegative,
            "Torque that breaks it away when fully applied; default torque, never below it.",
        );
        if breakaway.is_some_and(|breakaway| breakaway < torque) {
            fields.fault("breakaway", "`breakaway` must not be below `torque`");
        }
        let applied =
            read_signal(fields, "applied", Dimension::One, true, "How far it is pressed, 0 to 1.");
        Self {
            name: fields.own_name().to_owned(),
            body,
            against: against.filter(|name| name != "ground"),
            torque,
            breakaway: breakaway.unwrap_or(torque),
            applied: applied.unwrap_or(Signal::Constant(f64::NAN)),
            source: fields.source(),
        }
    }
}
