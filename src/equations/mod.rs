//! The train as an ordinary differential equation: `dy = A y + sum D_j q_j(t, y)`.
//!
//! ```text
//! y = [ independent speeds | twists of elastic shafts, magnetic phases | controllers | angles ]
//! ```
//! Temperatures of magnets stand behind the phases. Everything linear is one matrix `A`, rebuilt when the mode changes; each nonlinear law is a
//! scalar `q_j` of one input row and enters through one column `D_j`. States are scaled by
//! their working sizes, so that one tolerance means the same for all of them.

pub mod assembly;
pub mod build;
mod build_drive;
mod build_joints;
mod build_machine;
mod build_magnet;
mod build_motor;
mod build_pitch;
pub mod channels;
mod constraints;
pub mod controller;
pub mod energy;
pub mod frame;
pub mod holding;
pub mod linearise;
pub mod machine;
pub mod mode;
pub mod parts;
pub mod pitch;
pub mod quiet_powers;
mod ratios;
pub mod thermal;

pub use controller::{Controller, Follower};

use crate::component::law::Law;
use crate::component::pair_law::PairLaw;
use crate::model::{BodyRow, Model};
use crate::signal::course::{SignalBank, SlotId};
use holding::Limits;
use mode::{FrictionMode, REST};

/// A sparse form over the scaled state.
pub type StateRow = Vec<(usize, f64)>;

/// The equations of one model, before any mode is chosen.
#[derive(Clone, Debug)]
pub struct Equations {
    /// The model they come from.
    pub model: Model,
    /// Number of states.
    pub size: usize,
    /// Number of independent speeds, which come first.
    pub speeds: usize,
    /// Physical value of a state of 1.
    pub scale: Vec<f64>,
    /// State of each shaft's twist; `None` for rigid ones.
    pub twist_state: Vec<Option<usize>>,
    /// State of each magnet's phase.
    pub phase_state: Vec<usize>,
    /// Rate of each magnet's phase (electrical rad/s) as a form over the scaled state.
    pub phase_rows: Vec<StateRow>,
    /// Angles that some law needs: state and rate row over bodies.
    pub angle_states: Vec<(usize, BodyRow)>,
    /// Scalar laws.
    pub terms: Vec<Term>,
    /// Dry friction elements.
    pub frictions: Vec<Friction>,
    /// Viscous torques without a factor: they stand in the matrix.
    pub dampers: Vec<Damper>,
    /// Controllers of drives.
    pub controllers: Vec<Controller>,
    /// States that follow a command.
    pub followers: Vec<Follower>,
    /// Pitch loops of axial rotors.
    pub pitches: Vec<pitch::Pitch>,
    /// Induction machines with flux equations.
    pub machines: Vec<machine::Machine>,
    /// Motors with a synchronous speed: motor by place and that speed (mirrored with the law), rad/s.
    pub heats: Vec<(usize, f64)>,
    /// Thermal nodes of magnets.
    pub thermal: Vec<thermal::ThermalState>,
    /// Number of friction elements whose heat is asked for; they stand behind the motors.
    pub friction_heats: usize,
    /// Everything that follows time.
    pub bank: SignalBank,
    /// What a reader of the results must know.
    pub warnings: Vec<(String, String)>,
}

/// The thing of the file that a torque belongs to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Owner {
    /// A motor by place.
    Motor(usize),
    /// A load by place.
    Load(usize),
    /// A brake by place.
    Brake(usize),
    /// A magnet by place.
    Magnet(usize),
    /// A clutch by place.
    Clutch(usize),
    /// A shaft by place.
    Shaft(usize),
    /// A fluid coupling by place.
    FluidCoupling(usize),
    /// A gear pair by place.
    GearPair(usize),
}

/// What the value of a term acts on.
#[derive(Clone, Debug, PartialEq)]
pub enum Target {
    /// A torque along a form over bodies.
    Torque(BodyRow),
    /// The rate of one state: place and physical factor.
    State(usize, f64),
}

