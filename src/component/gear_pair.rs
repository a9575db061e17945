//! Rigid gear pairs: `speed_a = ratio * speed_b`.

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
