//! Estimates: the closed-form figures that a reviewer works out by hand, beside what the run found.

mod compare;
mod figures;
mod march;
pub mod rigid;
pub mod swing;

pub use compare::Comparison;
pub use figures::{GearEstimate, MemberEstimate, Pulse, Variant};

use crate::equations::Equations;
use crate::quantity::Dimension;
use crate::results::RunResult;
use crate::tree::{Fields, Range};

/// The study as typed.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct EstimatesSpec {
    /// Running load as a share of the pull-out; `None`: as the run leaves it.
    pub preload: Option<f64>,
}

impl EstimatesSpec {
    /// Reads the inside of `estimates:`.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let preload = fields.quantity_optional(
            "preload",
            Dimension::One,
            Range::Between(0.0, 0.999_999),
            "Running load of each gear as a share of its pull-out; default what the run ends with.",
        );
        Self { preload }
    }
}

/// What the study found.
#[derive(Clone, Debug, PartialEq)]
pub struct EstimatesResult {
    /// Magnetic gears, then couplings, in file order.
    pub gears: Vec<GearEstimate>,
    /// What a reader must know.
    pub notes: Vec<String>,
}

/// Works the figures out; `found` is the run of the same scenario with all channels.
pub fn run(spec: &EstimatesSpec, equations: &Equations, found: &RunResult) -> EstimatesResult {
    let mut notes = Vec::new();
    if !found.completed {
        notes.push("the run was not completed: what it found is left out".to_owned());
    }
    let found = found.completed.then_some(found);
    let gears = (0..equations.model.magnets.len())
        .map(|magnet| figures::gear(spec, equations, magnet, found))
        .collect();
    EstimatesResult { gears, notes }
}

#[cfg(test)]
mod tests;
