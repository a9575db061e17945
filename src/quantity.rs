//! Quantities with units: read from text at the border, SI inside.

mod dimension;
mod format;
mod parse;
mod units;

pub use dimension::Dimension;
pub use format::{format_number, format_quantity};
pub use parse::{QuantityFault, parse, parse_any, read, read_any, warn_of_bare_number};
pub use units::{Unit, find_unit, from_unit, to_unit, units};
