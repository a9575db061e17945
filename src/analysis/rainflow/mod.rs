//! Rainflow: cycles of any channel over the run, and the range that does the same damage.
//!
//! ```text
//! damage_equivalent = (sum n S^m / N_eq)^(1/m)      m: slope of the life line, N_eq equivalent cycles
//! ```

pub mod count;
mod spec;
mod table;

pub use spec::RainflowSpec;
pub use table::{Bin, Histogram, RangeMean};

use crate::equations::Equations;
use crate::solve::run::{RunError, run as run_train};
use crate::solve::turning::TurningRequest;
use crate::solve::{RunOptions, Wanted};
use count::{Counter, Cycle};
use std::sync::atomic::AtomicBool;

/// What the study found; values in the channel's SI unit.
#[derive(Clone, Debug, PartialEq)]
pub struct RainflowResult {
    /// The channel.
    pub of: String,
    /// Its SI unit.
    pub unit: &'static str,
    /// Cycles in the order in which they were counted.
    pub cycles: Vec<Cycle>,
    /// Number of cycles, halves as halves.
    pub count: f64,
    /// Turning points.
    pub turning_points: u64,
    /// Smallest and largest value.
    pub extremes: [f64; 2],
    /// Slope of the life line.
    pub slope: f64,
    /// Equivalent cycles.
    pub equivalent_cycles: f64,
    /// `sum n S^m`.
    pub damage_sum: f64,
    /// The range that does the same damage in `equivalent_cycles`.
    pub damage_equivalent: f64,
    /// Cycles by range.
    pub histogram: Histogram,
    /// Cycles by range and mean.
    pub range_mean: RangeMean,
    /// Limit on the damage-equivalent range.
    pub limit: Option<f64>,
    /// Whether it is kept.
    pub met: Option<bool>,
}

/// Runs the train and counts.
///
/// # Errors
/// In words: no such channel, no steady start, or a run that the numerics gave up.
pub fn run(
    spec: &RainflowSpec,
    equations: &Equations,
    interrupt: Option<&AtomicBool>,
) -> Result<RainflowResult, String> {
    let channels = &equations.model.channels;
    let channel = channels
        .iter()
        .position(|channel| channel.name == spec.of)
        .ok_or_else(|| format!("no channel is named `{}`", spec.of))?;
    let unit = channels.get(channel).map_or("1", |channel| channel.unit);
    let mut counter = Counter::default();
    let mut cycles = Vec::new();
    let mut turning_points = 0_u64;
    let mut extremes = [f64::INFINITY, f64::NEG_INFINITY];
    let mut told = |_: f64, value: f64| {
        turning_points += 1;
        extremes = [extremes[0].min(value), extremes[1].max(value)];
        counter.take(value, &mut |cycle| cycles.push(cycle));
    };
    let window = [spec.after.unwrap_or(0.0), spec.before.unwrap_or(f64::INFINITY)];
    let request = TurningRequest { channel, window, gate: spec.gate, told: &mut told };
    let options = RunOptions {
        wanted: Wanted::Asked(vec![channel]),
        turning: Some(request),
        interrupt,
        ..RunOptions::default()
    };
    let result = run_train(equations, options).map_err(|error| match error {
        RunError::Steady(error) => format!("the run has no steady start: {}", error.message),
    })?;
    if let Some(failure) = result.failure {
        return Err(failure);
    }
    counter.finish(&mut |cycle| cycles.push(cycle));
    if turning_points == 0 {
        return Err(format!("the window holds no value of `{}`", spec.of));
    }
    Ok(collect(spec, unit, cycles, turning_points, extremes))
}

fn collect(
    spec: &RainflowSpec,
    unit: &'static str,
    cycles: Vec<Cycle>,
    turning_points: u64,
    extremes: [f64; 2],
) -> RainflowResult {
    let damage_sum = damage_sum(&cycles, spec.slope);
    let damage_equivalent = damage_equivalent(&cycles, spec.slope, spec.equivalent_cycles);
    RainflowResult {
        of: spec.of.clone(),
        unit,
        count: cycles.iter().map(|cycle| cycle.count).sum(),
        turning_points,
        extremes,
        slope: spec.slope,
        equivalent_cycles: spec.equivalent_cycles,
        damage_sum,
        damage_equivalent,
        histogram: Histogram::new(&cycles, spec.bins),
        range_mean: RangeMean::new(&cycles, spec.bins, extremes),
        limit: spec.at_most,
        met: spec.at_most.map(|limit| damage_equivalent <= limit),
        cycles,
    }
}

/// `sum n S^m`, in the unit of the range to the power of the slope.
pub fn damage_sum(cycles: &[Cycle], slope: f64) -> f64 {
    cycles.iter().map(|cycle| cycle.count * cycle.range.powf(slope)).sum()
}

/// The range that does the same damage in so many cycles.
pub fn damage_equivalent(cycles: &[Cycle], slope: f64, equivalent_cycles: f64) -> f64 {
    let largest = cycles.iter().map(|cycle| cycle.range).fold(0.0, f64::max);
    if largest == 0.0 {
        return 0.0;
    }
    // Relative to the largest range, so that steep life lines neither overflow nor vanish.
    let sum: f64 =
        cycles.iter().map(|cycle| cycle.count * (cycle.range / largest).powf(slope)).sum();
    largest * (sum / equivalent_cycles).powf(1.0 / slope)
}

#[cfg(test)]
mod tests;
