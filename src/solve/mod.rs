//! The run in time: segments, located events, one observer that streams.

pub mod audit;
mod brief;
pub mod calm;
pub mod conditions;
pub mod dense;
pub mod extremes;
mod flat;
mod following;
mod gear_warnings;
pub mod gears;
pub mod guards;
pub mod integrate;
pub mod limits;
pub mod locate;
pub mod observer;
pub mod outcome;
pub mod rest;
pub mod rhs;
mod rows;
pub mod run;
mod run_events;
pub mod sampling;
mod spells;
pub mod steady;
pub mod step_cap;
pub mod tableau;
pub mod traces;
mod tracking;
pub mod turning;
pub mod watcher;
mod watcher_steps;
mod window_steps;
pub mod windows;

use std::sync::atomic::AtomicBool;

/// Takes the rows of the time series as they are made.
pub trait RowSink {
    /// One row: time, then the value of each channel in file order, SI.
    fn row(&mut self, time: f64, values: &[f64]);
}

/// Which channels are followed for extremes.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Wanted {
    /// Every channel of the train.
    All,
    /// Only those that requirements and protections ask for, and these.
    Asked(Vec<usize>),
}

/// What a run does beside integrating.
pub struct RunOptions<'a> {
    /// Where the rows of the time series go.
    pub rows: Option<&'a mut dyn RowSink>,
    /// Channels followed for extremes.
    pub wanted: Wanted,
    /// Traces for charts.
    pub traces: Option<TraceRequest>,
    /// Set from outside to end the run early.
    pub interrupt: Option<&'a AtomicBool>,
    /// Told the time reached, now and then.
    pub progress: Option<&'a mut dyn FnMut(f64)>,
    /// Overrides the scenario's tolerance.
    pub tolerance: Option<f64>,
    /// Told the turning points of one channel.
    pub turning: Option<turning::TurningRequest<'a>>,
}

impl Default for RunOptions<'_> {
    fn default() -> Self {
        Self {
            rows: None,
            wanted: Wanted::All,
            traces: None,
            interrupt: None,
            progress: None,
            tolerance: None,
            turning: None,
        }
    }
}

/// Which channels are traced over which time.
#[derive(Clone, Debug, PartialEq)]
pub struct TraceRequest {
    /// Start of the window, s.
    pub start: f64,
    /// End of the window, s.
    pub end: f64,
    /// Number of pixel columns.
    pub columns: usize,
    /// Channels by place.
    pub channels: Vec<usize>,
    /// Also the paths of load angle and slip speed.
    pub swings: bool,
}
