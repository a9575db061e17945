//! Rotating inertias.

/// A body as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct Body {
    /// Its name.
    pub name: String,
    /// Moment of inertia about the axis, kg*m2; zero only when rigidly joined to inertia.
    pub inertia: f64,
    /// Speed at the start, rad/s; `None` follows the bodies it is joined to.
    pub speed: Option<f64>,
    /// Where its figures come from.
    pub source: Option<String>,
}
