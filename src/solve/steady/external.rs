//! Torques on the bodies of a train that turns as one, at given speeds.

use crate::component::law::Law;
use crate::component::motor::circuit::CONNECTED;
use crate::component::pair_law::PairLaw;
use crate::equations::holding::Limits;
use crate::equations::machine::Machine;
use crate::equations::mode::FrictionMode;
use crate::equations::pitch::Pitch;
use crate::equations::{Controller, Equations, Friction, Owner, Shape, Target, Term};
use crate::signal::course::Overrides;
use nalgebra::DVector;

/// Evaluates the external torques at one instant.
pub struct External<'a> {
    /// The equations.
    pub equations: &'a Equations,
    /// Instant at which signals are read, s.
    pub time: f64,
    /// Signals taken over.
    pub overrides: &'a Overrides,
}

/// How a controller's command is fixed while a balance is sought.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Command {
    /// By its law; with an integral part it stands at the limit on the side of its error.
    ByLaw,
    /// At this torque, N*m.
    Fixed(f64),
}

impl External<'_> {
    /// Generalised torque on the independent speeds, and the sum of magnitudes at work.
    pub fn torque(&self, speeds: &DVector<f64>, commands: &[Command]) -> (DVector<f64>, f64) {
        let mut sum = DVector::zeros(speeds.len());
        let mut at_work = 0.0;
        let mut apply = |row: &[(usize, f64)], value: f64| {
            let dense = self.equations.model.reduction.dense(row);
            at_work += value.abs() * dense.amax();
            sum.axpy(value, &dense, 1.0);
        };
        let state = self.scaled(speeds);
        for (index, term) in self.equations.terms.iter().enumerate() {
            let Target::Torque(direction) = &term.target else { continue };
            let limits =
                |one: &Controller| one.moving_limits.is_some_and(|two| two.contains(&index));
            if matches!(term.owner, Owner::Magnet(_) | Owner::Shaft(_))
                || self.equations.controllers.iter().any(limits)
            {
                continue;
            }
            let controller = self
                .equations
                .controllers
                .iter()
                .position(|controller| self.drives(controller, index));
            let value = match controller {
                Some(controller) => self.command(controller, speeds, commands[controller]),
                None => self.law(term, &self.with_pitch(term, &state, speeds, commands)),
            };
            apply(direction, value * self.factor(term));
        }
        for damper in &self.equations.dampers {
            let speed = self.equations.model.reduction.dense(&damper.row).dot(speeds);
            apply(&damper.row, -damper.coefficient * speed);
        }
        for friction in &self.equations.frictions {
            apply(&friction.row, self.rubbing(friction, speeds));
        }
        (sum, at_work)
    }

    /// The term that puts a controller's torque on the train.
    fn drives(&self, controller: &Controller, term: usize) -> bool {
        match controller.torque_state {
            None => controller.command == term,
            Some(state) => {
                let term = &self.equations.terms[term];
                term.shape == Shape::Linear
                    && term.owner == Owner::Motor(controller.motor)
                    && term.input.iter().any(|(place, _)| *place == state)
            }
        }
    }

    /// A state in which the blades of a rotor stand as its pitch loop's command has them.
    fn with_pitch(
        &self,
        term: &Term,
        state: &[f64],
        speeds: &DVector<f64>,
        commands: &[Command],
    ) -> Vec<f64> {
        let mut state = state.to_vec();
        let pitches = self.equations.pitches.iter().enumerate();
        for (index, pitch) in pitches.filter(|(_, pitch)| Owner::Load(pitch.load) == term.owner) {
            let index = self.equations.controllers.len() + index;
            let angle = self.command(index, speeds, commands[index]);
            state[pitch.state] = angle / self.equations.scale[pitch.state];
        }
        state
    }

    /// The pitch loop of a command, which stand behind those of the drives.
    pub fn pitch(&self, index: usize) -> Option<&Pitch> {
        self.equations.pitches.get(index.checked_sub(self.equations.controllers.len())?)
    }

    /// Number of commands: of drives, then of pitch loops.
    pub fn commands(&self) -> usize {
        self.equations.controllers.len() + self.equations.pitches.len()
    }

    /// True for a command with an integral part that acts.
    pub fn integrates(&self, index: usize) -> bool {
        let of_drive = self.equations.controllers.get(index);
        of_drive.is_none_or(|one| one.integral.is_some() && self.scale(index) != 0.0)
    }

    /// The torque that a drive's controller asks for, before its scale, or the angle that a pitch
    /// loop asks for.
    pub fn command(&self, index: usize, speeds: &DVector<f64>, command: Command) -> f64 {
        match command {
            Command::Fixed(torque) => torque,
            Command::ByLaw => {
                let error = self.error(index, speeds);
                let [lower, upper] = self.edges(index, speeds);
                let of_drive = self.equations.controllers.get(index);
                if let Some(controller) = of_drive.filter(|one| one.integral.is_none()) {
                    let command = controller.gain * error + self.feed_forward(index);
                    command.max(lower).min(upper)
                } else if error == 0.0 {
                    if of_drive.is_some() { 0.0 } else { lower }
                } else if error > 0.0 {
                    upper
                } else {
                    lower
                }
            }
        }
    }

    /// Speed asked for minus speed (pitch loops: the other way), in the controller's sense, rad/s.
    pub fn error(&self, index: usize, speeds: &DVector<f64>) -> f64 {
        if let Some(pitch) = self.pitch(index) {
            return pitch.error(self.signal(pitch.reference), &self.scaled(speeds));
        }
        let controller = &self.equations.controllers[index];
        let speed = crate::equations::dot(&controller.speed, &self.scaled(speeds));
        controller.reference.map_or(0.0, |slot| self.signal(slot) - speed)
    }

    /// The lower and the upper limit of a command, N*m or rad.
    pub fn edges(&self, index: usize, speeds: &DVector<f64>) -> [f64; 2] {
        if let Some(pitch) = self.pitch(index) {
            return pitch.angles;
        }
        let state = self.scaled(speeds);
        let controller = &self.equations.controllers[index];
        [0, 1].map(|side| controller.edge(self.equations, side, &state))
    }

    /// The torque that is added to a controller's command, N*m.
    pub fn feed_forward(&self, index: usize) -> f64 {
        self.signal(self.equations.controllers[index].feed_forward)
    }

    /// The scale on a controller's torque.
    pub fn scale(&self, index: usize) -> f64 {
        self.equations.controllers[index].scale.map_or(1.0, |slot| self.signal(slot))
    }

    /// Relative speed of a friction element, rad/s.
    pub fn relative(&self, friction: &Friction, speeds: &DVector<f64>) -> f64 {
        self.equations.model.reduction.dense(&friction.row).dot(speeds)
    }

    /// Torque of a friction element along its row while it slides, N*m; none at rest.
    pub fn rubbing(&self, friction: &Friction, speeds: &DVector<f64>) -> f64 {
        let speed = self.relative(friction, speeds);
        if friction.judge(speed) == FrictionMode::Stuck {
            return 0.0;
        }
        -speed.signum() * friction.sliding_torque(speed) * self.slots(&friction.factor.slots)
    }

    /// Breakaway limits of a friction element.
    pub fn breakaway(&self, friction: &Friction) -> Limits {
        friction.breakaway.scaled(self.slots(&friction.factor.slots))
    }

    fn scaled(&self, speeds: &DVector<f64>) -> Vec<f64> {
        let mut state = vec![0.0; self.equations.size];
        for place in 0..self.equations.speeds {
            state[place] = speeds[place] / self.equations.scale[place];
        }
        state
    }

    fn law(&self, term: &Term, state: &[f64]) -> f64 {
        let input = self.input(term, state);
        match &term.shape {
            Shape::Linear => input,
            // The torque of magnets is that of the train's own deformation.
            Shape::Warm(..) => 0.0,
            Shape::Pair(PairLaw::Reciprocating(_), _) => 0.0,
            Shape::Pair(law, second) => law.value(input, crate::equations::dot(second, state)),
            // Of products of states only a machine's torque reaches the train.
            Shape::Products(_) => self.machine(term, input),
            // Torques over an angle count by their mean over a turn, which is zero.
            Shape::Law(Law::Cogging { .. } | Law::Periodic(_) | Law::Magnet(_)) => 0.0,
            Shape::Law(law) => {
                let parameters = crate::equations::parameters_at(
                    term.parameters,
                    &term.by_state,
                    state,
                    |slot| self.signal(slot),
                );
                law.value(input, parameters, law.piece(input, parameters))
            }
        }
    }

    /// Torque of a machine whose fluxes have settled.
    fn machine(&self, term: &Term, speed: f64) -> f64 {
        let machine =
            self.equations.machines.iter().find(|one| Owner::Motor(one.motor) == term.owner);
        machine.map_or(0.0, |machine| {
            let voltage = self.machine_voltage(machine);
            voltage * voltage * machine.circuit.torque(speed)
        })
    }

    /// Share of rated voltage at a machine's terminals; 0 while it is open.
    pub fn machine_voltage(&self, machine: &Machine) -> f64 {
        let connected = self.signal(machine.connected) >= CONNECTED[0];
        if connected { self.signal(machine.voltage) } else { 0.0 }
    }

    fn input(&self, term: &Term, state: &[f64]) -> f64 {
        let signals = term.offsets.iter().map(|(factor, slot)| factor * self.signal(*slot));
        let offset: f64 = signals.sum();
        crate::equations::dot(&term.input, state) + offset
    }

    fn factor(&self, term: &Term) -> f64 {
        self.slots(&term.factor.slots)
    }

    fn slots(&self, slots: &[(crate::signal::course::SlotId, i32)]) -> f64 {
        slots.iter().fold(1.0, |value, &(slot, power)| value * self.signal(slot).powi(power))
    }

    fn signal(&self, slot: crate::signal::course::SlotId) -> f64 {
        self.equations.bank.value(slot, self.time, self.overrides)
    }
}
