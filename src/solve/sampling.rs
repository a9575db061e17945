//! A step looked at in several places at once.

use super::dense::DenseStep;
use super::gears::GearCrossing;
use crate::equations::frame::{Counters, Evaluator, Frame};

/// Values at one place of a step.
#[derive(Clone, Debug, Default)]
pub struct Sample {
    /// Share of the step.
    pub share: f64,
    /// Time, s.
    pub time: f64,
    /// Scaled state.
    pub state: Vec<f64>,
    /// Laws and wanted channels.
    pub frame: Frame,
}

/// A step with its evaluator, for values anywhere in it.
pub struct StepView<'a> {
    /// The continuous step.
    pub step: &'a DenseStep,
    /// Laws and channels.
    pub evaluator: Evaluator<'a>,
    /// Counts at the start of the step.
    pub counters: &'a Counters,
    /// Slips within the step in order of time.
    pub crossings: Vec<GearCrossing>,
    /// Scale of each independent speed.
    pub scale: &'a [f64],
}

impl StepView<'_> {
    /// Counts and angle sums at a share of the step.
    pub fn counters_at(&self, share: f64) -> Counters {
        let mut counters = self.counters.clone();
        for crossing in
            self.crossings.iter().filter(|crossing| crossing.is_slip && crossing.share <= share)
        {
            counters.slips[crossing.magnet] += 1;
            counters.net_slips[crossing.magnet] += crossing.direction;
        }
        let mut sums = Vec::new();
        self.step.sums(share, &mut sums);
        for (place, sum) in sums.iter().enumerate() {
            counters.angles[place] = sum * self.scale[place];
        }
        counters
    }

    /// All values at a share of the step; `wanted` channels only.
    pub fn sample(&self, share: f64, wanted: Option<&[usize]>, sample: &mut Sample) {
        sample.share = share;
        sample.time = self.step.time(share);
        self.step.state(share, &mut sample.state);
        let counters = self.counters_at(share);
        let state = std::mem::take(&mut sample.state);
        self.evaluator.evaluate(sample.time, &state, &counters, wanted, &mut sample.frame);
        sample.state = state;
    }

    /// One channel's value at a share of the step.
    pub fn channel(&self, channel: usize, share: f64, scratch: &mut Sample) -> f64 {
        self.sample(share, Some(&[channel]), scratch);
        scratch.frame.channels[channel]
    }
}