/// What the power of a term counts as.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PowerKind {
    /// Supplied when positive, absorbed when negative.
    Drive,
    /// Lost.
    Lost,
    /// Stored, or no power at all.
    None,
    /// Lost: the value times the rate of this state times this factor.
    Warming(usize, f64),
}

/// A function of one input.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// A law of the library.
    Law(Law),
    /// A law of the input and of a second form over the scaled state.
    Pair(PairLaw, StateRow),
    /// The input itself.
    Linear,
    /// A sum of products of two states each; the input is the speed that makes its power.
    Products(Vec<(usize, usize, f64)>),
    /// A law times gains that follow other states.
    Warm(Law, Vec<Gain>),
}

/// A factor that follows a state in a straight line, and is never negative.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Gain {
    /// The state.
    pub place: usize,
    /// Change with the scaled state.
    pub slope: f64,
    /// Value where the state is zero.
    pub offset: f64,
}

impl Gain {
    /// The factor at a state.
    #[inline]
    pub fn value(&self, state: &[f64]) -> f64 {
        (self.offset + self.slope * state[self.place]).max(0.0)
    }
}

/// A factor that follows signals: the product of slots to whole powers.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Factor {
    /// Slots and powers; empty for 1.
    pub slots: Vec<(SlotId, i32)>,
}

/// One scalar law in the equations.
#[derive(Clone, Debug, PartialEq)]
pub struct Term {
    /// What it belongs to.
    pub owner: Owner,
    /// The function.
    pub shape: Shape,
    /// The input as a form over the scaled state.
    pub input: StateRow,
    /// Added to the input: factors times signals.
    pub offsets: Vec<(f64, SlotId)>,
    /// Signals that the law reads as parameters.
    pub parameters: [Option<SlotId>; 2],
    /// Added to the parameters: forms over the scaled state; empty for none.
    pub by_state: [StateRow; 2],
    /// Factor on the value.
    pub factor: Factor,
    /// Where the value goes.
    pub target: Target,
    /// How its power counts.
    pub power: PowerKind,
    /// The speed that makes its power; `None`: the input itself.
    pub speed: Option<StateRow>,
    /// Typical size of the input, for event tolerances.
    pub input_size: f64,
    /// Heat of an induction motor's rotor: place in the list of heats and synchronous speed, rad/s.
    pub heat: Option<(usize, f64)>,
}

/// How a friction element's sliding torque depends on speed.
#[derive(Clone, Debug, PartialEq)]
pub enum Sliding {
    /// The same at every speed, N*m.
    Constant(f64),
    /// Forward and backward each their own, N*m; a side whose torque is infinite never slides.
    Sides([f64; 2]),
    /// A load curve read at the magnitude of the speed.
    Curve(Law),
}

/// One dry friction element.
#[derive(Clone, Debug, PartialEq)]
pub struct Friction {
    /// What it belongs to.
    pub owner: Owner,
    /// Its name in messages and events.
    pub name: String,
    /// Relative speed as a form over bodies.
    pub row: BodyRow,
    /// The same over the scaled state.
    pub speed: StateRow,
    /// Torque while sliding.
    pub sliding: Sliding,
    /// Torque that breaks it away, N*m.
    pub breakaway: Limits,
    /// Factor on both.
    pub factor: Factor,
    /// Typical speed, rad/s, for tolerances.
    pub speed_size: f64,
    /// Place in the list of heats, where its heat is asked for.
    pub heat: Option<usize>,
}

impl Friction {
    /// Magnitude of the torque while it slides at a relative speed, before its factor, N*m.
    pub fn sliding_torque(&self, speed: f64) -> f64 {
        match &self.sliding {
            Sliding::Constant(torque) => *torque,
            Sliding::Sides([forward, backward]) => {
                if speed > 0.0 {
                    *forward
                } else {
                    *backward
                }
            }
            Sliding::Curve(law) => frame::sliding_of(law, speed.abs()),
        }
    }

    /// What an element that is there does at a relative speed, rad/s.
    pub fn judge(&self, speed: f64) -> FrictionMode {
        let slides = FrictionMode::sliding(speed);
        if speed.abs() <= REST * self.speed_size || self.never_slides(slides) {
            FrictionMode::Stuck
        } else {
            slides
        }
    }

