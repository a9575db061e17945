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
    counters: Counters,
    sums: Vec<f64>,
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
    /// Counts and angle sums at a share of the step, written over those given.
    pub fn counters_at(&self, share: f64, counters: &mut Counters, sums: &mut Vec<f64>) {
        counters.wells.clone_from(&self.counters.wells);
        counters.slips.clone_from(&self.counters.slips);
        counters.net_slips.clone_from(&self.counters.net_slips);
        for crossing in
            self.crossings.iter().filter(|crossing| crossing.is_slip && crossing.share <= share)
        {
            counters.slips[crossing.magnet] += 1;
            counters.net_slips[crossing.magnet] += crossing.direction;
        }
        self.step.sums(share, sums);
        counters.angles.clear();
        counters.angles.extend(sums.iter().zip(self.scale).map(|(sum, scale)| sum * scale));
    }

    /// All values at a share of the step; `wanted` channels only.
    pub fn sample(&self, share: f64, wanted: Option<&[usize]>, sample: &mut Sample) {
        sample.share = share;
        sample.time = self.step.time(share);
        self.step.state(share, &mut sample.state);
        self.counters_at(share, &mut sample.counters, &mut sample.sums);
        let Sample { time, state, frame, counters, .. } = sample;
        self.evaluator.evaluate(*time, state, counters, wanted, frame);
    }

    /// All values at the end of a step in which nothing slips, from the values of its laws there.
    pub fn sample_end(&self, known: &[f64], wanted: &[usize], sample: &mut Sample) {
        sample.share = 1.0;
        sample.time = self.step.time(1.0);
        sample.state.clone_from(&self.step.last);
        self.counters_at(1.0, &mut sample.counters, &mut sample.sums);
        let Sample { time, state, frame, counters, .. } = sample;
        self.evaluator.evaluate_known(*time, state, known, counters, Some(wanted), frame);
    }

    /// One channel's value at a share of the step.
    pub fn channel(&self, channel: usize, share: f64, scratch: &mut Sample) -> f64 {
        self.sample(share, Some(&[channel]), scratch);
        scratch.frame.channels[channel]
    }
}
