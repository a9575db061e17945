//! Clutches that act by themselves: overrunning clutches and torque limiters.
//!
//! ```text
//! s = speed of the first body - speed of the second      mirrored when the clutch is reversed
//! overrunning: locked   s = 0, torque passed on between -drag and slipping_torque
//!              free     s < 0, torque passed on = -drag      the second body runs ahead
//!              slips    s > 0, torque passed on = slipping_torque (where one is given)
//! limiter:     locked   s = 0, |torque passed on| up to breakaway
//!              slips    torque passed on = torque * sign(s)
//! ```
//! Both are dry friction between two bodies, solved as such: locked is a constraint, found and
//! left at located times, and nothing is smoothed. A clutch without `slipping_torque` passes any
//! torque; rollers and sprags have some wind-up of their own, which a shaft beside it can stand for.
//! The laws are those of dry friction (Coulomb); handbook knowledge of machine elements.

use crate::quantity::Dimension;
use crate::tree::{Fields, Range};

/// A clutch as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct Clutch {
    /// Its name.
    pub name: String,
    /// Driving and driven body, or the two of a limiter.
    pub between: [String; 2],
    /// What it does.
    pub kind: ClutchKind,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// What a clutch does.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ClutchKind {
    /// Locks one way, runs free the other way.
    Overrunning {
        /// Locks against the driving body falling behind instead.
        reversed: bool,
        /// Torque at which it slips although locked, N*m; infinite where none is given.
        slipping_torque: f64,
        /// Torque while it runs free, N*m.
        drag: f64,
    },
    /// Slips both ways beyond its torque.
    Limiter {
        /// Torque while it slips, N*m.
        torque: f64,
        /// Torque at which it begins to slip, N*m, never below `torque`.
        breakaway: f64,
    },
}

impl Clutch {
    /// Reads an overrunning clutch.
    pub fn read_overrunning(fields: &mut Fields<'_>) -> Self {
        let between = fields.pair(
            "between",
            "The driving and the driven body: it locks when the first would run faster.",
        );
        let slipping_torque = fields.quantity_optional(
            "slipping_torque",
            Dimension::Torque,
            Range::Positive,
            "Torque at which it slips although locked; when absent it passes any torque.",
        );
        let drag = fields.quantity_or(
            "drag",
            Dimension::Torque,
            Range::NotNegative,
            0.0,
            "Torque while it runs free.",
        );
        let reversed = fields.flag(
            "reversed",
            false,
            "Mirrored: it locks when the first body would run slower, as in trains that turn backwards.",
        );
        if let Some(slips_at) = slipping_torque
            && drag >= slips_at
        {
            fields.fault_hint(
                "drag",
                "`drag` must be below `slipping_torque`",
                "a clutch that holds both ways alike is a torque limiter",
            );
        }
        Self {
            name: fields.own_name().to_owned(),
            between,
            kind: ClutchKind::Overrunning {
                reversed,
                slipping_torque: slipping_torque.unwrap_or(f64::INFINITY),
                drag,
            },
            source: fields.source(),
        }
    }

    /// Reads a torque limiter.
    pub fn read_limiter(fields: &mut Fields<'_>) -> Self {
        let between = fields.pair("between", "The two bodies.");
        let torque =
            fields.quantity("torque", Dimension::Torque, Range::Positive, "Torque while it slips.");
        let breakaway = fields.quantity_optional(
            "breakaway",
            Dimension::Torque,
            Range::Positive,
            "Torque at which it begins to slip; default torque, never below it.",
        );
        if breakaway.is_some_and(|breakaway| breakaway < torque) {
            fields.fault("breakaway", "`breakaway` must not be below `torque`");
        }
        Self {
            name: fields.own_name().to_owned(),
            between,
            kind: ClutchKind::Limiter { torque, breakaway: breakaway.unwrap_or(torque) },
            source: fields.source(),
        }
    }

    /// The section of the file that it stands in.
    pub fn section(&self) -> &'static str {
        match self.kind {
            ClutchKind::Overrunning { .. } => "overrunning_clutches",
            ClutchKind::Limiter { .. } => "torque_limiters",
        }
    }

    /// What it is, in words.
    pub fn label(&self) -> &'static str {
        match self.kind {
            ClutchKind::Overrunning { .. } => "overrunning clutch",
            ClutchKind::Limiter { .. } => "torque limiter",
        }
    }

    /// Torques while it slides with a positive and with a negative speed of the first body
    /// against the second, and up to which it holds against either, N*m.
    pub fn torques(&self) -> ([f64; 2], [f64; 2]) {
        match self.kind {
            ClutchKind::Overrunning { reversed, slipping_torque, drag } => {
                let torques =
                    if reversed { [drag, slipping_torque] } else { [slipping_torque, drag] };
                (torques, torques)
            }
            ClutchKind::Limiter { torque, breakaway } => ([torque; 2], [breakaway; 2]),
        }
    }

    /// True for the way of sliding in which an overrunning clutch runs free; `way` has the sign of
    /// the first body's speed against the second's.
    pub fn runs_free(&self, way: f64) -> bool {
        match self.kind {
            ClutchKind::Overrunning { reversed, .. } => (way < 0.0) != reversed,
            ClutchKind::Limiter { .. } => false,
        }
    }
}