    /// True for the way in which a clutch passes any torque.
    pub fn never_slides(&self, way: FrictionMode) -> bool {
        match &self.sliding {
            Sliding::Sides([forward, _]) if way == FrictionMode::Forward => forward.is_infinite(),
            Sliding::Sides([_, backward]) => backward.is_infinite(),
            Sliding::Constant(_) | Sliding::Curve(_) => false,
        }
    }
}

/// A torque proportional to a relative speed.
#[derive(Clone, Debug, PartialEq)]
pub struct Damper {
    /// What it belongs to.
    pub owner: Owner,
    /// Relative speed as a form over bodies.
    pub row: BodyRow,
    /// N*m*s/rad.
    pub coefficient: f64,
    /// True when its power counts as absorbed by a load, else it is lost.
    pub is_load: bool,
}

impl Equations {
    /// A form over bodies as a form over the scaled state.
    pub fn speed_row(&self, row: &[(usize, f64)]) -> StateRow {
        speed_row(&self.model, &self.scale, row)
    }

    /// The law at a place of the frame: of a term, or of a friction element by points.
    pub fn law_at(&self, place: usize) -> Option<&Law> {
        match self.terms.get(place) {
            Some(term) => match &term.shape {
                Shape::Law(law) => Some(law),
                Shape::Linear | Shape::Products(_) | Shape::Warm(..) | Shape::Pair(..) => None,
            },
            None => match &self.frictions.get(place - self.terms.len())?.sliding {
                Sliding::Curve(law) => Some(law),
                Sliding::Constant(_) | Sliding::Sides(_) => None,
            },
        }
    }

    /// Typical size of the input of the law at a place of the frame.
    pub fn input_size_at(&self, place: usize) -> f64 {
        match self.terms.get(place) {
            Some(term) => term.input_size,
            None => self
                .frictions
                .get(place - self.terms.len())
                .map_or(1.0, |friction| friction.speed_size),
        }
    }

    /// The starting state (scaled) with shafts unloaded and controllers at rest.
    pub fn start_state(&self) -> Vec<f64> {
        let mut state = vec![0.0; self.size];
        for (place, body) in self.model.reduction.independent.iter().enumerate() {
            state[place] = self.model.start_speeds[*body] / self.scale[place];
        }
        for (magnet, place) in self.model.magnets.iter().zip(&self.phase_state) {
            state[*place] = magnet.start_phase / self.scale[*place];
        }
        // Blades begin in fine pitch.
        for pitch in &self.pitches {
            for place in [pitch.state, pitch.integral_state] {
                state[place] = pitch.angles[0] / self.scale[place];
            }
        }
        for node in &self.thermal {
            state[node.place] = node.start / self.scale[node.place];
        }
        state
    }
}

/// A form over bodies as a sparse form over the scaled state.
pub fn speed_row(model: &Model, scale: &[f64], row: &[(usize, f64)]) -> StateRow {
    let dense = model.reduction.dense(row);
    dense
        .iter()
        .enumerate()
        .filter(|(_, value)| **value != 0.0)
        .map(|(place, value)| (place, value * scale[place]))
        .collect()
}

/// The parameters of a law: signals as read by `signal`, and forms over the state.
#[inline]
pub fn parameters_at(
    parameters: [Option<SlotId>; 2],
    by_state: &[StateRow; 2],
    state: &[f64],
    signal: impl Fn(SlotId) -> f64,
) -> [f64; 2] {
    let [first, second] = parameters;
    [
        first.map_or(0.0, &signal) + dot(&by_state[0], state),
        second.map_or(0.0, &signal) + dot(&by_state[1], state),
    ]
}

/// The value of a sum of products of states.
#[inline]
pub fn products(list: &[(usize, usize, f64)], state: &[f64]) -> f64 {
    list.iter().map(|&(left, right, factor)| factor * state[left] * state[right]).sum()
}

/// The value of a sparse form.
#[inline]
pub fn dot(row: &[(usize, f64)], state: &[f64]) -> f64 {
    row.iter().map(|&(place, factor)| factor * state[place]).sum()
}
