//! The values of all laws and channels at one instant.

use super::assembly::{Active, Assembly, Function, Strength};
use super::channels::{ChannelForm, LinearForm};
use super::holding::{Holding, Limits, hold};
use super::{Equations, Factor, Owner, Shape, dot, thermal};
use crate::component::channel::MagneticChannel;
use crate::component::law::Law;
use crate::signal::course::Overrides;
use std::f64::consts::{PI, TAU};

/// Counts and sums that are not part of the state.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Counters {
    /// Whole electrical turns taken out of each phase state.
    pub wells: Vec<i64>,
    /// Slips of each magnet.
    pub slips: Vec<u32>,
    /// Forward minus backward slips.
    pub net_slips: Vec<i32>,
    /// Sum of each independent speed over time, rad (physical).
    pub angles: Vec<f64>,
}

/// Values at one instant.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Frame {
    /// The instant, s.
    pub time: f64,
    /// Law values by place: terms, frictions (torque along their row), the constant 1.
    pub laws: Vec<f64>,
    /// Inputs of the laws by place.
    pub inputs: Vec<f64>,
    /// What the stuck elements do.
    pub holding: Option<Holding>,
    /// Channel values, SI; only those asked for are up to date.
    pub channels: Vec<f64>,
}

/// Evaluates laws and channels of one mode.
#[derive(Clone, Copy)]
pub struct Evaluator<'a> {
    /// The equations.
    pub equations: &'a Equations,
    /// Their mode.
    pub assembly: &'a Assembly,
    /// Signals that protections have taken over.
    pub overrides: &'a Overrides,
}

