//! Rows of the series from the continuous solution.

use super::dense::DenseStep;
use super::observer::Observer;
use super::sampling::{Sample, StepView};
use crate::equations::frame::Evaluator;

impl Observer<'_> {
    /// Time of the next row, s; rows stand at whole multiples of the output step.
    pub fn next_row_time(&self) -> f64 {
        if self.rows.is_none() { f64::INFINITY } else { self.next_row as f64 * self.output_step }
    }

    /// Rows up to an instant that is not part of a step (the very start of a run's last instant).
    pub fn final_row(&mut self, evaluator: &Evaluator<'_>, time: f64, state: &[f64]) {
        let Some(rows) = &mut self.rows else { return };
        let mut scratch = std::mem::take(&mut self.scratch);
        evaluator.evaluate(time, state, &self.counters, None, &mut scratch.frame);
        rows.row(time, &scratch.frame.channels);
        self.scratch = scratch;
    }

    /// Takes the rows of a step in which nothing else can happen.
    pub fn rows_only(&mut self, evaluator: Evaluator<'_>, step: &DenseStep) {
        let scale = std::mem::take(&mut self.speed_scale);
        let counters = std::mem::take(&mut self.counters);
        let view =
            StepView { step, evaluator, counters: &counters, crossings: Vec::new(), scale: &scale };
        let mut scratch = std::mem::take(&mut self.scratch);
        self.rows_in(&view, &mut scratch);
        view.counters_at(1.0, &mut self.counters, &mut self.sums);
        self.speed_scale = scale;
        self.scratch = scratch;
    }

    pub(super) fn rows_in(&mut self, view: &StepView<'_>, scratch: &mut Sample) {
        let end = view.step.start + view.step.length;
        while self.rows.is_some() {
            let time = self.next_row as f64 * self.output_step;
            // The end itself belongs to the next segment (samples at a jump are from the right) or to the final row.
            if time >= end || time >= self.duration {
                break;
            }
            let share = ((time - view.step.start) / view.step.length).clamp(0.0, 1.0);
            view.sample(share, None, scratch);
            if let Some(rows) = &mut self.rows {
                rows.row(time, &scratch.frame.channels);
            }
            self.next_row += 1;
        }
    }
}
