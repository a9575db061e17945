//! Followers at their limited rate, and integrals at the end of their way.

use super::run::Run;
use crate::equations::assembly::assemble;
use crate::equations::frame::{Evaluator, Frame};

impl Run<'_, '_> {
    /// A follower has come to its limited rate, or has left it.
    pub(super) fn turn_slewing(&mut self, index: usize) {
        let now = self.mode.slewing[index];
        self.mode.slewing[index] = 0;
        if now != 0 {
            return;
        }
        let equations = self.equations;
        let assembly = assemble(equations, &self.mode, self.time, f64::INFINITY, &self.overrides);
        let evaluator = Evaluator { equations, assembly: &assembly, overrides: &self.overrides };
        let mut frame = Frame::default();
        evaluator.laws(self.time, &self.state, &mut frame);
        let distance =
            equations.followers[index].distance(&self.state, &equations.scale, &frame.laws);
        self.mode.slewing[index] = if distance >= 0.0 { 1 } else { -1 };
    }

    /// The integral of a pitch loop has come to the end of its way, or is drawn back from it.
    pub(super) fn turn_pitch(&mut self, index: usize) {
        let equations = self.equations;
        let pitch = &equations.pitches[index];
        if std::mem::take(&mut self.mode.pitch_held[index]) != 0 {
            return;
        }
        let place = pitch.integral_state;
        let value = self.state[place] * equations.scale[place];
        let upper = pitch.angles[1] - value < value - pitch.angles[0];
        self.state[place] = pitch.angles[usize::from(upper)] / equations.scale[place];
        self.mode.pitch_held[index] = if upper { 1 } else { -1 };
    }
}
