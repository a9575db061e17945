//! What studies found: plain data with units, for tables, charts and reports.

use super::outcome::{Layout, Outcome};
use super::spec::{Axis, Spread, Varied};
use super::work::{Cost, Row};
use crate::analysis::estimates::EstimatesResult;
use crate::analysis::modes::ModesResult;
use crate::analysis::operating_point::OperatingPoint;
use crate::analysis::rainflow::RainflowResult;
use crate::results::RequirementResult;

/// A finished study.
#[derive(Clone, Debug)]
pub struct StudyResult {
    /// Its name.
    pub name: String,
    /// Its answer.
    pub answer: Answer,
    /// Numbers that were varied, in the order of the rows' values.
    pub varied: Vec<Varied>,
    /// What stands in each row.
    pub layout: Layout,
    /// Every run in the order of the study.
    pub rows: Vec<Row>,
    /// What the runs cost.
    pub cost: Cost,
}

/// The answer of a study.
#[derive(Clone, Debug, PartialEq)]
pub enum Answer {
    /// How far a number can go.
    Margin(MarginAnswer),
    /// Verdicts of many cases.
    LoadCases(LoadCasesAnswer),
    /// A map over one or two numbers.
    Sweep(SweepAnswer),
    /// What scatter does.
    MonteCarlo(MonteCarloAnswer),
    /// Natural frequencies and what may excite them.
    Modes(ModesResult),
    /// Cycles of a channel.
    Rainflow(RainflowResult),
    /// Figures by hand beside the run.
    Estimates(EstimatesResult),
    /// The operating point.
    Steady(SteadyAnswer),
}

impl Answer {
    /// Whether a limit stated in the study is met; `None` when it states none.
    ///
    /// `Some(None)`: it states one, and whether it is met cannot be told.
    pub fn verdict(&self) -> Option<Option<bool>> {
        match self {
            Self::Margin(answer) => answer.at_least.map(|_| answer.met),
            Self::LoadCases(answer) => Some(Some(answer.met)),
            Self::Sweep(_) | Self::Estimates(_) | Self::Steady(_) => None,
            Self::MonteCarlo(answer) => answer.slipping_at_most.map(|_| answer.met),
            Self::Modes(answer) => answer.separation.map(|_| answer.met),
            Self::Rainflow(answer) => answer.limit.map(|_| answer.met),
        }
    }
}

/// How far a number can go before a requirement fails.
#[derive(Clone, Debug, PartialEq)]
pub struct MarginAnswer {
    /// The number.
    pub varied: Varied,
    /// The range that was scanned, from and to.
    pub range: [f64; 2],
    /// Width of the last bracket.
    pub accuracy: f64,
    /// The last value that meets all requirements before the first failure; the end of the range
    /// when none fails, `None` when the first one fails.
    pub value: Option<f64>,
    /// The value of the first run that fails, as close to `value` as the accuracy asks for.
    pub first_bad: Option<f64>,
    /// Row of the last good run.
    pub last_good_row: Option<usize>,
    /// Row of the first bad run.
    pub first_bad_row: Option<usize>,
    /// Whether a run in the range fails.
    pub reached: bool,
    /// Values of the scan at which the outcome changes again after the first failure.
    pub flips: Vec<f64>,
    /// The requirement that fails first at `first_bad`.
    pub first_to_fail: Option<String>,
    /// Why the run at `first_bad` came to nothing, if it did.
    pub failure: Option<String>,
    /// Whether the design itself meets all requirements.
    pub design_met: Option<bool>,
    /// Distance from the design to `value` over the design.
    pub margin_share: Option<f64>,
    /// Least margin asked for.
    pub at_least: Option<f64>,
    /// Whether the margin is as large as asked for; `None`: not asked, or it cannot be told.
    pub met: Option<bool>,
    /// The bracket at a tenth of the tolerance.
    pub sharper: Option<Sharper>,
}

/// What a tenth of the tolerance made of the bracket.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sharper {
    /// What was taken a tenth of: `tolerance`, or `step` with rk4.
    pub setting: &'static str,
    /// True when the same value is the last good one and the same the first bad one.
    pub held: bool,
    /// The last good value at that tolerance, where it could be found within the range.
    pub value: Option<f64>,
}

/// Verdicts of many cases.
#[derive(Clone, Debug, PartialEq)]
pub struct LoadCasesAnswer {
    /// The cases in the order of the file; their runs stand in the same order.
    pub cases: Vec<CaseAnswer>,
    /// Whether all of them meet all their requirements.
    pub met: bool,
}

