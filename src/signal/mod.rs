//! Signals: quantities as functions of time, as typed and as evaluated.

pub mod check;
pub mod course;
mod forms;
pub mod gust;
mod kind;
mod overrides;
mod range;
pub mod read;
pub mod sampling;
mod shape;
pub mod table;
pub mod turbulence;

use crate::quantity::Dimension;
use sampling::Sampling;
use table::TableColumns;

/// Reads a table: its path, the file as typed, its columns, what is asked of its rows; the rows in SI.
pub type TableLoader<'a> = dyn FnMut(&str, &str, &TableColumns, &Sampling) -> Vec<[f64; 2]> + 'a;

/// A signal as typed, in SI.
#[derive(Clone, Debug, PartialEq)]
pub enum Signal {
    /// The same value at all times.
    Constant(f64),
    /// The signal of this name in `signals`.
    Named(String),
    /// `from` before `at`, `to` from `at` on.
    Step {
        /// Time of the step, s.
        at: f64,
        /// Value before.
        from: f64,
        /// Value from then on.
        to: f64,
    },
    /// `from` until `start`, straight to `to` at `end`.
    Ramp {
        /// First corner, s.
        start: f64,
        /// Second corner, s.
        end: f64,
        /// Value until the first corner.
        from: f64,
        /// Value from the second corner on.
        to: f64,
    },
    /// `peak` for start <= t < end, else `base`.
    Pulse {
        /// First jump, s.
        start: f64,
        /// Second jump, s.
        end: f64,
        /// Value outside.
        base: f64,
        /// Value inside.
        peak: f64,
    },
    /// Straight lines between `[time, value]`; end values held; two equal times are a jump.
    Points(Vec<[f64; 2]>),
    /// `mean + amplitude sin(2 pi frequency t + phase)`.
    Sine {
        /// Mean value.
        mean: f64,
        /// Amplitude.
        amplitude: f64,
        /// Frequency, Hz.
        frequency: f64,
        /// Phase at time 0, rad.
        phase: f64,
    },
    /// Rows of a CSV file, as points; empty until the file has been read.
    Table {
        /// Path of the file as typed, relative to the scenario.
        file: String,
        /// Which columns, in which units.
        columns: TableColumns,
        /// What is asked of its rows.
        sampling: Sampling,
        /// `[time, value]` in SI.
        rows: Vec<[f64; 2]>,
    },
    /// IEC 61400-1 extreme operating gust, 10.5 s from `start`.
    ExtremeGust {
        /// Start, s.
        start: f64,
        /// Wind speed at the hub outside the gust, m/s.
        hub_wind: f64,
        /// Gust magnitude of the standard, m/s.
        magnitude: f64,
    },
    /// IEC 61400-1 extreme coherent gust: it rises and stays.
    CoherentGust {
        /// Start, s.
        start: f64,
        /// Wind speed at the hub before the gust, m/s.
        hub_wind: f64,
        /// By how much it rises, m/s.
        rise: f64,
        /// In what time, s.
        rise_time: f64,
    },
    /// Turbulent wind at a point by Kaimal's spectrum.
    Turbulence(turbulence::Spectrum),
    /// Sum of signals of one dimension.
    Sum(Vec<Signal>),
    /// Product, at most one member with a dimension.
    Product {
        /// The factors.
        members: Vec<Signal>,
        /// The factor whose own units fix a dimension other than a plain number.
        carrier: Option<usize>,
    },
}

/// A named signal of the file.
#[derive(Clone, Debug, PartialEq)]
pub struct NamedSignal {
    /// Its name.
    pub name: String,
    /// Its dimension where its own values fix one (a bare number may serve as any).
    pub dimension: Option<Dimension>,
    /// Its course.
    pub signal: Signal,
    /// Where its figures come from.
    pub source: Option<String>,
}

impl Signal {
    /// Visits every signal inside this one, this one first, with its path below `path`.
    pub fn visit<'a>(&'a self, path: &str, look: &mut dyn FnMut(&str, &'a Signal)) {
        look(path, self);
        let (members, key) = match self {
            Self::Sum(members) => (members, "sum"),
            Self::Product { members, .. } => (members, "product"),
            _ => return,
        };
        for (index, member) in members.iter().enumerate() {
            member.visit(&format!("{path}.{key}.{index}"), look);
        }
    }

    /// Hands every table inside this signal to `load`, with its path.
    pub fn load_tables(&mut self, path: &str, load: &mut TableLoader<'_>) {
        match self {
            Self::Table { file, columns, sampling, rows } => {
                *rows = load(&format!("{path}.table"), file, columns, sampling);
            }
            Self::Sum(members) => {
                for (index, member) in members.iter_mut().enumerate() {
                    member.load_tables(&format!("{path}.sum.{index}"), load);
                }
            }
            Self::Product { members, .. } => {
                for (index, member) in members.iter_mut().enumerate() {
                    member.load_tables(&format!("{path}.product.{index}"), load);
                }
            }
            _ => {}
        }
    }
}
