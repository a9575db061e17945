//! The balance of a train that can turn in several ways at once.

use super::SteadyError;
use super::balance::{Balance, CLOSED, Search};
use super::external::Command;
use crate::equations::Friction;
use crate::equations::mode::FrictionMode;
use nalgebra::{DMatrix, DVector};

impl Search<'_> {
    /// Several motions: pseudo-time steps that follow the train towards a balance, then Newton.
    pub(super) fn many(&self, given: &DVector<f64>) -> Result<Balance, SteadyError> {
        let count = given.len();
        let mut motion = given.clone();
        let mut commands: Vec<Command> = (0..self.external.commands())
            .map(|index| match self.external.pitch(index) {
                // A little off fine pitch: there the torque answers.
                Some(pitch) => Command::Fixed(0.9 * pitch.angles[0] + 0.1 * pitch.angles[1]),
                None if self.external.integrates(index) => Command::Fixed(0.0),
                None => Command::ByLaw,
            })
            .collect();
        for _ in 0..4 {
            motion = self.newton(motion, &mut commands, count)?;
            let mut changed = false;
            for (index, command) in commands.iter_mut().enumerate() {
                let edges = self.external.edges(index, &self.speeds(&motion));
                let room = 1e-9 * (edges[1] - edges[0]);
                if let Command::Fixed(torque) = *command
                    && (torque < edges[0] - room || torque > edges[1] + room)
                {
                    *command = Command::ByLaw;
                    changed = true;
                }
            }
            if !changed {
                return self.settled_with(&motion, &commands);
            }
        }
        Err(SteadyError {
            message: "no torque balance within the limits of the controllers".to_owned(),
        })
    }

    /// Solves the balance with the commands of integrating controllers as unknowns.
    fn newton(
        &self,
        start: DVector<f64>,
        commands: &mut [Command],
        count: usize,
    ) -> Result<DVector<f64>, SteadyError> {
        let open: Vec<usize> = (0..commands.len())
            .filter(|index| matches!(commands[*index], Command::Fixed(_)))
            .collect();
        // Members that are given at rest and held by friction stay at rest while a balance is sought.
        let held: Vec<(&Friction, DVector<f64>)> = self
            .equations()
            .frictions
            .iter()
            .filter(|friction| {
                let speed = self.external.relative(friction, &self.speeds(&start));
                friction.judge(speed) == FrictionMode::Stuck
                    && self.external.breakaway(friction).largest() > 0.0
            })
            .map(|friction| {
                let dense = self.equations().model.reduction.dense(&friction.row);
                (friction, (dense.transpose() * self.motions).transpose())
            })
            .filter(|(_, row)| row.amax() > 1e-12)
            .collect();
        let total = count + open.len() + held.len();
        let scale = DVector::from_fn(count, |column, _| {
            (0..self.equations().speeds)
                .filter(|place| self.motions[(*place, column)].abs() > 1e-12)
                .map(|place| self.equations().scale[place] / self.motions[(place, column)].abs())
                .fold(f64::INFINITY, f64::min)
        });
        let mut unknown = DVector::zeros(total);
        unknown.rows_mut(0, count).copy_from(&start);
        for (line, index) in open.iter().enumerate() {
            if let Command::Fixed(value) = commands[*index] {
                unknown[count + line] = value;
            }
        }
        let residual = |unknown: &DVector<f64>, commands: &mut [Command]| {
            for (line, index) in open.iter().enumerate() {
                commands[*index] = Command::Fixed(unknown[count + line]);
            }
            let motion = unknown.rows(0, count).into_owned();
            let (mut net, at_work) = self.net(&motion, commands);
            let speeds = self.speeds(&motion);
            for (line, (friction, row)) in held.iter().enumerate() {
                // What holds does not slide as well, however little a trial moves it.
                let slides = self.external.rubbing(friction, &speeds);
                net += row * (unknown[count + open.len() + line] - slides);
            }
            let mut all = DVector::zeros(total);
            all.rows_mut(0, count).copy_from(&net);
            for (line, index) in open.iter().enumerate() {
                all[count + line] = self.external.error(*index, &self.speeds(&motion));
            }
            for (line, (_, row)) in held.iter().enumerate() {
                all[count + open.len() + line] = row.dot(&motion);
            }
            (all, at_work)
        };
        let mut pseudo_step = 1e-3;
        for _ in 0..400 {
            let (now, at_work) = residual(&unknown, commands);
            let size = at_work.max(f64::MIN_POSITIVE);
            if now.rows(0, count).amax() <= CLOSED * size && pseudo_step > 1e3 {
                break;
            }
            let mut slope = DMatrix::zeros(total, total);
            for column in 0..total {
                let pitch = column.checked_sub(count).and_then(|line| open.get(line));
                let width = if column < count {
                    1e-7 * scale[column].min(1e9)
                } else if pitch.is_some_and(|index| self.external.pitch(*index).is_some()) {
                    1e-6
                } else {
                    1e-6 * size
                };
                let mut moved = unknown.clone();
                moved[column] += width;
                let (there, _) = residual(&moved, commands);
                slope.set_column(column, &((there - &now) / width));
            }
            for row in 0..count {
                for column in 0..count {
                    slope[(row, column)] -= self.mass[(row, column)] / pseudo_step;
                }
            }
            let Ok(step) = slope.svd(true, true).solve(&(-&now), 1e-14) else { break };
            unknown += step;
            pseudo_step *= 1.5;
        }
        let (now, at_work) = residual(&unknown, commands);
        let motion = unknown.rows(0, count).into_owned();
        if now.rows(0, count).amax() > 1e-9 * at_work.max(f64::MIN_POSITIVE)
            || !now.iter().all(|v| v.is_finite())
        {
            let worst = now.rows(0, count).icamax();
            return Err(self.missing(now[worst], &motion));
        }
        Ok(motion)
    }
}
