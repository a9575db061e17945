//! From results to files and text. Only this floor writes files.

pub mod chart;
mod chart_signals;
pub mod charts;
pub mod compare;
pub mod events;
pub mod folder;
mod in_place;
pub mod json;
pub mod kept;
mod leftovers;
mod lock;
pub mod measured;
pub mod number;
pub mod pictures;
pub mod poles;
pub mod report;
pub mod schema;
pub mod series;
pub mod shown;
pub mod story;
pub mod study;
pub mod table;
pub mod text;
pub mod train;
