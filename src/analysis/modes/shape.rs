//! Shapes of modes: amplitudes of the bodies, and where the energy and the damping sit.

use super::linear::LinearTrain;
use crate::analysis::linear_point::LinearPoint;
use crate::equations::assembly::{Active, Function, assemble};
use crate::equations::frame::Evaluator;
use crate::equations::linearise::pair_form;
use crate::equations::{Equations, Owner, Shape, StateRow, Target};
use nalgebra::{Complex, DMatrix, DVector};
use std::collections::BTreeMap;

/// Amplitudes of bodies that differ by less are equal when the largest is sought.
const EQUAL: f64 = 1e-9;

/// A named share or amplitude.
pub type Named = (String, f64);

/// How one mode moves.
#[derive(Clone, Debug, PartialEq)]
pub struct ModeShape {
    /// Amplitude of each body, the largest 1, signed by phase.
    pub amplitude: Vec<Named>,
    /// Phase of each body against the largest, rad.
    pub phase: Vec<Named>,
    /// Share of the kinetic energy in each body.
    pub kinetic: Vec<Named>,
    /// Share of the elastic energy in each shaft and magnet.
    pub elastic: Vec<Named>,
    /// Share of the damping in each element; negative where it feeds the mode. Empty without damping.
    pub damping: Vec<Named>,
}

impl ModeShape {
    /// The shape of a full physical state vector.
    pub fn new(
        equations: &Equations,
        train: &LinearTrain,
        sources: &DampingSources,
        vector: &DVector<Complex<f64>>,
    ) -> Self {
        let bodies = body_amplitudes(equations, vector);
        let names = |place: usize| equations.model.scenario.bodies[place].name.clone();
        let reference = reference(&bodies);
        let turned: Vec<Complex<f64>> = bodies.iter().map(|value| value / reference).collect();
        let amplitude = turned
            .iter()
            .enumerate()
            .map(|(place, value)| (names(place), clean(value.norm().copysign(value.re))))
            .collect();
        let phase = turned
            .iter()
            .enumerate()
            .filter(|(_, value)| value.norm() > EQUAL)
            .map(|(place, value)| (names(place), clean(value.arg())))
            .collect();
        let kinetic = bodies.iter().enumerate().map(|(place, value)| {
            let inertia = equations.model.scenario.bodies[place].inertia;
            (names(place), inertia * value.norm_sqr())
        });
        Self {
            amplitude,
            phase,
            kinetic: shares(kinetic.collect()),
            elastic: shares(elastic(equations, train, vector)),
            damping: sources.shares(equations, vector),
        }
    }

    /// The element with the largest share, if any has one.
    pub fn largest(list: &[Named]) -> Option<&Named> {
        list.iter().filter(|entry| entry.1 > 0.0).max_by(|a, b| a.1.total_cmp(&b.1))
    }

    /// What moves on what, in a few words.
    pub fn label(&self) -> String {
        match (Self::largest(&self.kinetic), Self::largest(&self.elastic)) {
            (Some((body, _)), Some((spring, _))) => format!("{body} on {spring}"),
            (Some((body, _)), None) => body.clone(),
            _ => "mode".to_owned(),
        }
    }
}

/// Complex speed amplitudes of all bodies of a full physical state vector.
pub fn body_amplitudes(equations: &Equations, vector: &DVector<Complex<f64>>) -> Vec<Complex<f64>> {
    equations
        .model
        .reduction
        .speeds
        .iter()
        .map(|form| form.iter().map(|&(place, share)| vector[place] * share).sum())
        .collect()
}

/// The first of the largest amplitudes; 1 when nothing moves.
fn reference(bodies: &[Complex<f64>]) -> Complex<f64> {
    let largest = bodies.iter().map(|value| value.norm()).fold(0.0, f64::max);
    bodies
        .iter()
        .copied()
        .find(|value| largest > 0.0 && value.norm() >= largest * (1.0 - EQUAL))
        .unwrap_or(Complex::new(1.0, 0.0))
}

fn clean(value: f64) -> f64 {
    if value.abs() < 1e-13 { 0.0 } else { value }
}

/// Speeds of bodies in a free motion, the largest 1.
pub fn free_shape(equations: &Equations, motion: &[f64]) -> Vec<Named> {
    let vector =
        DVector::from_iterator(motion.len(), motion.iter().map(|value| Complex::new(*value, 0.0)));
    let bodies = body_amplitudes(equations, &vector);
    let reference = reference(&bodies);
    equations
        .model
        .scenario
        .bodies
        .iter()
        .zip(&bodies)
        .map(|(body, value)| (body.name.clone(), clean((value / reference).re)))
        .collect()
}

