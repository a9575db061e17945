//! The speeds at which a train that turns as one is in balance.

use super::SteadyError;
use super::external::{Command, External};
use crate::equations::Equations;
use crate::equations::holding::{Limits, hold};
use crate::equations::mode::FrictionMode;
use crate::signal::course::Overrides;
use nalgebra::{DMatrix, DVector};

/// Torque that still counts as balanced, relative to the torques at work.
pub(super) const CLOSED: f64 = 1e-11;

/// Points of the scan over speed on each side of the given one.
const SCAN: usize = 3000;

/// Angles looked at for the pitch that closes a balance.
const PITCH_SCAN: u32 = 720;

/// Torques and speeds of a balanced train.
#[derive(Clone, Debug)]
pub struct Balance {
    /// Independent speeds, rad/s.
    pub speeds: DVector<f64>,
    /// Generalised torque on the independent speeds from outside, holding friction included, N*m.
    pub torque: DVector<f64>,
    /// Sum of the magnitudes of the torques at work, N*m.
    pub at_work: f64,
    /// Command of each drive's controller, N*m, then of each pitch loop, rad.
    pub command: Vec<f64>,
    /// Holding torque of each friction element at rest.
    pub at_rest: Vec<Option<f64>>,
}

/// A search for a balance.
pub(super) struct Search<'a> {
    pub(super) external: External<'a>,
    pub(super) motions: &'a DMatrix<f64>,
    pub(super) mass: DMatrix<f64>,
}

impl Balance {
    /// The balance nearest to the given speeds.
    pub fn find(
        equations: &Equations,
        motions: &DMatrix<f64>,
        start: &DVector<f64>,
        time: f64,
        overrides: &Overrides,
    ) -> Result<Self, SteadyError> {
        let external = External { equations, time, overrides };
        let mass = motions.transpose() * &equations.model.reduction.mass * motions;
        let search = Search { external, motions, mass };
        let given = if motions.ncols() == 0 {
            DVector::zeros(0)
        } else {
            motions.clone().svd(true, true).solve(start, 1e-12).map_err(|_| SteadyError {
                message: "the given speeds cannot be taken apart".to_owned(),
            })?
        };
        match motions.ncols() {
            0 => search.settled(&given),
            1 => search.one(given[0]),
            _ => search.many(&given),
        }
    }
}

