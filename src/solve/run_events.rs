//! What a run does when the equations change, or when it cannot go on.

use super::guards::Guard;
use super::rest;
use super::rhs::Rhs;
use super::run::Run;
use super::step_cap;
use crate::equations::assembly::Assembly;
use crate::equations::energy;
use crate::equations::frame::Evaluator;
use crate::equations::mode::{self, Contact, FrictionMode};
use crate::equations::{Owner, Shape};
use crate::results::{Event, EventKind};
use crate::scenario::Start;
use std::f64::consts::{PI, TAU};

/// Segments after which a run must have come forward by [`BURST_SHARE`] of its duration.
const BURST: u32 = 20_000;

/// See [`BURST`].
const BURST_SHARE: f64 = 1e-6;

impl Run<'_, '_> {
    /// The next time at which the run must stop by itself.
    pub(super) fn next_stop(&self, duration: f64) -> f64 {
        let kink = self.equations.bank.next_kink(self.time, &self.overrides);
        let due = self.conditions.next_time(self.time);
        let borders = self.observer.windows.iter().flat_map(super::windows::Window::borders);
        let mut end = duration;
        let breach = self.breach.as_ref().map(|breach| breach.time);
        for time in kink.into_iter().chain(due).chain(borders).chain(breach) {
            // Two stops closer than rounding are one.
            if time > self.time * (1.0 + 1e-14) + 1e-300 && time < end {
                end = time;
            }
        }
        end
    }

    /// Brings phases and angles near their wells; whole turns are counted apart.
    pub(super) fn wrap_phases(&mut self) {
        for (index, &place) in self.equations.phase_state.iter().enumerate() {
            let scale = self.equations.scale[place];
            let wells = ((self.state[place] * scale - PI) / TAU).ceil();
            if wells != 0.0 {
                self.state[place] -= TAU * wells / scale;
                let count = &mut self.observer.counters.wells[index];
                *count = count.saturating_add(wells as i64);
            }
        }
        for (place, _) in &self.equations.angle_states {
            let scale = self.equations.scale[*place];
            self.state[*place] -= TAU * (self.state[*place] * scale / TAU).round() / scale;
        }
    }

    /// Where a signal or a pole has carried a law over several pieces at once, they count as one.
    fn catch_up(&mut self, term: usize) {
        for machine in &self.equations.machines {
            machine.open(&self.mode, &mut self.state);
        }
        // Behind the terms stand the frictions, whose curves follow no signal.
        let Some(term_of) = self.equations.terms.get(term) else { return };
        let Shape::Law(law) = &term_of.shape else { return };
        if law.piece_follows_signals() {
            let input =
                mode::input(self.equations, term_of, self.time, &self.state, &self.overrides);
            let parameters =
                mode::parameters(self.equations, term_of, self.time, &self.state, &self.overrides);
            let piece = law.piece(input, parameters);
            if piece.abs_diff(self.mode.pieces[term]) > 1 {
                self.mode.pieces[term] = piece;
            }
        }
    }

    /// Changes the mode after a guard has tripped.
    pub(super) fn apply(&mut self, guard: Guard, end: f64) {
        self.work.events += 1;
        self.changed = true;
        if !self.tripped.contains(&guard) {
            self.tripped.push(guard);
        }
        let equations = self.equations;
        match guard {
            Guard::Lower(term) => {
                if self.slides_at_limit(term, end) {
                    return;
                }
                self.mode.pieces[term] -= 1;
                self.enter_piece(term, end);
            }
            Guard::Upper(term) => {
                if self.slides_at_limit(term, end) {
                    return;
                }
                self.mode.pieces[term] += 1;
                self.enter_piece(term, end);
            }
            Guard::Slide(_) | Guard::Hold => {
                let tripped = guard == Guard::Hold;
                rest::resolve(
                    equations,
                    &mut self.mode,
                    self.time,
                    end,
                    &mut self.state,
                    &self.overrides,
                    tripped,
                    Some(&mut self.observer.events),
                );
            }
            Guard::Open(shaft) => {
                // What the flank still holds is not given back.
                self.observer.energy.lost += energy::elastic(equations, shaft, &self.state);
                self.mode.contacts[shaft] = Contact::Gap;
                self.contact_event(shaft, EventKind::Gap);
            }
            Guard::Close(shaft) => {
                self.observer.energy.lost -= energy::elastic(equations, shaft, &self.state);
                let place = equations.twist_state[shaft];
                let twist = place.map_or(0.0, |place| self.state[place]);
                self.mode.contacts[shaft] =
                    if twist >= 0.0 { Contact::Forward } else { Contact::Backward };
                self.contact_event(shaft, EventKind::Contact);
            }
            Guard::Windup(index) => self.mode.held[index] = !self.mode.held[index],
            Guard::Track(index) => self.leave_limit(index, end),
            Guard::Slew(index) => self.turn_slewing(index),
            Guard::PitchEnd(index) => self.turn_pitch(index),
            Guard::Condition(_) | Guard::ConditionLost(_) | Guard::Slip(..) => {}
        }
    }

