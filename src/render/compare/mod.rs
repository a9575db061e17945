//! A comparison of runs as text, JSON, table and page.

mod columns;
mod figures;
mod json;
pub mod page;
mod text;

pub use columns::table;
pub use json::to_json;
pub use text::text;

use crate::analysis::comparison::Comparison;
use crate::render::shown::Shown;
use crate::scenario::Display;

/// Figures that are nearer to each other than this share are told as equal in tables for people.
pub const NOTABLE: f64 = 1e-3;

/// Figures that are nearer than this share are the same but for rounding.
pub const ROUNDING: f64 = 1e-9;

/// Where one of the runs comes from.
#[derive(Clone, Debug, PartialEq)]
pub struct Origin {
    /// What it is called.
    pub name: String,
    /// File or folder as named on the command line.
    pub from: String,
    /// True for a folder of results.
    pub kept: bool,
    /// Values set from outside: path and value as typed.
    pub sets: Vec<(String, String)>,
    /// All requirements met; `None`: none is stated, or one cannot be judged.
    pub met: Option<bool>,
}

/// All that the outputs of a comparison are made of.
#[derive(Clone, Copy, Debug)]
pub struct Side<'a> {
    /// The figures.
    pub comparison: &'a Comparison,
    /// Where each run comes from.
    pub origins: &'a [Origin],
    /// Units for people: those of the first run.
    pub display: &'a Display,
    /// Why some runs have no curves, and other notes.
    pub notes: &'a [String],
    /// The folder of the results as named.
    pub output_folder: &'a str,
    /// The files in it.
    pub files: &'a [String],
}

impl Side<'_> {
    fn shown(&self) -> Shown<'_> {
        Shown::new(self.display)
    }
}