fn elastic(
    equations: &Equations,
    train: &LinearTrain,
    vector: &DVector<Complex<f64>>,
) -> Vec<Named> {
    let model = &equations.model;
    let shafts =
        train.shaft_stiffness.iter().zip(&equations.twist_state).zip(&model.scenario.shafts);
    let mut list: Vec<Named> = shafts
        .filter_map(|((stiffness, place), typed)| {
            place.map(|place| (typed.name.clone(), stiffness * vector[place].norm_sqr()))
        })
        .collect();
    for (index, place) in equations.phase_state.iter().enumerate() {
        let stiffness = train.magnet_stiffness[index].max(0.0);
        list.push((model.magnets[index].name.clone(), stiffness * vector[*place].norm_sqr()));
    }
    list
}

/// Values over their sum; all zero stays zero.
fn shares(mut list: Vec<Named>) -> Vec<Named> {
    let sum: f64 = list.iter().map(|entry| entry.1).sum();
    for entry in &mut list {
        entry.1 = if sum > 0.0 { clean(entry.1 / sum) } else { 0.0 };
    }
    list
}

/// Everything that takes energy out of a mode or feeds it.
#[derive(Clone, Debug)]
pub struct DampingSources {
    torques: Vec<Torque>,
    /// Name, rate row over independent speeds and coefficient.
    dampers: Vec<(String, DVector<f64>, f64)>,
}

/// A torque that follows the state.
#[derive(Clone, Debug)]
struct Torque {
    name: String,
    /// Direction over the independent speeds.
    direction: DVector<f64>,
    /// Its size over the scaled state.
    form: StateRow,
}

impl DampingSources {
    /// Collects the sources of a train at a point.
    pub fn new(equations: &Equations, point: &LinearPoint) -> Self {
        let model = &equations.model;
        let scenario = &model.scenario;
        let assembly =
            assemble(equations, &point.mode, point.time, f64::INFINITY, &point.overrides);
        let evaluator = Evaluator { equations, assembly: &assembly, overrides: &point.overrides };
        let name = |owner: Owner| name_of(equations, owner);
        let signal = |slot| equations.bank.value(slot, point.time, &point.overrides);
        let mut torques = Vec::new();
        for active in assembly.active.iter().chain(&assembly.folded) {
            let Some(term) = equations.terms.get(active.place) else {
                torques.extend(curve_load(equations, &evaluator, active, point));
                continue;
            };
            let Target::Torque(direction) = &term.target else { continue };
            if let Function::Products(list) = &active.function {
                // A machine's torque by its currents and fluxes, which swing with the train.
                let strength = evaluator.strength(&active.factor, point.time);
                let form = list.iter().flat_map(|&(left, right, factor)| {
                    let weight = factor * strength;
                    [(left, weight * point.state[right]), (right, weight * point.state[left])]
                });
                torques.push(Torque {
                    name: name(term.owner),
                    direction: model.reduction.dense(direction),
                    form: form.collect(),
                });
                continue;
            }
            if let Some(form) = pair_form(active, &point.state) {
                let strength = evaluator.strength(&active.factor, point.time);
                let speeds = form.into_iter().filter(|(place, _)| *place < equations.speeds);
                torques.push(Torque {
                    name: name(term.owner),
                    direction: model.reduction.dense(direction),
                    form: speeds.map(|(place, slope)| (place, slope * strength)).collect(),
                });
                continue;
            }
            let (input, _) = evaluator.law(active, point.time, &point.state);
            let parameters = crate::equations::parameters_at(
                term.parameters,
                &term.by_state,
                &point.state,
                signal,
            );
            let slope = match (&active.function, &term.shape) {
                // Magnets and ripple store energy: they take none out.
                (Function::Law(crate::component::law::Law::Magnet(_), _), _)
                | (
                    Function::Law(
                        crate::component::law::Law::Cogging { .. }
                        | crate::component::law::Law::Periodic(_)
                        | crate::component::law::Law::Elastic(_),
                        _,
                    ),
                    _,
                ) => continue,
                (Function::Law(law, piece), _) => law.slope(input, parameters, *piece),
                (Function::Linear, Shape::Linear) => 1.0,
                _ => continue,
            };
            let strength = evaluator.strength(&active.factor, point.time);
            let slopes = match &active.function {
                Function::Law(law, piece) => law.parameter_slopes(input, parameters, *piece),
                _ => [0.0; 2],
            };
            let by_state = active.by_state.iter().zip(slopes).flat_map(|(form, slope)| {
                form.iter().map(move |(place, weight)| (*place, weight * slope * strength))
            });
            let form = active.input.iter();
            let form =
                form.map(|(place, weight)| (*place, weight * slope * strength)).chain(by_state);
            torques.push(Torque {
                name: name(term.owner),
                direction: model.reduction.dense(direction),
                form: form.collect(),
            });
        }
        let mut dampers: Vec<(String, DVector<f64>, f64)> = equations
            .dampers
            .iter()
            .map(|damper| {
                (name(damper.owner), model.reduction.dense(&damper.row), damper.coefficient)
            })
            .collect();
        for (shaft, typed) in model.shafts.iter().zip(&scenario.shafts) {
            if !shaft.rigid && shaft.damping > 0.0 {
                let row = model.reduction.dense(&shaft.row());
                dampers.push((typed.name.clone(), row, shaft.damping));
            }
        }
        Self { torques, dampers }
    }

