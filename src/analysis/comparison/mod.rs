//! What differs between runs: in their inputs, and in what they found.

mod answers;
mod inputs;
mod records;

pub use answers::{Figure, Found};
pub use inputs::InputDifference;

use crate::analysis::records::RecordComparison;
use crate::results::RunResult;
use crate::tree::Node;

/// One of the runs that are compared.
#[derive(Clone, Copy, Debug)]
pub struct Subject<'a> {
    /// What it is called in tables and charts.
    pub name: &'a str,
    /// Its values as given, changes from outside included.
    pub node: &'a Node,
    /// What it found.
    pub result: &'a RunResult,
    /// How far it is from measured records.
    pub records: &'a [RecordComparison],
}

/// Runs side by side; every list of values has one entry a run, in their order.
#[derive(Clone, Debug)]
pub struct Comparison {
    /// Names of the runs.
    pub names: Vec<String>,
    /// Inputs that are not the same everywhere, in the order of the file.
    pub inputs: Vec<InputDifference>,
    /// All figures, those that agree included.
    pub figures: Vec<Figure>,
}

/// Compares runs; the first is what the others are measured against.
pub fn compare(subjects: &[Subject<'_>]) -> Comparison {
    let nodes: Vec<&Node> = subjects.iter().map(|subject| subject.node).collect();
    let results: Vec<&RunResult> = subjects.iter().map(|subject| subject.result).collect();
    let records: Vec<&[RecordComparison]> =
        subjects.iter().map(|subject| subject.records).collect();
    let mut figures = records::figures(&records);
    figures.extend(answers::figures(&results));
    Comparison {
        names: subjects.iter().map(|subject| subject.name.to_owned()).collect(),
        inputs: inputs::differences(&nodes),
        figures,
    }
}

impl Comparison {
    /// Figures that differ by more than a share of their size, or in a word.
    pub fn differing(&self, share: f64) -> impl Iterator<Item = &Figure> {
        self.figures.iter().filter(move |figure| figure.differs(share))
    }
}
