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
                        law.piece(input, parameters(equations, term, time, overrides))
                    }
                    Shape::Linear | Shape::Products(_) | Shape::Pair(..) | Shape::Warm(..) => 0,
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
        };
        for index in 0..equations.frictions.len() {
            mode.choose_piece(equations, index, state);
        }
        mode.judge_controllers(equations, time, state, overrides);
        mode
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
    overrides: &Overrides,
) -> [f64; 2] {
    term.parameters.map(|slot| slot.map_or(0.0, |slot| equations.bank.value(slot, time, overrides)))
}

/// The input of a term at a state.
pub fn input(
    equations: &Equations,
    term: &super::Term,
    time: f64,
    state: &[f64],
    overrides: &Overrides,
) -> f64 {
    let offset = term
        .offset
        .map_or(0.0, |(factor, slot)| factor * equations.bank.value(slot, time, overrides));
    dot(&term.input, state) + offset
}
