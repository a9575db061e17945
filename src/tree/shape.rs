//! What a key holds, as the reading code describes it: for the reference and the schema.

use crate::quantity::{self, Dimension};

/// The range a quantity must lie in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Range {
    /// Any finite number.
    Any,
    /// Above zero.
    Positive,
    /// Zero or above.
    NotNegative,
    /// Anything but zero.
    NotZero,
    /// From the first to the second, both included.
    Between(f64, f64),
}

impl Range {
    /// What is wrong with a value, if it lies outside.
    pub(super) fn fault(self, value: f64, dimension: Dimension) -> Option<String> {
        let ok = match self {
            Self::Any => true,
            Self::Positive => value > 0.0,
            Self::NotNegative => value >= 0.0,
            Self::NotZero => value != 0.0,
            Self::Between(low, high) => (low..=high).contains(&value),
        };
        (!ok).then(|| match self {
            Self::Positive => "must be above zero".to_owned(),
            Self::NotNegative => "must not be negative".to_owned(),
            Self::NotZero => "must not be zero".to_owned(),
            Self::Between(low, high) => {
                let number = |value| quantity::format_number(value, 6);
                let unit = match dimension.si_unit() {
                    "1" => String::new(),
                    unit => format!(" {unit}"),
                };
                format!("must lie between {} and {}{unit}", number(low), number(high))
            }
            Self::Any => String::new(),
        })
    }
}

/// What a key holds, for the reference and the schema.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// A quantity of a dimension within a range.
    Quantity(Dimension, Range),
    /// A whole number from the first to the second.
    Whole(i64, i64),
    /// Free text.
    Text,
    /// A name of a body or another thing of the file.
    Name,
    /// `true` or `false`.
    Flag,
    /// One of these words.
    Word(Vec<&'static str>),
    /// A signal of a dimension.
    Signal(Dimension),
    /// A list of quantities, one dimension a column, one row an entry.
    Rows(Vec<Dimension>),
    /// A list of names.
    Names(usize),
    /// A nested map.
    Group(Vec<FieldDescription>),
    /// A list of nested maps.
    List(Vec<FieldDescription>),
    /// A map from names of the user's to nested maps: a section of the file.
    Section(Vec<FieldDescription>),
    /// A map from dotted paths of the file to nested maps.
    Paths(Vec<FieldDescription>),
    /// A one-key map: exactly one of these.
    Choice(Vec<FieldDescription>),
    /// A quantity of a dimension within a range, or a nested map it is worked out from.
    QuantityOrGroup(Dimension, Range, Vec<FieldDescription>),
    /// A map from names of the user's to signals.
    Signals,
    /// A quantity of the dimension of the channel that `of` names.
    OfChannel,
    /// Any value: read elsewhere.
    Free,
}

/// One key of a map, as the reading code knows it.
#[derive(Clone, Debug, PartialEq)]
pub struct FieldDescription {
    /// The key.
    pub key: &'static str,
    /// What it holds.
    pub shape: Shape,
    /// Whether it must be there.
    pub required: bool,
    /// What an absent number stands for, SI.
    pub default: Option<f64>,
    /// One line of documentation.
    pub doc: &'static str,
}
