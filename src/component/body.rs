//! Rotating inertias.

use crate::quantity::Dimension;
use crate::tree::{Fields, Range};

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

impl Body {
    /// Reads a body.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        Self {
            name: fields.own_name().to_owned(),
            inertia: fields.quantity(
                "inertia",
                Dimension::Inertia,
                Range::NotNegative,
                "Moment of inertia about the axis; 0 only when rigidly joined to inertia.",
            ),
            speed: fields.quantity_optional(
                "speed",
                Dimension::Speed,
                Range::Any,
                "Speed at the start; without it the body follows those it is joined to, else 0.",
            ),
            source: fields.source(),
        }
    }
}