impl Evaluator<'_> {
    /// The value of a factor, on the branch of the stretch.
    #[inline]
    pub fn strength(&self, strength: &Strength, time: f64) -> f64 {
        match strength {
            Strength::Constant(value) => *value,
            Strength::Varying(factor) => self.factor(factor, time),
        }
    }

    /// The value of a factor that follows signals.
    pub fn factor(&self, factor: &Factor, time: f64) -> f64 {
        factor.slots.iter().fold(1.0, |value, &(slot, power)| {
            let signal =
                self.equations.bank.value_in(slot, time, self.assembly.start, self.overrides);
            value * if power == 1 { signal } else { signal.powi(power) }
        })
    }

    /// Where a term stands on the axis of its law's boundaries, and the size of that axis.
    pub fn place_on_axis(&self, term: usize, state: &[f64], frame: &Frame) -> (f64, f64) {
        let input = frame.inputs[term];
        let size = self.equations.input_size_at(term);
        let Some(term) = self.equations.terms.get(term) else { return (input, size) };
        match &term.shape {
            Shape::Law(law) if law.piece_follows_signals() => {
                let signal = |slot| {
                    self.equations.bank.value_in(
                        slot,
                        frame.time,
                        self.assembly.start,
                        self.overrides,
                    )
                };
                let parameters =
                    super::parameters_at(term.parameters, &term.by_state, state, signal);
                (law.axis(input, parameters), 1.0)
            }
            _ => (input, size),
        }
    }

    /// Input of an active term.
    #[inline]
    fn input(&self, active: &Active, time: f64, state: &[f64]) -> f64 {
        let mut input = active.input_at(state);
        for &(factor, slot) in &active.offsets {
            let bank = &self.equations.bank;
            input += factor * bank.value_in(slot, time, self.assembly.start, self.overrides);
        }
        input
    }

    /// Input and value of an active term.
    #[inline]
    pub fn law(&self, active: &Active, time: f64, state: &[f64]) -> (f64, f64) {
        let signal =
            |slot| self.equations.bank.value_in(slot, time, self.assembly.start, self.overrides);
        let input = self.input(active, time, state);
        let value = match &active.function {
            Function::Law(law, piece) => {
                let parameters =
                    super::parameters_at(active.parameters, &active.by_state, state, signal);
                law.value(input, parameters, *piece)
            }
            Function::Pair(law, second) => law.value(input, dot(second, state)),
            Function::Linear => input,
            Function::Products(list) => super::products(list, state),
            Function::Warm(law, gains) => {
                law.value(input, [0.0; 2], 0) * thermal::product(gains, state)
            }
            Function::Friction(torque, direction) => -direction * torque,
        };
        (input, self.strength(&active.factor, time) * value)
    }

    /// Breakaway limits of a friction element at a time.
    pub fn limit(&self, friction: usize, time: f64) -> Limits {
        let friction = &self.equations.frictions[friction];
        friction.breakaway.scaled(self.factor(&friction.factor, time))
    }

    /// Law values and holding torques.
    pub fn laws(&self, time: f64, state: &[f64], frame: &mut Frame) {
        self.all_laws(time, state, None, frame);
    }

    /// Law values and holding torques; `known` are the values of the active terms where they are
    /// known already.
    fn all_laws(&self, time: f64, state: &[f64], known: Option<&[f64]>, frame: &mut Frame) {
        let assembly = self.assembly;
        frame.time = time;
        frame.laws.clear();
        frame.laws.resize(assembly.law_count, 0.0);
        frame.inputs.clear();
        frame.inputs.resize(assembly.law_count, 0.0);
        let mut take = |active: &Active, (input, value): (f64, f64)| {
            frame.inputs[active.place] = input;
            frame.laws[active.place] = value;
        };
        match known {
            Some(values) => {
                for (active, value) in assembly.active.iter().zip(values) {
                    take(active, (self.input(active, time, state), *value));
                }
            }
            None => {
                for active in &assembly.active {
                    take(active, self.law(active, time, state));
                }
            }
        }
        for active in &assembly.folded {
            take(active, self.law(active, time, state));
        }
        frame.holding = None;
        if !assembly.stuck.is_empty() {
            let drive: Vec<f64> = assembly
                .stuck_drive
                .iter()
                .map(|(row, laws)| {
                    dot(row, state)
                        + laws
                            .iter()
                            .map(|&(place, factor)| factor * frame.laws[place])
                            .sum::<f64>()
                })
                .collect();
            let limits: Vec<Limits> =
                assembly.stuck.iter().map(|index| self.limit(*index, time)).collect();
            let holding = hold(&assembly.stuck_compliance, &drive, &limits);
            for (index, torque) in assembly.stuck.iter().zip(&holding.torque) {
                frame.laws[self.equations.terms.len() + index] = *torque;
            }
            frame.holding = Some(holding);
        }
    }

    /// Law values and the channels in `wanted` (all when it is `None`).
    pub fn evaluate(
        &self,
        time: f64,
        state: &[f64],
        counters: &Counters,
        wanted: Option<&[usize]>,
        frame: &mut Frame,
    ) {
        self.all_laws(time, state, None, frame);
        self.channels(time, state, counters, wanted, frame);
    }

    /// The same where the values of the active terms are known.
    pub fn evaluate_known(
        &self,
        time: f64,
        state: &[f64],
        known: &[f64],
        counters: &Counters,
        wanted: Option<&[usize]>,
        frame: &mut Frame,
    ) {
        self.all_laws(time, state, Some(known), frame);
        self.channels(time, state, counters, wanted, frame);
    }

    fn channels(
        &self,
        time: f64,
        state: &[f64],
        counters: &Counters,
        wanted: Option<&[usize]>,
        frame: &mut Frame,
    ) {
        let mut channels = std::mem::take(&mut frame.channels);
        channels.resize(self.assembly.channels.len(), 0.0);
        // The commonest forms stand in line: as a call each costs twice as much.
        let value = |form: &ChannelForm| match form {
            ChannelForm::Linear(form) => linear(form, state, frame),
            ChannelForm::Power(torque, speed) => linear(torque, state, frame) * dot(speed, state),
            other => self.channel(other, time, state, counters, frame),
        };
        match wanted {
            Some(wanted) if wanted.len() < channels.len() => {
                for &index in wanted {
                    channels[index] = value(&self.assembly.channels[index]);
                }
            }
            _ => {
                for (channel, form) in channels.iter_mut().zip(&self.assembly.channels) {
                    *channel = value(form);
                }
            }
        }
        frame.channels = channels;
    }

    fn channel(
        &self,
        form: &ChannelForm,
        time: f64,
        state: &[f64],
        counters: &Counters,
        frame: &Frame,
    ) -> f64 {
        match form {
            ChannelForm::Linear(form) => linear(form, state, frame),
            ChannelForm::Power(torque, speed) => linear(torque, state, frame) * dot(speed, state),
            ChannelForm::Angle(row) => {
                row.iter().map(|&(place, share)| share * counters.angles[place]).sum()
            }
            ChannelForm::Magnet(index, what) => self.magnet(*index, *what, state, counters, frame),
            ChannelForm::Loss(squares, laws) => {
                let damping: f64 =
                    squares.iter().map(|(weight, row)| weight * dot(row, state).powi(2)).sum();
                let others: f64 = laws.iter().map(|place| self.lost(*place, state, frame)).sum();
                damping + others
            }
            ChannelForm::Rotor(term, what) => self.rotor(*term, *what, time, state),
            ChannelForm::Vector([a, b], size) => size * state[*a].hypot(state[*b]),
            ChannelForm::CircuitCurrent(term) => self.circuit_current(*term, time, state),
        }
    }

    fn lost(&self, place: usize, state: &[f64], frame: &Frame) -> f64 {
        let speed = match place.checked_sub(self.equations.terms.len()) {
            Some(friction) => dot(&self.equations.frictions[friction].speed, state),
            None => frame.inputs[place],
        };
        (frame.laws[place] * speed).abs()
    }

    fn magnet(
        &self,
        index: usize,
        what: MagneticChannel,
        state: &[f64],
        counters: &Counters,
        frame: &Frame,
    ) -> f64 {
        let place = self.equations.phase_state[index];
        let phase = state[place] * self.equations.scale[place];
        let magnet = &self.equations.model.magnets[index];
        match what {
            MagneticChannel::Phase => phase + TAU * counters.wells[index] as f64,
            MagneticChannel::LoadAngle => load_angle(phase),
            MagneticChannel::Slips => f64::from(counters.slips[index]),
            MagneticChannel::NetSlips => f64::from(counters.net_slips[index]),
            MagneticChannel::ShortOfPeak => {
                let [low, high] = magnet.law.peaks();
                f64::from(u8::from((low..=high).contains(&load_angle(phase))))
            }
            MagneticChannel::PullOutShare => {
                let term = self.equations.terms.iter().position(|term| {
                    term.owner == Owner::Magnet(index)
                        && matches!(
                            term.shape,
                            Shape::Law(Law::Magnet(_)) | Shape::Warm(Law::Magnet(_), _)
                        )
                });
                let torque = match term {
                    // Of what the magnets give at their temperature of the moment.
                    Some(place) if !magnet.warmth.is_steady() => {
                        magnet.law.value(frame.inputs[place])
                    }
                    Some(place) => frame.laws[place],
                    None => 0.0,
                };
                let [low, high] = magnet.law.peak_values();
                let peak = if torque >= 0.0 { high } else { low };
                (torque / (magnet.amplitude * peak)).clamp(0.0, 1.0)
            }
            _ => 0.0,
        }
    }
}

#[inline(always)]
fn linear(form: &LinearForm, state: &[f64], frame: &Frame) -> f64 {
    let laws: f64 = form.laws.iter().map(|&(place, factor)| factor * frame.laws[place]).sum();
    dot(&form.state, state) + laws + form.constant
}

/// Sliding torque of a load curve at a speed's magnitude.
#[inline]
pub fn sliding_of(law: &Law, speed: f64) -> f64 {
    match law {
        Law::LoadCurve(curve) => curve.sliding(speed.max(0.0)),
        _ => 0.0,
    }
}

/// A phase taken into (-pi, pi].
#[inline]
pub fn load_angle(phase: f64) -> f64 {
    let wrapped = phase - TAU * (phase / TAU).round();
    if wrapped <= -PI { wrapped + TAU } else { wrapped }
}