/// One case.
#[derive(Clone, Debug, PartialEq)]
pub struct CaseAnswer {
    /// Its name.
    pub name: String,
    /// What it is about.
    pub about: Option<String>,
    /// What is changed, as typed: path and value.
    pub changes: Vec<(String, String)>,
    /// Whether all its requirements are met; `None` when the run came to nothing.
    pub met: Option<bool>,
    /// Its verdicts, with words and limits of its own.
    pub requirements: Vec<RequirementResult>,
    /// Largest share of a requirement's limit that was used, and which requirement's.
    pub use_of_limit: Option<(f64, String)>,
}

impl CaseAnswer {
    /// The requirement to tell of: one that is not met, else the one that comes closest to its
    /// limit, else the first.
    pub fn told(&self) -> Option<&RequirementResult> {
        let failing = self.requirements.iter().find(|one| one.met != Some(true));
        let closest = self
            .use_of_limit
            .as_ref()
            .and_then(|(_, name)| self.requirements.iter().find(|one| one.name == *name));
        failing.or(closest).or(self.requirements.first())
    }
}

/// A map over one or two numbers.
#[derive(Clone, Debug, PartialEq)]
pub struct SweepAnswer {
    /// The numbers with their values; the second runs faster through the rows.
    pub axes: Vec<Axis>,
    /// Runs that meet all requirements; `None` without requirements.
    pub met: Option<usize>,
    /// Runs in which a gear or coupling slips.
    pub slipped: usize,
    /// Runs that came to nothing.
    pub failed: usize,
}

/// What scatter does.
#[derive(Clone, Debug, PartialEq)]
pub struct MonteCarloAnswer {
    /// The numbers that scatter.
    pub spreads: Vec<Spread>,
    /// Number of draws.
    pub draws: usize,
    /// Seed.
    pub seed: u64,
    /// Draws in which a gear or coupling slips.
    pub slipped: usize,
    /// Draws that slipped and are in step again at the end.
    pub came_back: usize,
    /// Draws that came to nothing; nothing is known of them.
    pub failed: usize,
    /// Share of the others that slip.
    pub share: Option<f64>,
    /// Its interval of 95 %.
    pub interval: Option<[f64; 2]>,
    /// Draws that do not meet all requirements, those that came to nothing included.
    pub not_met: usize,
    /// Spread of each requirement's value, and of the largest share of a pull-out torque.
    pub quantiles: Vec<Quantiles>,
    /// How strongly each number goes with each of these: same order, numbers in file order.
    pub sensitivity: Vec<Sensitivity>,
    /// How many draws halve the interval.
    pub draws_for_half: Option<u64>,
    /// How many draws tell the share from the limit.
    pub draws_to_tell: Option<u64>,
    /// Largest share of draws that may slip.
    pub slipping_at_most: Option<f64>,
    /// Whether the share is below that; `None`: not asked, or the draws cannot tell.
    pub met: Option<bool>,
}

/// Operating points.
#[derive(Clone, Debug, PartialEq)]
pub struct SteadyAnswer {
    /// The number that is varied, if one is.
    pub varied: Option<Varied>,
    /// One point a value; one alone when nothing is varied.
    pub points: Vec<SteadyPoint>,
}

/// One operating point.
#[derive(Clone, Debug, PartialEq)]
pub struct SteadyPoint {
    /// The value of the varied number, SI.
    pub value: Option<f64>,
    /// The point, or why there is none.
    pub point: Result<OperatingPoint, String>,
}

/// Shares at which quantiles are given.
pub const SHARES: [f64; 7] = [0.01, 0.05, 0.25, 0.5, 0.75, 0.95, 0.99];

/// How a value scatters.
#[derive(Clone, Debug, PartialEq)]
pub struct Quantiles {
    /// The requirement, or `GEAR.peak_pull_out_share`.
    pub of: String,
    /// Unit of the values.
    pub unit: &'static str,
    /// Draws with a value.
    pub count: usize,
    /// Draws in which the value was never reached; they count as infinitely large.
    pub never: usize,
    /// Smallest value.
    pub min: Option<f64>,
    /// Largest value.
    pub max: Option<f64>,
    /// Values at [`SHARES`]; infinite where it was never reached.
    pub values: Vec<f64>,
}

/// Rank correlations of one value with the numbers that scatter.
#[derive(Clone, Debug, PartialEq)]
pub struct Sensitivity {
    /// The requirement, `GEAR.peak_pull_out_share`, or `slips`.
    pub of: String,
    /// Path and rank correlation, strongest first; `None` where nothing varies.
    pub correlations: Vec<(String, Option<f64>)>,
}

impl StudyResult {
    /// Outcomes of all rows.
    pub fn outcomes(&self) -> impl Iterator<Item = &Outcome> {
        self.rows.iter().map(|row| &row.outcome)
    }
}
