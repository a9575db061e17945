//! The mode of a train: which friction elements hold, which pieces of the laws are in use.
//!
//! The mode is an explicit input of everything that is evaluated; nothing hides in a law.

use super::{Equations, Shape, Sliding, dot};
use crate::signal::course::Overrides;

/// What a friction element does.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum FrictionMode {
    /// Its limit is zero.
    Absent,
    /// Holds its members together.
    Stuck,
    /// Slides with positive relative speed.
    Forward,
    /// Slides with negative relative speed.
    Backward,
}

impl FrictionMode {
    /// +1 or -1 while sliding, else 0.
    pub fn direction(self) -> f64 {
        match self {
            Self::Forward => 1.0,
            Self::Backward => -1.0,
            Self::Absent | Self::Stuck => 0.0,
        }
    }

    /// Sliding in the direction of a sign.
    pub fn sliding(sign: f64) -> Self {
        if sign >= 0.0 { Self::Forward } else { Self::Backward }
    }
}

/// What a shaft with free play does.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Contact {
    /// No free play: always closed.
    Always,
    /// Within the play, or with a flank that has not caught up yet: no torque.
    Gap,
    /// Closed on the side of positive twist.
    Forward,
    /// Closed on the side of negative twist.
    Backward,
}

/// Everything that decides which equations are in force.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Mode {
    /// One entry a friction element.
    pub frictions: Vec<FrictionMode>,
    /// Piece of each law: those of the terms, then those of the friction elements.
    pub pieces: Vec<usize>,
    /// One entry a shaft.
    pub contacts: Vec<Contact>,
    /// True where a controller's integral is held.
    pub held: Vec<bool>,
    /// True where a controller slides along its limit: its integral is set when that ends.
    pub tracking: Vec<bool>,
    /// +1 or -1 where a follower moves at its limited rate, else 0.
    pub slewing: Vec<i8>,
    /// +1 or -1 where the integral of a pitch loop stands at its highest or lowest angle, else 0.
    pub pitch_held: Vec<i8>,
}

/// What a follower at its limited rate makes of a term.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Slewing {
    /// The term is its command, which it cannot keep up with.
    Command,
    /// The term is the limited rate, with this sign.
    Rate(f64),
}

impl Mode {
    /// The mode of a state: pieces and contacts as the state has them, moving friction sliding,
    /// friction at rest stuck (to be judged by the holding torques), integrals held where the
    /// limit acts.
    pub fn of_state(
        equations: &Equations,
        time: f64,
        state: &[f64],
        overrides: &Overrides,
    ) -> Self {
        let mut mode = Self {
            frictions: equations
                .frictions
                .iter()
                .map(|friction| friction.judge(dot(&friction.speed, state)))
                .collect(),
            pieces: equations
                .terms
                .iter()
                .map(|term| match &term.shape {
                    Shape::Law(law) => {
                        let input = input(equations, term, time, state, overrides);
                        law.piece(input, parameters(equations, term, time, state, overrides))
                    }
                    Shape::Linear | Shape::Products(_) | Shape::Warm(..) | Shape::Pair(..) => 0,
                })
                .chain(equations.frictions.iter().map(|_| 0))
                .collect(),
            contacts: equations
                .model
                .shafts
                .iter()
                .zip(&equations.twist_state)
                .map(|(shaft, place)| match place {
                    Some(place) if shaft.backlash > 0.0 => {
                        let twist = state[*place] * equations.scale[*place];
                        if twist > shaft.backlash / 2.0 {
                            Contact::Forward
                        } else if twist < -shaft.backlash / 2.0 {
                            Contact::Backward
                        } else {
                            Contact::Gap
                        }
                    }
                    _ => Contact::Always,
                })
                .collect(),
            held: vec![false; equations.controllers.len()],
            tracking: vec![false; equations.controllers.len()],
            slewing: vec![0; equations.followers.len()],
            pitch_held: vec![0; equations.pitches.len()],
        };
        for index in 0..equations.frictions.len() {
            mode.choose_piece(equations, index, state);
        }
        for index in 0..equations.controllers.len() {
            mode.judge_command(equations, index, time, state, overrides);
        }
        mode.judge_controllers(equations, time, state, overrides);
        mode.judge_pitches(equations, time, state, overrides);
        mode
    }

