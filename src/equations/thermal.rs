//! Thermal nodes of the magnets: states, heat, and a pull-out torque that follows them.
//!
//! ```text
//! y_k   = (T_k - ambient)/scale            one state a node
//! y_k'  = sum share_k * losses/(C_k scale) - y_k/(C_k R_k) - ...
//! torque = K_start*law(phase) * product of (1 + a_k (T_k - T_k,start)/r_k,start)
//! ```
//! The energy that the magnets' field holds goes with the torque. What it gives up as the magnets
//! warm up turns into heat: it counts as lost, and comes back as they cool.

use super::{Equations, Gain, Owner, PowerKind, Shape, Target, Term, speed_row};
use crate::component::law::Law;
use crate::component::magnet_temperature::MagnetTemperature;
use crate::component::magnet_thermal::Thermal;
use crate::model::BodyRow;
use nalgebra::DMatrix;

/// Working size of a temperature rise, K.
const SIZE: f64 = 10.0;

/// A thermal node in the equations.
#[derive(Clone, Debug, PartialEq)]
pub struct ThermalState {
    /// The magnet by place.
    pub magnet: usize,
    /// First or second node of it.
    pub node: usize,
    /// Its state: the rise over the ambient.
    pub place: usize,
    /// Temperature around, degC.
    pub ambient: f64,
    /// Rise at the start, K.
    pub start: f64,
    /// Heat capacity, J/K.
    capacity: f64,
    /// Thermal resistance to the ambient, K/W.
    resistance: f64,
    /// Share of the losses that heats it.
    share: f64,
    /// The other node's state and the resistance between, K/W.
    other: Option<(usize, f64)>,
}

/// Where a loss comes from: a relative speed, and how its power follows from that.
pub struct Source {
    /// Relative speed as a form over bodies.
    pub row: BodyRow,
    /// Torque against the motion, N*m.
    pub constant: f64,
    /// Torque over the speed, N*m*s/rad.
    pub coefficient: f64,
    /// Speed of the largest torque; infinite for a straight line.
    pub peak_at: f64,
}

/// Makes the states of a magnet's nodes; returns the gains on its torque law.
pub(super) fn add_states(equations: &mut Equations, magnet: usize) -> Vec<Gain> {
    let warmth = equations.model.magnets[magnet].warmth;
    let Some(thermal) = warmth.thermal else { return Vec::new() };
    let places = nodes(equations, magnet, &thermal);
    match warmth.temperature {
        Some(temperature) => gains(&temperature, &places, thermal.ambient),
        None => Vec::new(),
    }
}

fn nodes(equations: &mut Equations, magnet: usize, thermal: &Thermal) -> [usize; 2] {
    let first = equations.scale.len();
    let count = thermal.nodes().count();
    for (node, (data, initial)) in thermal.nodes().zip(thermal.initial()).enumerate() {
        equations.scale.push(SIZE);
        equations.thermal.push(ThermalState {
            magnet,
            node,
            place: first + node,
            ambient: thermal.ambient,
            start: initial - thermal.ambient,
            capacity: data.capacity,
            resistance: data.resistance,
            share: data.share,
            other: thermal.between.map(|between| (first + 1 - node, between)),
        });
    }
    [first, first + count - 1]
}

/// One gain for each member's magnets: 1 at the start, so that the law itself is that of the start.
fn gains(temperature: &MagnetTemperature, places: &[usize; 2], ambient: f64) -> Vec<Gain> {
    (0..2)
        .map(|member| {
            let start = temperature.at[member];
            let slope = temperature.coefficient[member] / temperature.remanence(member, start);
            Gain {
                place: places[member],
                slope: slope * SIZE,
                offset: 1.0 + slope * (ambient - start),
            }
        })
        .filter(|gain| gain.slope != 0.0)
        .collect()
}

/// Adds the terms by which the sources heat a magnet's nodes, and those of its field's energy.
pub(super) fn add_heat(
    equations: &mut Equations,
    magnet: usize,
    sources: &[Source],
    gains: &[Gain],
) {
    let states: Vec<ThermalState> =
        equations.thermal.iter().filter(|state| state.magnet == magnet).cloned().collect();
    for state in states.iter().filter(|state| state.share > 0.0) {
        for source in sources {
            let input = speed_row(&equations.model, &equations.scale, &source.row);
            let law = Law::LossHeat {
                constant: source.constant,
                coefficient: source.coefficient,
                peak_at: source.peak_at,
            };
            let target = Target::State(state.place, state.share / state.capacity);
            equations
                .terms
                .push(Term { input, ..blank(magnet, Shape::Law(law), target, PowerKind::None) });
        }
    }
    let law = Law::MagnetEnergy(equations.model.magnets[magnet].law.clone());
    let phase = equations.phase_state[magnet];
    for (index, gain) in gains.iter().enumerate() {
        // d(g1 g2) = g1' g2 + g2' g1: one term for each gain, with the others on it.
        let mut rest = gains.to_vec();
        rest.remove(index);
        let power = PowerKind::Warming(gain.place, -gain.slope);
        let shape = Shape::Warm(law.clone(), rest);
        equations.terms.push(Term {
            input: vec![(phase, equations.scale[phase])],
            ..blank(magnet, shape, Target::State(gain.place, 0.0), power)
        });
    }
}

fn blank(magnet: usize, shape: Shape, target: Target, power: PowerKind) -> Term {
    Term {
        owner: Owner::Magnet(magnet),
        shape,
        input: Vec::new(),
        offsets: Vec::new(),
        parameters: [None; 2],
        by_state: [Vec::new(), Vec::new()],
        factor: super::Factor::default(),
        target,
        power,
        speed: None,
        input_size: 1.0,
        heat: None,
    }
}

/// Heat flows to the ambient and between nodes, in the matrix of the scaled rates.
pub(super) fn add_flows(equations: &Equations, full: &mut DMatrix<f64>) {
    for state in &equations.thermal {
        full[(state.place, state.place)] -= 1.0 / (state.capacity * state.resistance);
        if let Some((other, between)) = state.other {
            let flow = 1.0 / (state.capacity * between);
            full[(state.place, state.place)] -= flow;
            full[(state.place, other)] += flow;
        }
    }
}

/// Takes the temperatures out of a linearisation: next to the motion they stand still.
pub fn hold(equations: &Equations, matrix: &mut DMatrix<f64>) {
    for state in &equations.thermal {
        matrix.row_mut(state.place).fill(0.0);
        matrix.column_mut(state.place).fill(0.0);
    }
}

/// The product of gains at a state.
#[inline]
pub fn product(gains: &[Gain], state: &[f64]) -> f64 {
    gains.iter().map(|gain| gain.value(state)).product()
}
