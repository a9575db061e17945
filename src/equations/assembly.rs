//! The equations of one mode over one stretch of time, ready to be evaluated.

use super::channels::{self, ChannelForm};
use super::mode::{Mode, Slewing};
use super::parts::Parts;
use super::quiet_powers::{QuietPowers, quiet_powers};
use super::{Equations, Factor, Gain, PowerKind, Shape, Sliding, StateRow, Target, dot};
use crate::component::law::Law;
use crate::component::pair_law::PairLaw;
use crate::model::BodyRow;
use crate::signal::course::{Overrides, SlotId};
use nalgebra::DMatrix;

/// Up to this many states the matrix is kept dense; beyond, only its entries.
pub const DENSE_LIMIT: usize = 16;

/// The matrix of the linear part.
#[derive(Clone, Debug, PartialEq)]
pub enum Matrix {
    /// Column by column.
    Dense(Vec<f64>),
    /// Row starts, columns and values of the entries.
    Sparse {
        /// Start of each row in the other two, and the end.
        starts: Vec<usize>,
        /// Column and value of each entry.
        entries: Vec<(usize, f64)>,
    },
}

/// A term that takes part in an evaluation.
#[derive(Clone, Debug, PartialEq)]
pub struct Active {
    /// Its place in the frame's law values.
    pub place: usize,
    /// How its value comes about.
    pub function: Function,
    /// Input as a form over the scaled state.
    pub input: StateRow,
    /// Added to the input.
    pub offsets: Vec<(f64, SlotId)>,
    /// Parameters of the law.
    pub parameters: [Option<SlotId>; 2],
    /// Added to the parameters: forms over the scaled state; empty for none.
    pub by_state: [StateRow; 2],
    /// Offset and parameters where nothing of them follows time.
    pub fixed: (f64, [f64; 2]),
    /// True when its factor, offset or a parameter follows time within the stretch.
    pub follows_time: bool,
    /// Factor on the value.
    pub factor: Strength,
    /// Column: entries of the scaled rates.
    pub column: StateRow,
    /// How its power counts.
    pub power: PowerKind,
    /// Speed of its power; `None`: the input.
    pub speed: Option<StateRow>,
    /// Heat of an induction motor's rotor: place in the list of heats and synchronous speed, rad/s.
    pub heat: Option<(usize, f64)>,
}

/// The function of an active term.
#[derive(Clone, Debug, PartialEq)]
pub enum Function {
    /// A law in one of its pieces.
    Law(Law, usize),
    /// A law of the input and of a second form over the state.
    Pair(PairLaw, StateRow),
    /// The input itself.
    Linear,
    /// A sum of products of two states each.
    Products(Vec<(usize, usize, f64)>),
    /// A law times gains that follow other states.
    Warm(Law, Vec<Gain>),
    /// Friction of constant size against this direction.
    Friction(f64, f64),
}

/// A factor over one stretch.
#[derive(Clone, Debug, PartialEq)]
pub enum Strength {
    /// The same all along.
    Constant(f64),
    /// Follows signals.
    Varying(Factor),
}

/// The equations of one mode over one stretch of time.
#[derive(Clone, Debug)]
pub struct Assembly {
    /// Start of the stretch, s: signals are read on the branch that is live just after it.
    pub start: f64,
    /// Linear part of the scaled rates.
    pub matrix: Matrix,
    /// The same as a full matrix, for linearisation.
    pub full: DMatrix<f64>,
    /// Laws that take part.
    pub active: Vec<Active>,
    /// Linear terms that stand in the matrix; their values are still asked for by channels.
    pub folded: Vec<Active>,
    /// Powers of the linear part.
    pub powers: QuietPowers,
    /// Stuck friction elements by place.
    pub stuck: Vec<usize>,
    /// Rates along the stuck rows without the holding torques: forms over state and law values, rad/s2.
    pub stuck_drive: Vec<(StateRow, Vec<(usize, f64)>)>,
    /// `R M^-1 R'` of the stuck rows.
    pub stuck_compliance: DMatrix<f64>,
    /// Projects independent speeds (physical) onto the stuck rows.
    pub projection: Option<DMatrix<f64>>,
    /// How each channel follows from state and law values.
    pub channels: Vec<ChannelForm>,
    /// True when something in this stretch follows time.
    pub varies: bool,
    /// Number of law values in a frame: terms, frictions, and the constant 1 of contact offsets.
    pub law_count: usize,
}

