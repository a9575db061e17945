//! The point at which a train is linearised: its steady operating point, or a time of its run.

use crate::equations::Equations;
use crate::equations::mode::Mode;
use crate::quantity::Dimension;
use crate::results::{GearState, RunResult};
use crate::signal::course::Overrides;
use crate::solve::run::{RunError, run_to_end};
use crate::solve::{RunOptions, Wanted, steady};
use crate::tree::{Fields, Node, Range, Shape};

/// Where to linearise.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub enum Point {
    /// The stable operating point nearest to the given speeds, with signals as at 0 s.
    #[default]
    Steady,
    /// A time of the run, s.
    Time(f64),
}

impl Point {
    /// Reads `point: steady` or `point: { time: 2 s }`; absent it is steady.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let doc = "steady (default), or { time: ... } for a time of the run.";
        match fields.raw("point", Shape::Free, false, doc) {
            None | Some(Node::Null) => Self::Steady,
            Some(Node::Text(word)) if word == "steady" => Self::Steady,
            Some(node @ Node::Map(_)) => {
                Fields::read(fields.path_of("point"), node, fields.faults(), read_time)
            }
            Some(other) => {
                let typed = match other {
                    Node::Text(text) => format!("`{text}`"),
                    other => other.kind().to_owned(),
                };
                fields.fault_hint(
                    "point",
                    format!("`point` is `steady` or a time of the run, not {typed}"),
                    "for example point: { time: 2 s }",
                );
                Self::Steady
            }
        }
    }

    /// The point in words.
    pub fn words(self) -> String {
        match self {
            Self::Steady => "steady operating point".to_owned(),
            Self::Time(time) => format!("{time} s of the run"),
        }
    }
}

/// The inside of `point: { time: ... }`.
fn read_time(inside: &mut Fields<'_>) -> Point {
    Point::Time(inside.quantity("time", Dimension::Time, Range::NotNegative, "A time of the run."))
}

/// A state of the train with everything that its linearisation needs.
#[derive(Clone, Debug)]
pub struct LinearPoint {
    /// s.
    pub time: f64,
    /// Scaled state.
    pub state: Vec<f64>,
    /// Mode there.
    pub mode: Mode,
    /// Signals taken over by protections.
    pub overrides: Overrides,
    /// What a reader must know.
    pub notes: Vec<String>,
}

/// Finds the point.
///
/// # Errors
/// In words: there is no steady point; the run cannot reach the time; a gear is slipping there.
pub fn find(equations: &Equations, point: Point) -> Result<LinearPoint, String> {
    match point {
        Point::Steady => {
            let overrides = equations.bank.no_overrides();
            let found = steady::find(equations, 0.0, &overrides)
                .map_err(|error| format!("there is no steady point: {}", error.message))?;
            Ok(LinearPoint {
                time: 0.0,
                state: found.state,
                mode: found.mode,
                overrides,
                notes: Vec::new(),
            })
        }
        Point::Time(time) => at_time(equations, time),
    }
}

fn at_time(equations: &Equations, time: f64) -> Result<LinearPoint, String> {
    let duration = equations.model.scenario.duration;
    if time > duration {
        return Err(format!("{time} s lies beyond the run, which ends at {duration} s"));
    }
    let mut shortened = equations.clone();
    // A run of no length is its start; the smallest length keeps the run's own rules.
    shortened.model.scenario.duration = time.max(1e-12 * duration);
    let options = RunOptions { wanted: Wanted::Asked(Vec::new()), ..RunOptions::default() };
    let (result, reached) = run_to_end(&shortened, options).map_err(|error| match error {
        RunError::Steady(error) => format!("the run has no steady start: {}", error.message),
    })?;
    if let Some(failure) = &result.failure {
        return Err(format!("the run does not reach {time} s: {failure}"));
    }
    if result.end_time < time * (1.0 - 1e-9) {
        return Err(format!("a protection ends the run at {} s, before {time} s", result.end_time));
    }
    let notes = refuse_slipping(&result, time)?;
    Ok(LinearPoint {
        time: reached.time,
        state: reached.state,
        mode: reached.mode,
        overrides: reached.overrides,
        notes,
    })
}

/// A slipping gear has no frequency: its stiffness changes sign twice a pole.
fn refuse_slipping(result: &RunResult, time: f64) -> Result<Vec<String>, String> {
    let mut notes = Vec::new();
    for gear in &result.gears {
        let [low, high] = gear.law_peaks;
        let short = (low..=high).contains(&gear.final_load_angle);
        match gear.state_at_end {
            GearState::Slipping => {
                return Err(format!(
                    "`{}` is slipping at {time} s: a slipping gear has no natural frequency",
                    gear.name
                ));
            }
            GearState::Undecided => {
                notes.push(format!(
                    "`{}` has slipped shortly before {time} s and may slip again",
                    gear.name
                ));
            }
            GearState::Synchronous if !short => notes.push(format!(
                "`{}` is past its peak at {time} s: its stiffness is negative there",
                gear.name
            )),
            GearState::Synchronous => {}
        }
    }
    Ok(notes)
}