    /// Settles what follows from another piece of a law.
    fn enter_piece(&mut self, term: usize, end: f64) {
        self.catch_up(term);
        self.mode.meet_limits(self.equations, term, &self.state);
        self.mode.judge_controllers(self.equations, self.time, &self.state, &self.overrides);
        self.slides_at_limit(term, end);
    }

    /// True when changes follow each other ever closer: that gets nowhere, as changes at one instant do.
    pub(super) fn goes_nowhere(&self, burst: &mut (u32, f64), duration: f64) -> bool {
        burst.0 += 1;
        if burst.0 < BURST {
            return false;
        }
        let came = self.time - burst.1;
        *burst = (0, self.time);
        came <= BURST_SHARE * duration
    }

    pub(super) fn contact_event(&mut self, shaft: usize, kind: EventKind) {
        let name = self.equations.model.scenario.shafts[shaft].name.clone();
        let text = match kind {
            EventKind::Contact => format!("the free play of `{name}` closes"),
            _ => format!("the free play of `{name}` opens"),
        };
        let value = self.equations.twist_state[shaft]
            .map_or(0.0, |place| self.state[place] * self.equations.scale[place]);
        self.observer.events.push(Event {
            time: self.time,
            kind,
            of: name,
            value,
            unit: "rad",
            text,
        });
    }

    pub(super) fn warn_of_jolt(&mut self, assembly: &Assembly) {
        if self.equations.model.scenario.start == Start::Steady {
            return;
        }
        let evaluator =
            Evaluator { equations: self.equations, assembly, overrides: &self.overrides };
        let rhs = Rhs::new(evaluator);
        let mut rates = vec![0.0; self.equations.size];
        rhs.system(0.0, &self.state, &mut rates);
        // Time in which the first accelerations would bring a body to its working speed.
        let fastest =
            rates[..self.equations.speeds].iter().fold(0.0_f64, |a, rate| a.max(rate.abs()));
        if fastest * self.equations.model.scenario.duration > 1e-3 {
            self.warnings.push((
                "start".to_owned(),
                "begins with a jolt: at 0 s the train is not in balance (`start: steady` begins at an operating point)"
                    .to_owned(),
            ));
        }
    }

    pub(super) fn give_up_chatter(&mut self) {
        let mut names: Vec<String> = Vec::new();
        for guard in &self.tripped {
            for name in self.guard_names(*guard) {
                if !names.contains(&name) {
                    names.push(name);
                }
            }
        }
        let dry = self.tripped.iter().any(|guard| matches!(guard, Guard::Slide(_) | Guard::Hold));
        let advice = if dry {
            "give the elements different limits, or a shaft between them"
        } else {
            "let the law rise gradually there instead of jumping"
        };
        self.failure = Some(format!(
            "the equations change without end at {} s, back and forth at {}; {advice}",
            self.time,
            names.join(" and ")
        ));
    }