/// Assembles the equations of a mode from `start` to `end`.
pub fn assemble(
    equations: &Equations,
    mode: &Mode,
    start: f64,
    end: f64,
    overrides: &Overrides,
) -> Assembly {
    let parts = Parts::new(equations, mode);
    let constant_place = equations.terms.len() + equations.frictions.len();
    let mut state_rows = DMatrix::zeros(equations.size, equations.size);
    let mut active = Vec::new();
    let mut folded = Vec::new();
    let mut powers = quiet_powers(equations, mode);
    let mut varies = false;
    let strength = |factor: &Factor, varies: &mut bool| {
        let mut value = 1.0;
        for &(slot, power) in &factor.slots {
            match equations.bank.constant_on(slot, start, end, overrides) {
                Some(part) => value *= part.powi(power),
                None => {
                    *varies = true;
                    return Strength::Varying(factor.clone());
                }
            }
        }
        Strength::Constant(value)
    };
    for (place, term) in equations.terms.iter().enumerate() {
        let held = equations.controllers.iter().zip(&mode.held).any(|(controller, held)| {
            let off = controller
                .scale
                .and_then(|slot| equations.bank.constant_on(slot, start, end, overrides))
                .is_some_and(|scale| scale == 0.0);
            controller.integral == Some(place) && (*held || off)
        });
        if held
            || equations.machines.iter().any(|machine| machine.is_off(mode, place))
            || mode.is_off(equations, place)
        {
            continue;
        }
        let mut factor = strength(&term.factor, &mut varies);
        let slewing = mode.slewing_at(equations, place);
        if let Some(Slewing::Rate(sign)) = slewing {
            factor = Strength::Constant(sign);
        }
        if factor == Strength::Constant(0.0) {
            continue;
        }
        let mut moving =
            term.offsets.iter().map(|(_, slot)| *slot).chain(term.parameters.into_iter().flatten());
        let moves =
            moving.any(|slot| equations.bank.constant_on(slot, start, end, overrides).is_none());
        varies |= moves;
        let column = match &term.target {
            // A command that is out of reach moves nothing: the rate does.
            _ if slewing == Some(Slewing::Command) => Vec::new(),
            Target::Torque(direction) => parts.column(direction),
            Target::State(state, rate) => vec![(*state, rate / equations.scale[*state])],
        };
        if let (Shape::Linear, [], Strength::Constant(value)) =
            (&term.shape, term.offsets.as_slice(), &factor)
        {
            for &(row, share) in &column {
                for &(state, weight) in &term.input {
                    state_rows[(row, state)] += share * value * weight;
                }
            }
            if term.power == PowerKind::Drive {
                let speed = term.speed.clone().unwrap_or_else(|| term.input.clone());
                powers.drives.push((*value, term.input.clone(), speed));
            }
            folded.push(Active::of_term(place, term, mode.pieces[place], factor, column));
            continue;
        }
        let mut entry = Active::of_term(place, term, mode.pieces[place], factor, column);
        let constant =
            |slot| equations.bank.constant_on(slot, start, end, overrides).unwrap_or(0.0);
        entry.fixed = (
            term.offsets.iter().map(|(gain, slot)| gain * constant(*slot)).sum(),
            term.parameters.map(|slot| slot.map_or(0.0, constant)),
        );
        entry.follows_time |= moves;
        active.push(entry);
    }
    for (index, friction) in equations.frictions.iter().enumerate() {
        let direction = mode.frictions[index].direction();
        let factor = strength(&friction.factor, &mut varies);
        if direction == 0.0 || factor == Strength::Constant(0.0) {
            continue;
        }
        let side = |[forward, backward]: [f64; 2]| if direction > 0.0 { forward } else { backward };
        // A clutch that runs free without drag is absent from the equations.
        if matches!(friction.sliding, Sliding::Sides(torques) if side(torques) == 0.0) {
            continue;
        }
        active.push(Active {
            place: equations.terms.len() + index,
            function: match &friction.sliding {
                Sliding::Constant(torque) => Function::Friction(*torque, direction),
                Sliding::Sides(torques) => Function::Friction(side(*torques), direction),
                Sliding::Curve(law) => {
                    Function::Law(law.clone(), mode.pieces[equations.terms.len() + index])
                }
            },
            input: friction.speed.clone(),
            offsets: Vec::new(),
            parameters: [None; 2],
            by_state: [Vec::new(), Vec::new()],
            fixed: (0.0, [0.0; 2]),
            follows_time: matches!(factor, Strength::Varying(_)),
            factor,
            column: parts.column(&friction.row),
            // A load by points takes power out of the train, friction turns it to heat.
            power: match &friction.sliding {
                Sliding::Constant(_) | Sliding::Sides(_) => PowerKind::Lost,
                Sliding::Curve(_) => PowerKind::Drive,
            },
            speed: None,
            // Heat is the torque times the speed still missing to none.
            heat: friction.heat.map(|place| (place, 0.0)),
        });
    }
    if parts.has_constant {
        active.push(Active {
            place: constant_place,
            function: Function::Law(Law::Unit, 0),
            input: Vec::new(),
            offsets: Vec::new(),
            parameters: [None; 2],
            by_state: [Vec::new(), Vec::new()],
            fixed: (0.0, [0.0; 2]),
            follows_time: false,
            factor: Strength::Constant(1.0),
            column: parts.column(&parts.constant_row()),
            power: PowerKind::None,
            speed: None,
            heat: None,
        });
    }
    let linear = &parts.accelerate * &parts.force;
    let mut full = state_rows;
    for row in 0..equations.speeds {
        for column in 0..equations.size {
            full[(row, column)] +=
                linear[(row, column)] * equations.scale[column] / equations.scale[row];
        }
    }
    add_rates(equations, &mut full);
    for (follower, slewing) in equations.followers.iter().zip(&mode.slewing) {
        if *slewing == 0 {
            full[(follower.state, follower.state)] -= 1.0 / follower.lag;
        }
    }
    super::thermal::add_flows(equations, &mut full);
    let channels = channels::forms(equations, mode, &parts);
    let (stuck_drive, stuck_compliance) = parts.stuck_forms(equations);
    Assembly {
        start,
        matrix: pack(&full),
        full,
        active,
        folded,
        powers,
        stuck: parts.stuck.clone(),
        stuck_drive,
        stuck_compliance,
        projection: parts.projection.clone(),
        channels,
        varies,
        law_count: constant_place + 1,
    }
}

