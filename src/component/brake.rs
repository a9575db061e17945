//! Brakes: friction pressed by a signal.

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
