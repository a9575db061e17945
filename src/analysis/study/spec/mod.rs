//! Studies as typed: one file a kind, each read with all its faults before anything runs.

mod axis;
mod channels;
mod context;
mod load_cases;
mod margin;
mod monte_carlo;
mod spread;
mod steady;
mod sweep;
mod varied;

pub use axis::{Axis, steps as axis_steps};
pub use context::{Context, without_studies};
pub use load_cases::{Case, LoadCases};
pub use margin::Margin;
pub use monte_carlo::MonteCarlo;
pub use spread::{CUT, Distribution, Spread};
pub use steady::Steady;
pub use sweep::Sweep;
pub use varied::Varied;

use crate::analysis::estimates::EstimatesSpec;
use crate::analysis::modes::ModesSpec;
use crate::analysis::rainflow::RainflowSpec;
use crate::component::channel::Known;
use crate::tree::{FieldDescription, Fields, Node, Shape, chosen};

/// A study of the file.
#[derive(Clone, Debug, PartialEq)]
pub struct Study {
    /// Its name.
    pub name: String,
    /// What it asks.
    pub kind: Kind,
}

/// What a study asks.
#[derive(Clone, Debug, PartialEq)]
pub enum Kind {
    /// How far a number can go.
    Margin(Margin),
    /// One train, many cases.
    LoadCases(LoadCases),
    /// All values of one or two numbers.
    Sweep(Sweep),
    /// Numbers drawn at random.
    MonteCarlo(MonteCarlo),
    /// Natural frequencies, damping, shapes and what may excite them.
    Modes(ModesSpec),
    /// Cycles of a channel.
    Rainflow(RainflowSpec),
    /// Figures by hand beside the run.
    Estimates(EstimatesSpec),
    /// The operating point.
    Steady(Steady),
}

impl Kind {
    /// What the label of a run is called in the table; `None`: runs have none.
    pub fn label(&self) -> Option<&'static str> {
        match self {
            Self::Margin(_) => Some("part"),
            Self::LoadCases(_) => Some("case"),
            _ => None,
        }
    }

    /// True when the answer stands on many runs, each a row of a table.
    pub fn has_runs(&self) -> bool {
        matches!(self, Self::Margin(_) | Self::LoadCases(_) | Self::Sweep(_) | Self::MonteCarlo(_))
    }
}

/// One kind of study: its key, what it is for, how its inside is read.
struct Entry {
    key: &'static str,
    doc: &'static str,
    read: fn(&mut Fields<'_>, Option<&Context<'_>>) -> Option<Kind>,
}

/// Every kind of study.
const KINDS: [Entry; 8] = [
    Entry {
        key: "margin",
        doc: "How far a number of the file can go before a requirement fails.",
        read: |fields, context| Margin::read(fields, context).map(Kind::Margin),
    },
    Entry {
        key: "load_cases",
        doc: "One train and many cases, each with changes and requirements of its own.",
        read: |fields, context| LoadCases::read(fields, context).map(Kind::LoadCases),
    },
    Entry {
        key: "sweep",
        doc: "Runs over all values of one or two numbers of the file.",
        read: |fields, context| Sweep::read(fields, context).map(Kind::Sweep),
    },
    Entry {
        key: "monte_carlo",
        doc: "Many runs with numbers of the file drawn at random.",
        read: |fields, context| MonteCarlo::read(fields, context).map(Kind::MonteCarlo),
    },
    Entry {
        key: "modes",
        doc: "Natural frequencies, damping and shapes of the linearised train, and what may excite them.",
        read: |fields, context| {
            let spec = ModesSpec::read(fields, known(context));
            let _ = fields.source();
            Some(Kind::Modes(spec))
        },
    },
    Entry {
        key: "rainflow",
        doc: "Cycles of a channel over the run, and the range that does the same damage.",
        read: |fields, context| {
            let spec = RainflowSpec::read(fields, known(context));
            let _ = fields.source();
            Some(Kind::Rainflow(spec))
        },
    },
    Entry {
        key: "estimates",
        doc: "Closed-form figures for each magnetic gear beside what the run found.",
        read: |fields, _| {
            let spec = EstimatesSpec::read(fields);
            let _ = fields.source();
            Some(Kind::Estimates(spec))
        },
    },
    Entry {
        key: "steady",
        doc: "The operating point as a table, over a range of one number if asked.",
        read: |fields, context| Steady::read(fields, context).map(Kind::Steady),
    },
];

/// The channels of the train; a file with other faults may lack some for that reason.
fn known<'a>(context: Option<&Context<'a>>) -> Known<'a> {
    Known {
        channels: context.map_or(&[][..], Context::channels),
        complete: context.is_some_and(Context::is_sound),
    }
}

/// Reads the section of studies; what is at fault is told and left out.
pub fn read(section: &Node, context: &Context<'_>) -> Vec<Study> {
    let Node::Map(entries) = section else { return Vec::new() };
    let known = KINDS.map(|entry| entry.key);
    let mut studies = Vec::with_capacity(entries.len());
    for (name, node) in entries {
        let path = format!("studies.{name}");
        let Some((key, inside)) = chosen(&path, node, context.faults, &known) else { continue };
        let Some(entry) = KINDS.iter().find(|entry| entry.key == key) else { continue };
        let kind = Fields::read(format!("{path}.{key}"), inside, context.faults, |fields| {
            (entry.read)(fields, Some(context))
        });
        if let Some(kind) = kind {
            studies.push(Study { name: name.clone(), kind });
        }
    }
    studies
}

/// What a study may be: each kind with its keys, for the reference and the schema.
pub fn describe() -> Vec<FieldDescription> {
    KINDS
        .iter()
        .map(|entry| FieldDescription {
            key: entry.key,
            shape: Shape::Group(Fields::describe(|fields| (entry.read)(fields, None))),
            required: true,
            default: None,
            doc: entry.doc,
        })
        .collect()
}