/// Deformations and angles change at a rate that is a form over the independent speeds.
fn add_rates(equations: &Equations, full: &mut DMatrix<f64>) {
    let mut add = |place: usize, row: BodyRow| {
        for (state, value) in equations.speed_row(&row) {
            full[(place, state)] += value / equations.scale[place];
        }
    };
    for (shaft, place) in equations.model.shafts.iter().zip(&equations.twist_state) {
        if let Some(place) = place {
            add(*place, shaft.row());
        }
    }
    for (magnet, place) in equations.model.magnets.iter().zip(&equations.phase_state) {
        add(*place, magnet.row());
    }
    for (place, row) in &equations.angle_states {
        add(*place, row.clone());
    }
}

fn pack(full: &DMatrix<f64>) -> Matrix {
    if full.nrows() <= DENSE_LIMIT {
        return Matrix::Dense(full.as_slice().to_vec());
    }
    let mut starts = vec![0];
    let mut entries = Vec::new();
    for row in 0..full.nrows() {
        for column in 0..full.ncols() {
            if full[(row, column)] != 0.0 {
                entries.push((column, full[(row, column)]));
            }
        }
        starts.push(entries.len());
    }
    Matrix::Sparse { starts, entries }
}

impl Active {
    fn of_term(
        place: usize,
        term: &super::Term,
        piece: usize,
        factor: Strength,
        column: StateRow,
    ) -> Self {
        Self {
            place,
            function: match &term.shape {
                Shape::Law(law) => Function::Law(law.clone(), piece),
                Shape::Pair(law, second) => Function::Pair(law.clone(), second.clone()),
                Shape::Linear => Function::Linear,
                Shape::Products(list) => Function::Products(list.clone()),
                Shape::Warm(law, gains) => Function::Warm(law.clone(), gains.clone()),
            },
            input: term.input.clone(),
            offsets: term.offsets.clone(),
            parameters: term.parameters,
            by_state: term.by_state.clone(),
            fixed: (0.0, [0.0; 2]),
            follows_time: matches!(factor, Strength::Varying(_)),
            factor,
            column,
            power: term.power,
            speed: term.speed.clone(),
            heat: term.heat,
        }
    }

    /// The input at a state.
    #[inline]
    pub fn input_at(&self, state: &[f64]) -> f64 {
        match self.input.as_slice() {
            [(place, factor)] => factor * state[*place],
            many => dot(many, state),
        }
    }
}