    /// What a guard watches, in words.
    fn guard_names(&self, guard: Guard) -> Vec<String> {
        let equations = self.equations;
        let scenario = &equations.model.scenario;
        let law = |place: usize| match equations.terms.get(place).map(|term| term.owner) {
            Some(Owner::Motor(motor)) => scenario.motors[motor].name.clone(),
            Some(Owner::Load(load)) => scenario.loads[load].name.clone(),
            Some(Owner::Brake(brake)) => scenario.brakes[brake].name.clone(),
            Some(Owner::Shaft(shaft)) => scenario.shafts[shaft].name.clone(),
            Some(Owner::FluidCoupling(place)) => scenario.fluid_couplings[place].name.clone(),
            Some(Owner::GearPair(pair)) => scenario.gear_pairs[pair].name.clone(),
            Some(Owner::Clutch(clutch)) => scenario.clutches[clutch].name.clone(),
            Some(Owner::Magnet(magnet)) => equations.model.magnets[magnet].name.clone(),
            None => equations
                .frictions
                .get(place - equations.terms.len())
                .map_or_else(String::new, |friction| friction.name.clone()),
        };
        match guard {
            Guard::Lower(place) | Guard::Upper(place) => {
                vec![format!("a corner or limit of `{}`", law(place))]
            }
            Guard::Slide(index) => {
                vec![format!("the friction of `{}`", equations.frictions[index].name)]
            }
            Guard::Hold => equations
                .frictions
                .iter()
                .zip(&self.mode.frictions)
                .filter(|(_, mode)| **mode != FrictionMode::Absent)
                .map(|(friction, _)| format!("the friction of `{}`", friction.name))
                .collect(),
            Guard::Open(shaft) | Guard::Close(shaft) => {
                vec![format!("the free play of `{}`", scenario.shafts[shaft].name)]
            }
            Guard::Windup(index) | Guard::Track(index) => {
                vec![format!(
                    "the controller of `{}`",
                    scenario.motors[equations.controllers[index].motor].name
                )]
            }
            Guard::PitchEnd(index) => {
                let load = &scenario.loads[equations.pitches[index].load];
                vec![format!("the pitch loop of `{}`", load.name)]
            }
            Guard::Slew(index) => match equations.followers[index].owner {
                Owner::Motor(motor) => {
                    vec![format!("the ramp limit of `{}`", scenario.motors[motor].name)]
                }
                Owner::Load(load) => {
                    vec![format!("the rate limit of `{}`", scenario.loads[load].name)]
                }
                _ => Vec::new(),
            },
            Guard::Condition(_) | Guard::ConditionLost(_) | Guard::Slip(..) => Vec::new(),
        }
    }

    pub(super) fn give_up(&mut self, time: f64, fault: Option<(f64, usize)>) {
        self.failure = Some(match fault {
            Some((at, place)) => format!(
                "the rate of {} is not a number at {at} s; a law or a signal leaves its range there",
                self.state_name(place)
            ),
            None => format!(
                "the step became too small at {time} s; a larger tolerance, `max_step`, or less stiffness may help"
            ),
        });
    }

    pub(super) fn state_name(&self, place: usize) -> String {
        let scenario = &self.equations.model.scenario;
        if let Some(body) = self.equations.model.reduction.independent.get(place) {
            return format!("the speed of `{}`", scenario.bodies[*body].name);
        }
        if let Some(shaft) =
            self.equations.twist_state.iter().position(|state| *state == Some(place))
        {
            return format!("the twist of `{}`", scenario.shafts[shaft].name);
        }
        if let Some(magnet) = self.equations.phase_state.iter().position(|state| *state == place) {
            return format!("the phase of `{}`", self.equations.model.magnets[magnet].name);
        }
        let machine =
            self.equations.machines.iter().find(|machine| machine.states.contains(&place));
        if let Some(machine) = machine {
            let motor = &scenario.motors[machine.motor];
            return format!("current and flux of `{}`", motor.name);
        }
        if let Some(node) = self.equations.thermal.iter().find(|node| node.place == place) {
            let magnet = &self.equations.model.magnets[node.magnet];
            return format!("the temperature of the magnets of `{}`", magnet.name);
        }
        "a controller".to_owned()
    }

    /// The largest step of a segment: stability, signals, the file's own limit, rest.
    pub(super) fn step_cap(&mut self, evaluator: &Evaluator<'_>, end: f64) -> f64 {
        let solver = self.equations.model.scenario.solver;
        let (time, state) = (self.time, &self.state);
        let stable = *self
            .caps
            .entry(self.mode.clone())
            .or_insert_with(|| step_cap::stable_step(evaluator, solver.method, time, state));
        if self.work.steps == 0 {
            let warning = step_cap::warning(self.equations, stable);
            self.warnings.extend(warning.filter(|one| !self.warnings.contains(one)));
        }
        let mut cap = stable.min(end - self.time);
        if let Some(limit) = self.equations.bank.step_cap(self.time, end, &self.overrides) {
            cap = cap.min(limit);
        }
        if let Some(limit) = solver.max_step {
            cap = cap.min(limit);
        }
        if self.any_at_rest() {
            cap = cap.min(self.equations.model.scenario.output_step);
        }
        // Laws over an angle: a sixth of a period at the working speed.
        for term in &self.equations.terms {
            let order = match &term.shape {
                Shape::Law(law) => law.turn_order(),
                Shape::Pair(law, _) => law.turn_order(),
                Shape::Linear | Shape::Products(_) | Shape::Warm(..) => None,
            };
            if let Some(order) = order {
                let fastest =
                    self.equations.model.scales.body_speed.iter().fold(0.0_f64, |a, b| a.max(*b));
                cap = cap.min(TAU / (6.0 * order * fastest));
            }
        }
        cap
    }
}