    /// Shares of the damping in a full physical state vector, by element.
    fn shares(&self, equations: &Equations, vector: &DVector<Complex<f64>>) -> Vec<Named> {
        let speeds = vector.rows(0, equations.speeds);
        let along = |row: &DVector<f64>| -> Complex<f64> {
            row.iter().zip(speeds.iter()).map(|(share, speed)| speed * *share).sum()
        };
        let mut lost: BTreeMap<&str, f64> = BTreeMap::new();
        let mut size = 0.0;
        for (name, row, coefficient) in &self.dampers {
            let power = coefficient * along(row).norm_sqr();
            size += power;
            *lost.entry(name).or_default() += power;
        }
        for Torque { name, direction, form } in &self.torques {
            let torque: Complex<f64> = form
                .iter()
                .map(|(place, weight)| vector[*place] * (weight / equations.scale[*place]))
                .sum();
            let power = -(along(direction).conj() * torque).re;
            size += power.abs();
            *lost.entry(name).or_default() += power;
        }
        let sum: f64 = lost.values().sum();
        if sum.abs() <= 1e-9 * size || size == 0.0 {
            return Vec::new();
        }
        lost.into_iter()
            .filter(|(_, power)| *power != 0.0)
            .map(|(name, power)| (name.to_owned(), power / sum))
            .collect()
    }
}

fn name_of(equations: &Equations, owner: Owner) -> String {
    let scenario = &equations.model.scenario;
    match owner {
        Owner::Motor(index) => scenario.motors[index].name.clone(),
        Owner::Load(index) => scenario.loads[index].name.clone(),
        Owner::Brake(index) => scenario.brakes[index].name.clone(),
        Owner::Shaft(index) => scenario.shafts[index].name.clone(),
        Owner::FluidCoupling(index) => scenario.fluid_couplings[index].name.clone(),
        Owner::GearPair(index) => scenario.gear_pairs[index].name.clone(),
        Owner::Clutch(index) => scenario.clutches[index].name.clone(),
        Owner::Magnet(index) => equations.model.magnets[index].name.clone(),
    }
}

/// A load by points that sticks at standstill, while it turns; friction follows no speed.
fn curve_load(
    equations: &Equations,
    evaluator: &Evaluator<'_>,
    active: &Active,
    point: &LinearPoint,
) -> Option<Torque> {
    let Function::Law(law, piece) = &active.function else { return None };
    let friction = equations.frictions.get(active.place.checked_sub(equations.terms.len())?)?;
    let input = active.input_at(&point.state);
    let slope = law.slope(input, [0.0; 2], *piece) * evaluator.strength(&active.factor, point.time);
    Some(Torque {
        name: name_of(equations, friction.owner),
        direction: equations.model.reduction.dense(&friction.row),
        form: active.input.iter().map(|(place, weight)| (*place, weight * slope)).collect(),
    })
}

/// Overlap of two full vectors in kinetic energy, 0 to 1: 1 for the same motion.
pub fn overlap(mass: &DMatrix<f64>, a: &DVector<Complex<f64>>, b: &DVector<Complex<f64>>) -> f64 {
    let count = mass.nrows();
    let product = |left: &DVector<Complex<f64>>, right: &DVector<Complex<f64>>| -> Complex<f64> {
        let mut sum = Complex::new(0.0, 0.0);
        for row in 0..count {
            for column in 0..count {
                sum += left[row].conj() * right[column] * mass[(row, column)];
            }
        }
        sum
    };
    let size = product(a, a).re * product(b, b).re;
    if size > 0.0 { product(a, b).norm_sqr() / size } else { 0.0 }
}
