//! Steady start (stub to be replaced below).
use crate::equations::Equations;
use crate::equations::mode::Mode;
use crate::signal::course::Overrides;

/// An operating point.
#[derive(Clone, Debug)]
pub struct SteadyPoint {
    /// Scaled state.
    pub state: Vec<f64>,
    /// Mode.
    pub mode: Mode,
}

/// Why there is none.
#[derive(Clone, Debug, PartialEq)]
pub struct SteadyError {
    /// In words.
    pub message: String,
}

/// Finds it.
pub fn find(
    _equations: &Equations,
    _time: f64,
    _overrides: &Overrides,
) -> Result<SteadyPoint, SteadyError> {
    Err(SteadyError { message: String::new() })
}
