//! Powers of an evaluation and their sums over a step.
//!
//! Every power of a train is a sum of products of two entries of the evaluation's record
//! `[state | rates | law values]`: a law's value times a speed, a damper's rate squared. The sums
//! over a step use the method's own weights, so that they are quadrature states outside its
//! error norm.

use super::rhs::Ring;
use crate::equations::assembly::{Active, Function};
use crate::equations::frame::Evaluator;
use crate::equations::{PowerKind, StateRow};

/// Energies or powers, J or W.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Powers {
    /// Positive power of motors and loads.
    pub supplied: f64,
    /// Negative power of motors and loads, as a positive number.
    pub absorbed: f64,
    /// Turned to heat.
    pub lost: f64,
}

impl Powers {
    /// Adds another sum.
    pub fn add(&mut self, other: &Powers) {
        self.supplied += other.supplied;
        self.absorbed += other.absorbed;
        self.lost += other.lost;
    }

    #[inline]
    fn drive(&mut self, weight: f64, power: f64) {
        if power >= 0.0 {
            self.supplied += weight * power;
        } else {
            self.absorbed -= weight * power;
        }
    }
}

/// `factor` times the product of two entries of a record.
#[derive(Clone, Copy, Debug)]
struct Product {
    factor: f64,
    first: usize,
    second: usize,
}

impl Product {
    #[inline]
    fn of(&self, record: &[f64]) -> f64 {
        self.factor * record[self.first] * record[self.second]
    }
}

/// Heat of an induction motor's rotor: torque times slip speed.
#[derive(Clone, Debug)]
struct Heat {
    place: usize,
    law: usize,
    synchronous_speed: f64,
    speed: StateRow,
}

/// Which products make the powers of an assembly.
#[derive(Clone, Debug)]
pub struct Audit {
    losses: Vec<Product>,
    /// Products of motors and loads whose power is one product.
    drives: Vec<Product>,
    /// Those whose power is a sum of several: its sign is that of the sum.
    long_drives: Vec<Vec<Product>>,
    heats: Vec<Heat>,
}

impl Audit {
    /// The powers of an evaluator's assembly, for records of a padded state of `width`.
    pub fn new(evaluator: &Evaluator<'_>, width: usize) -> Self {
        let assembly = evaluator.assembly;
        let mut audit = Self {
            losses: Vec::new(),
            drives: Vec::new(),
            long_drives: Vec::new(),
            heats: Vec::new(),
        };
        for (law, active) in assembly.active.iter().enumerate() {
            let value = 2 * width + law;
            let speed = active.speed.as_ref().unwrap_or(&active.input);
            let products = |sign: f64| -> Vec<Product> {
                let product = |&(second, share): &(usize, f64)| Product {
                    factor: sign * share,
                    first: value,
                    second,
                };
                speed.iter().map(product).collect()
            };
            match active.power {
                PowerKind::Drive => audit.add_drive(products(1.0)),
                PowerKind::Lost => audit.losses.extend(products(lost_sign(active))),
                PowerKind::None => {}
                PowerKind::Warming(state, factor) => {
                    let second = width + state;
                    audit.losses.push(Product { factor, first: value, second });
                }
            }
            if let Some((place, synchronous_speed)) = active.heat {
                let speed = active.input.clone();
                audit.heats.push(Heat { place, law: value, synchronous_speed, speed });
            }
        }
        let quiet = &assembly.powers;
        for &(place, factor) in &quiet.rate_losses {
            let rate = width + place;
            audit.losses.push(Product { factor, first: rate, second: rate });
        }
        for (weight, row) in &quiet.losses {
            audit.losses.extend(square(*weight, row, row));
        }
        for (weight, torque, speed) in &quiet.drives {
            audit.add_drive(square(*weight, torque, speed));
        }
        audit
    }

    fn add_drive(&mut self, products: Vec<Product>) {
        match products.as_slice() {
            [] => {}
            [one] => self.drives.push(*one),
            _ => self.long_drives.push(products),
        }
    }

    /// Adds `weight` times the powers and heats of a record.
    #[inline]
    fn add(&self, weight: f64, record: &[f64], powers: &mut Powers, heats: &mut [f64]) {
        let mut lost = 0.0;
        for product in &self.losses {
            lost += product.of(record);
        }
        powers.lost += weight * lost;
        for product in &self.drives {
            powers.drive(weight, product.of(record));
        }
        for products in &self.long_drives {
            powers.drive(weight, products.iter().map(|product| product.of(record)).sum());
        }
        for heat in &self.heats {
            let mut slip_speed = heat.synchronous_speed;
            for &(place, share) in &heat.speed {
                slip_speed -= share * record[place];
            }
            if let Some(sum) = heats.get_mut(heat.place) {
                *sum += weight * record[heat.law] * slip_speed;
            }
        }
    }

    /// Energies of a step of `length` over which nothing moves, from the record at its end.
    pub fn end(&self, length: f64, record: &[f64], heats: &mut [f64]) -> Powers {
        let mut energy = Powers::default();
        self.add(length, record, &mut energy, heats);
        energy
    }

    /// Energies of a step of `length` from the record at its start and the calls in the ring;
    /// rotor heats are added to `heats`.
    pub fn step(
        &self,
        length: f64,
        weights: &[f64],
        first: &[f64],
        ring: &Ring,
        heats: &mut [f64],
    ) -> Powers {
        let mut energy = Powers::default();
        for (stage, weight) in weights.iter().enumerate() {
            if *weight == 0.0 {
                continue;
            }
            let record = if stage == 0 { first } else { ring.record(weights.len() - stage) };
            self.add(length * weight, record, &mut energy, heats);
        }
        energy
    }
}

/// The product of two forms over the state as products of entries.
fn square(weight: f64, first: &StateRow, second: &StateRow) -> Vec<Product> {
    first
        .iter()
        .flat_map(|&(one, left)| {
            second.iter().map(move |&(other, right)| Product {
                factor: weight * left * right,
                first: one,
                second: other,
            })
        })
        .collect()
}

/// A damper's law gives the resisting torque as a positive value; friction gives the torque itself.
fn lost_sign(active: &Active) -> f64 {
    if matches!(active.function, Function::Law(..)) { 1.0 } else { -1.0 }
}