impl Search<'_> {
    pub(super) fn equations(&self) -> &Equations {
        self.external.equations
    }

    pub(super) fn speeds(&self, motion: &DVector<f64>) -> DVector<f64> {
        if self.motions.ncols() == 0 {
            DVector::zeros(self.equations().speeds)
        } else {
            self.motions * motion
        }
    }

    fn by_law(&self) -> Vec<Command> {
        vec![Command::ByLaw; self.external.commands()]
    }

    /// Net torque along each motion, and the sum of magnitudes at work.
    pub(super) fn net(&self, motion: &DVector<f64>, commands: &[Command]) -> (DVector<f64>, f64) {
        let (torque, at_work) = self.external.torque(&self.speeds(motion), commands);
        (self.motions.transpose() * torque, at_work)
    }

    /// One motion: every torque is a function of one speed, so the axis is searched outwards.
    fn one(&self, given: f64) -> Result<Balance, SteadyError> {
        let at = |value: f64| DVector::from_element(1, value);
        let commands = self.by_law();
        let net = |value: f64| self.net(&at(value), &commands);
        let knots = self.knots();
        let typical = (0..self.equations().speeds)
            .filter(|place| self.motions[(*place, 0)] != 0.0)
            .map(|place| self.equations().scale[place] / self.motions[(place, 0)].abs())
            .fold(given.abs(), f64::max);
        // Neutral everywhere: any speed is an operating point.
        let (here, at_work) = net(given);
        let step = 1e-4 * typical;
        let flat = |value: f64| net(value).0[0].abs() <= CLOSED * at_work;
        if flat(given) && flat(given + step) && flat(given - step) {
            return self.settled(&at(given));
        }
        let mut grid: Vec<f64> = (0..=2 * SCAN)
            .map(|index| given + 3.0 * typical * (index as f64 / SCAN as f64 - 1.0))
            .chain((0..40).flat_map(|index| {
                let near = typical * 10.0_f64.powf(-f64::from(index) / 8.0);
                [given - near, given + near]
            }))
            .collect();
        grid.push(given);
        grid.retain(|value| knots.iter().all(|knot| (value - knot).abs() > 1e-9 * typical));
        grid.extend(&knots);
        grid.sort_by(f64::total_cmp);
        grid.dedup();
        let mut found: Vec<f64> = Vec::new();
        let mut unstable: Option<f64> = None;
        let side = 1e-9 * typical;
        for pair in grid.windows(2) {
            let low = if knots.contains(&pair[0]) { pair[0] + side } else { pair[0] };
            let high = if knots.contains(&pair[1]) { pair[1] - side } else { pair[1] };
            let (left, right) = (net(low).0[0], net(high).0[0]);
            if left > 0.0 && right <= 0.0 || left == 0.0 && right < 0.0 {
                found.push(crate::solve::locate::root(low, high, |value| net(value).0[0], 0.0));
            } else if left < 0.0 && right > 0.0 {
                unstable = Some(0.5 * (low + high));
            }
        }
        for &knot in &knots {
            if self.jump_holds(knot, side) {
                found.push(knot);
            }
        }
        let nearest =
            found.into_iter().min_by(|a, b| (a - given).abs().total_cmp(&(b - given).abs()));
        match nearest {
            Some(value) => self.settled(&at(value)),
            None if unstable.is_some() => Err(SteadyError {
                message: format!(
                    "unstable: the only balance, near {}, is one from which the speed runs away",
                    self.speed_text(unstable.unwrap_or(0.0))
                ),
            }),
            None => Err(self.missing(here[0], &at(given))),
        }
    }

    /// Speeds at which a torque jumps: rest, and the speeds that controllers hold.
    fn knots(&self) -> Vec<f64> {
        let mut knots = Vec::new();
        if !self.equations().frictions.is_empty() {
            knots.push(0.0);
        }
        for index in 0..self.external.commands() {
            if self.external.integrates(index) {
                let zero = self.external.error(index, &DVector::zeros(self.equations().speeds));
                let one = self.external.error(index, &self.speeds(&DVector::from_element(1, 1.0)));
                if one != zero {
                    knots.push(zero / (zero - one));
                }
            }
        }
        knots.sort_by(f64::total_cmp);
        knots.dedup();
        knots
    }

    /// True when the elements that jump at a knot can close the balance there.
    fn jump_holds(&self, knot: f64, side: f64) -> bool {
        let at = |value: f64| DVector::from_element(1, value);
        if knot == 0.0 && !self.equations().frictions.is_empty() {
            return self.settled(&at(0.0)).is_ok();
        }
        let commands = self.by_law();
        let left = self.net(&at(knot - side), &commands).0[0];
        let right = self.net(&at(knot + side), &commands).0[0];
        left >= 0.0 && right <= 0.0
    }

    fn settled(&self, motion: &DVector<f64>) -> Result<Balance, SteadyError> {
        self.settled_with(motion, &self.by_law())
    }

    /// Completes a balance: what controllers and resting friction must carry to close it.
    pub(super) fn settled_with(
        &self,
        motion: &DVector<f64>,
        commands: &[Command],
    ) -> Result<Balance, SteadyError> {
        let equations = self.equations();
        let speeds = self.speeds(motion);
        let mut commands = commands.to_vec();
        let holding_speed: Vec<usize> = (0..commands.len())
            .filter(|index| {
                let size = match equations.controllers.get(*index) {
                    Some(one) => equations.terms[one.command].input_size / one.gain,
                    None => 0.0,
                };
                let integrates =
                    equations.controllers.get(*index).is_none_or(|one| one.integral.is_some());
                integrates
                    && commands[*index] == Command::ByLaw
                    && self.external.error(*index, &speeds).abs() <= 1e-8 * size.max(speeds.amax())
            })
            .collect();
        for index in &holding_speed {
            let lower = self.external.pitch(*index).map_or(0.0, |pitch| pitch.angles[0]);
            commands[*index] = Command::Fixed(lower);
        }
        let (mut torque, mut at_work) = self.external.torque(&speeds, &commands);
        // A controller that holds its speed carries what is missing, up to its limit.
        let turns = self.motions.ncols() > 0;
        if let ([index], true) = (holding_speed.as_slice(), turns)
            && self.external.pitch(*index).is_some()
        {
            commands[*index] = Command::Fixed(self.pitch_for(*index, &speeds, &commands));
            (torque, at_work) = self.external.torque(&speeds, &commands);
        } else if let ([index], true) = (holding_speed.as_slice(), turns) {
            commands[*index] = Command::Fixed(1.0);
            let (with_one, _) = self.external.torque(&speeds, &commands);
            let unit = self.motions.column(0).dot(&(&with_one - &torque));
            let missing = self.motions.column(0).dot(&torque);
            let [lower, upper] = self.external.edges(*index, &speeds);
            let needed = if unit == 0.0 { 0.0 } else { -missing / unit };
            commands[*index] = Command::Fixed(needed.max(lower).min(upper));
            (torque, at_work) = self.external.torque(&speeds, &commands);
        }
        let at_rest = self.hold_at_rest(&speeds, &mut torque, &mut at_work)?;
        let left = self.motions.transpose() * &torque;
        if !left.is_empty()
            && left.amax() > 1e-8 * at_work.max(f64::MIN_POSITIVE) * self.motions.amax()
        {
            return Err(self.missing(left[left.icamax()], motion));
        }
        let command = (0..commands.len())
            .map(|index| self.external.command(index, &speeds, commands[index]))
            .collect();
        Ok(Balance { speeds, torque, at_work, command, at_rest })
    }

    /// The pitch at which a rotor closes the balance at its speed: the first on the way from fine
    /// pitch where its torque falls below what is needed.
    fn pitch_for(&self, index: usize, speeds: &DVector<f64>, commands: &[Command]) -> f64 {
        let [lowest, highest] = self.external.edges(index, speeds);
        let mut commands = commands.to_vec();
        let motion = self.motions.column(0);
        // The rotor drives in the sense in which its loop counts the speed.
        let there = self.speeds(&DVector::from_element(1, 1.0));
        let none = DVector::zeros(there.len());
        let sense =
            (self.external.error(index, &there) - self.external.error(index, &none)).signum();
        let mut net = |angle: f64| {
            commands[index] = Command::Fixed(angle);
            sense * motion.dot(&self.external.torque(speeds, &commands).0)
        };
        let step = (highest - lowest) / f64::from(PITCH_SCAN);
        let mut below = lowest;
        if net(lowest) <= 0.0 {
            return lowest;
        }
        for place in 1..=PITCH_SCAN {
            let above = lowest + step * f64::from(place);
            if net(above) <= 0.0 {
                return crate::solve::locate::root(below, above, net, 0.0);
            }
            below = above;
        }
        highest
    }

    /// Friction at rest carries the balance in proportion to its breakaway, as far as it suffices.
    fn hold_at_rest(
        &self,
        speeds: &DVector<f64>,
        torque: &mut DVector<f64>,
        at_work: &mut f64,
    ) -> Result<Vec<Option<f64>>, SteadyError> {
        let equations = self.equations();
        let resting: Vec<usize> = (0..equations.frictions.len())
            .filter(|index| {
                let friction = &equations.frictions[*index];
                friction.judge(self.external.relative(friction, speeds)) == FrictionMode::Stuck
            })
            .collect();
        let mut at_rest = vec![None; equations.frictions.len()];
        if resting.is_empty() {
            return Ok(at_rest);
        }
        let dense: Vec<DVector<f64>> = resting
            .iter()
            .map(|index| equations.model.reduction.dense(&equations.frictions[*index].row))
            .collect();
        for index in &resting {
            at_rest[*index] = Some(0.0);
        }
        if self.motions.ncols() == 0 {
            return Ok(at_rest);
        }
        let inverse = self
            .mass
            .clone()
            .try_inverse()
            .unwrap_or_else(|| DMatrix::identity(self.mass.nrows(), self.mass.nrows()));
        let rows = DMatrix::from_fn(resting.len(), self.motions.ncols(), |line, column| {
            dense[line].dot(&self.motions.column(column))
        });
        let compliance = &rows * &inverse * rows.transpose();
        let drive = &rows * &inverse * (self.motions.transpose() * &*torque);
        let limits: Vec<Limits> = resting
            .iter()
            .map(|index| self.external.breakaway(&equations.frictions[*index]))
            .collect();
        let size = *at_work * inverse.amax() * rows.amax();
        let drive: Vec<f64> = drive
            .iter()
            .map(|value| if value.abs() <= 1e-12 * size { 0.0 } else { *value })
            .collect();
        let holding = hold(&compliance, &drive, &limits);
        if !holding.holds {
            let line = holding.weakest.unwrap_or(0);
            let friction = &equations.frictions[resting[line]];
            return Err(SteadyError {
                message: format!(
                    "no torque balance: at rest `{}` would have to hold {:.6} N*m, its breakaway is {:.6} N*m",
                    friction.name,
                    holding.torque[line],
                    limits[line].of(holding.torque[line])
                ),
            });
        }
        for (line, index) in resting.iter().enumerate() {
            at_rest[*index] = Some(holding.torque[line]);
            torque.axpy(holding.torque[line], &dense[line], 1.0);
            *at_work += holding.torque[line].abs();
        }
        Ok(at_rest)
    }

    /// The error that names the member at which torque is missing.
    pub(super) fn missing(&self, net: f64, motion: &DVector<f64>) -> SteadyError {
        let equations = self.equations();
        let torque = self.external.torque(&self.speeds(motion), &self.by_law()).0;
        let place = torque.icamax();
        let share = if self.motions.ncols() > 0 { self.motions[(place, 0)] } else { 1.0 };
        let body = equations.model.reduction.independent[place];
        let at = if share.abs() > 1e-12 { net / share } else { net };
        SteadyError {
            message: format!(
                "no torque balance: {:.6} N*m are left over at `{}` near the given speeds, and no speed closes it",
                at, equations.model.scenario.bodies[body].name
            ),
        }
    }

    fn speed_text(&self, value: f64) -> String {
        let equations = self.equations();
        let speeds = self.speeds(&DVector::from_element(1, value));
        let body = equations.model.reduction.independent[0];
        format!("{:.6} rad/s of `{}`", speeds[0], equations.model.scenario.bodies[body].name)
    }
}