    /// The piece of a command whose limits follow the speed.
    fn judge_command(
        &mut self,
        equations: &Equations,
        index: usize,
        time: f64,
        state: &[f64],
        overrides: &Overrides,
    ) {
        let controller = &equations.controllers[index];
        if controller.moving_limits.is_none() {
            return;
        }
        let term = &equations.terms[controller.command];
        let command = input(equations, term, time, state, overrides);
        let edges = [0, 1].map(|side| controller.edge(equations, side, state));
        self.pieces[controller.command] =
            usize::from(command > edges[0]) + usize::from(command >= edges[1]);
    }

    /// True for the limit of a command that does not stand at it, and for what feeds the integral of
    /// a pitch loop at the end of its way.
    pub fn is_off(&self, equations: &Equations, term: usize) -> bool {
        let mut pitches = equations.pitches.iter().zip(&self.pitch_held);
        if pitches.any(|(pitch, held)| pitch.integral == term && *held != 0) {
            return true;
        }
        equations.controllers.iter().any(|controller| {
            controller.moving_limits.is_some_and(|limits| {
                let piece = self.pieces[controller.command];
                (term == limits[0] && piece != 0) || (term == limits[1] && piece != 2)
            })
        })
    }

    /// What a follower at its limited rate makes of a term; a rate that is not in force has sign 0.
    pub fn slewing_at(&self, equations: &Equations, term: usize) -> Option<Slewing> {
        let all = equations.followers.iter().zip(&self.slewing);
        all.filter_map(|(follower, sign)| match follower.slew {
            Some((rate, _)) if rate == term => Some(Slewing::Rate(f64::from(*sign))),
            Some(_) if *sign != 0 && follower.commands.contains(&term) => Some(Slewing::Command),
            _ => None,
        })
        .next()
    }

    /// Takes the pieces of a command's moving limits from where the speed stands.
    pub fn meet_limits(&mut self, equations: &Equations, command: usize, state: &[f64]) {
        for controller in equations.controllers.iter().filter(|one| one.command == command) {
            for term in controller.moving_limits.into_iter().flatten() {
                if let Some(law) = equations.law_at(term) {
                    self.pieces[term] = law.piece_at(dot(&equations.terms[term].input, state));
                }
            }
        }
    }

    /// Lets a friction element do something else; one that begins to slide takes the piece of its
    /// curve on that side.
    pub fn set_friction(
        &mut self,
        equations: &Equations,
        index: usize,
        friction: FrictionMode,
        state: &[f64],
    ) {
        if self.frictions[index] != friction {
            self.frictions[index] = friction;
            self.choose_piece(equations, index, state);
        }
    }

    fn choose_piece(&mut self, equations: &Equations, index: usize, state: &[f64]) {
        let friction = &equations.frictions[index];
        let Sliding::Curve(law) = &friction.sliding else { return };
        let speed = dot(&friction.speed, state);
        let bounds = law.boundaries();
        self.pieces[equations.terms.len() + index] = match self.frictions[index] {
            FrictionMode::Backward => bounds.partition_point(|bound| *bound < speed.min(0.0)),
            _ => bounds.partition_point(|bound| *bound <= speed.max(0.0)),
        };
    }

    /// Decides anew which integrals are held.
    pub fn judge_controllers(
        &mut self,
        equations: &Equations,
        time: f64,
        state: &[f64],
        overrides: &Overrides,
    ) {
        for (index, controller) in equations.controllers.iter().enumerate() {
            let Some(integral) = controller.integral else { continue };
            let error = input(equations, &equations.terms[integral], time, state, overrides);
            let piece = self.pieces[controller.command];
            self.held[index] = (piece == 2 && error > 0.0) || (piece == 0 && error < 0.0);
        }
    }
}

/// Relative speed below which two bodies count as at rest to each other, as a share of the working speed.
pub const REST: f64 = 1e-9;

/// The parameters of a term's law at a time.
pub fn parameters(
    equations: &Equations,
    term: &super::Term,
    time: f64,
    state: &[f64],
    overrides: &Overrides,
) -> [f64; 2] {
    let signal = |slot| equations.bank.value(slot, time, overrides);
    super::parameters_at(term.parameters, &term.by_state, state, signal)
}

/// The input of a term at a state.
pub fn input(
    equations: &Equations,
    term: &super::Term,
    time: f64,
    state: &[f64],
    overrides: &Overrides,
) -> f64 {
    let offsets = term.offsets.iter();
    let offset: f64 =
        offsets.map(|(factor, slot)| factor * equations.bank.value(*slot, time, overrides)).sum();
    dot(&term.input, state) + offset
}
