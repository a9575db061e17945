//! The right-hand side as the library calls it, with what the observer needs of each call.

use crate::equations::assembly::{Active, Assembly, Function, Matrix, Strength};
use crate::equations::frame::Evaluator;
use crate::equations::{PowerKind, dot};
use std::cell::{Cell, RefCell};

/// Calls kept: the twelve stages of the longest method and its rate at the end.
const RING: usize = 16;

/// The powers of one evaluation, W.
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
    /// Adds `weight` times another evaluation's powers.
    pub fn add(&mut self, weight: f64, other: &Powers) {
        self.supplied += weight * other.supplied;
        self.absorbed += weight * other.absorbed;
        self.lost += weight * other.lost;
    }

    #[inline]
    fn drive(&mut self, power: f64) {
        if power >= 0.0 {
            self.supplied += power;
        } else {
            self.absorbed -= power;
        }
    }
}

/// The last calls: rates and powers.
pub struct Ring {
    size: usize,
    next: usize,
    rates: Vec<f64>,
    powers: [Powers; RING],
    heat_count: usize,
    heats: Vec<f64>,
    /// All calls so far.
    pub calls: u64,
}

impl Ring {
    fn new(size: usize, heat_count: usize) -> Self {
        Self {
            size,
            next: 0,
            rates: vec![0.0; size * RING],
            powers: [Powers::default(); RING],
            heat_count,
            heats: vec![0.0; heat_count * RING],
            calls: 0,
        }
    }

    /// Rotor heats of the call `back` calls ago, W.
    pub fn heats(&self, back: usize) -> &[f64] {
        let place = (self.next + RING - 1 - back) % RING;
        &self.heats[place * self.heat_count..(place + 1) * self.heat_count]
    }

    /// Rates of the call `back` calls ago; 0 is the last one.
    pub fn rates(&self, back: usize) -> &[f64] {
        let place = (self.next + RING - 1 - back) % RING;
        &self.rates[place * self.size..(place + 1) * self.size]
    }

    /// Powers of the call `back` calls ago.
    pub fn powers(&self, back: usize) -> &Powers {
        &self.powers[(self.next + RING - 1 - back) % RING]
    }
}

/// The right-hand side of one assembly.
pub struct Rhs<'a> {
    /// What it evaluates.
    pub evaluator: Evaluator<'a>,
    constant: bool,
    ring: RefCell<Ring>,
    fault: Cell<Option<(f64, usize)>>,
}

impl<'a> Rhs<'a> {
    /// The right-hand side of an evaluator's assembly.
    pub fn new(evaluator: Evaluator<'a>) -> Self {
        let constant = !evaluator.assembly.varies;
        let ring =
            RefCell::new(Ring::new(evaluator.equations.size, evaluator.equations.heats.len()));
        Self { evaluator, constant, ring, fault: Cell::new(None) }
    }

    /// The last calls.
    pub fn ring(&self) -> std::cell::Ref<'_, Ring> {
        self.ring.borrow()
    }

    /// Time and state of the first rate that was not a number, if there was one.
    pub fn fault(&self) -> Option<(f64, usize)> {
        self.fault.get()
    }

    /// Rates of the scaled state; the call is remembered.
    #[inline(always)]
    pub fn system(&self, time: f64, state: &[f64], rates: &mut [f64]) {
        let mut ring = self.ring.borrow_mut();
        let span = ring.next * ring.heat_count..(ring.next + 1) * ring.heat_count;
        let powers = self.rates(time, state, rates, &mut ring.heats[span]);
        let mut sum = 0.0;
        for rate in rates.iter() {
            sum += rate;
        }
        if !sum.is_finite() && self.fault.get().is_none() {
            let place = rates.iter().position(|rate| !rate.is_finite()).unwrap_or(0);
            self.fault.set(Some((time, place)));
        }
        let (place, size) = (ring.next, rates.len());
        ring.rates[place * size..(place + 1) * size].copy_from_slice(rates);
        ring.powers[place] = powers;
        ring.next = (place + 1) % RING;
        ring.calls += 1;
    }

    #[inline(always)]
    fn rates(&self, time: f64, state: &[f64], rates: &mut [f64], heats: &mut [f64]) -> Powers {
        let assembly: &Assembly = self.evaluator.assembly;
        match &assembly.matrix {
            Matrix::Dense(columns) => {
                // Plain counted loops: with a length known to the compiler they unroll, and the
                // rates stay in registers.
                let size = rates.len();
                let columns = &columns[..size * size];
                let state = &state[..size];
                rates.fill(0.0);
                for place in 0..size {
                    let value = state[place];
                    let column = &columns[place * size..(place + 1) * size];
                    for row in 0..size {
                        rates[row] += column[row] * value;
                    }
                }
            }
            Matrix::Sparse { starts, entries } => {
                for (rate, span) in rates.iter_mut().zip(starts.windows(2)) {
                    *rate = dot(&entries[span[0]..span[1]], state);
                }
            }
        }
        let mut powers = Powers::default();
        heats.fill(0.0);
        for active in &assembly.active {
            let (input, value) = if self.constant {
                steady(active, state)
            } else {
                self.evaluator.law(active, time, state)
            };
            for &(place, factor) in &active.column {
                rates[place] += factor * value;
            }
            if let Some((place, synchronous_speed)) = active.heat {
                if let Some(heat) = heats.get_mut(place) {
                    *heat = value * (synchronous_speed - input);
                }
            }
            match active.power {
                PowerKind::Drive => {
                    let speed = active.speed.as_ref().map_or(input, |row| dot(row, state));
                    powers.drive(value * speed);
                }
                PowerKind::Lost => powers.lost -= lost_sign(active) * value * input,
                PowerKind::None => {}
            }
        }
        let quiet = &assembly.powers;
        for &(place, weight) in &quiet.rate_losses {
            powers.lost += weight * rates[place] * rates[place];
        }
        for (weight, row) in &quiet.losses {
            let speed = dot(row, state);
            powers.lost += weight * speed * speed;
        }
        for (weight, torque, speed) in &quiet.drives {
            powers.drive(weight * dot(torque, state) * dot(speed, state));
        }
        powers
    }
}

/// A damper's law gives the resisting torque as a positive value; friction gives the torque itself.
#[inline(always)]
fn lost_sign(active: &Active) -> f64 {
    if matches!(active.function, Function::Law(..)) { -1.0 } else { 1.0 }
}

/// Input and value of a term that follows no signal.
#[inline(always)]
fn steady(active: &Active, state: &[f64]) -> (f64, f64) {
    let (offset, parameters) = active.fixed;
    let input = active.input_at(state) + offset;
    let factor = match active.factor {
        Strength::Constant(value) => value,
        Strength::Varying(_) => 1.0,
    };
    let value = match &active.function {
        Function::Law(law, piece) => law.value(input, parameters, *piece),
        Function::Linear => input,
        Function::Products(list) => crate::equations::products(list, state),
        Function::Friction(torque, direction) => -direction * torque,
        Function::FrictionCurve(law, direction) => {
            -direction * crate::equations::frame::sliding_of(law, input * direction)
        }
    };
    (input, factor * value)
}
