//! Rigid gear pairs: `speed_a = ratio * speed_b`.

use crate::quantity::Dimension;
use crate::tree::{Fields, Range};

/// A gear pair as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct GearPair {
    /// Its name.
    pub name: String,
    /// The bodies a and b.
    pub between: [String; 2],
    /// Speed of a over speed of b, negative when they turn against each other.
    pub ratio: f64,
    /// Where its figures come from.
    pub source: Option<String>,
}

impl GearPair {
    /// Reads a gear pair.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        Self {
            name: fields.own_name().to_owned(),
            between: fields.pair("between", "The bodies a and b."),
            ratio: fields.quantity(
                "ratio",
                Dimension::One,
                Range::NotZero,
                "Speed of a over speed of b; negative when they turn against each other.",
            ),
            source: fields.source(),
        }
    }
}
