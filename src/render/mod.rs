//! From results to files and text. Only this floor writes files.

pub mod chart;
pub mod charts;
pub mod events;
pub mod folder;
pub mod json;
mod leftovers;
pub mod number;
pub mod series;
pub mod text;
