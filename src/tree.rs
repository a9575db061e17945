//! The scenario as a plain tree of values, and the cursor that reads it into typed parts.
//!
//! [`Node`] is what was typed, without places: a value is known by its dotted path.
//! [`Fields`] reads one map of it. Each question names the key, what it must be and one
//! line of documentation, so that the same code reads a file, lists the keys it knows
//! (unknown ones are faults) and, in describing mode, yields the reference and the schema.
//! A fault is recorded and a stand-in returned, so that all faults of a file are found.

mod fields;
mod nested;
mod node;
mod shape;
mod values;

pub use fields::Fields;
pub use nested::{Alternative, choose, chosen};
pub use node::Node;
pub use shape::{FieldDescription, Range, Shape};
