//! What the strip of a run chart shows of the signals.

use super::chart::train::{SignalBar, SignalBars};
use crate::analysis::train::Train;
use crate::equations::Equations;
use crate::scenario::Scenario;
use crate::signal::Signal;
use crate::signal::course::SignalBank;

/// Speeds below this are standstill, rad/s.
const AT_REST: f64 = 1e-9;

/// Pulses and steps of prescribed torques and brakes as bars; kinks of all signals as dotted lines.
pub(super) fn bars(scenario: &Scenario, equations: &Equations) -> (Vec<SignalBars>, Vec<f64>) {
    let mut rows = Vec::new();
    let mut add = |name: &str, signal: &Signal, text: &dyn Fn(f64) -> String| {
        let bar = match signal {
            Signal::Pulse { start, end, peak, .. } => (*start, *end, *peak),
            Signal::Step { at, to, .. } if *to != 0.0 => (*at, scenario.duration, *to),
            Signal::Ramp { start, to, .. } if *to != 0.0 => (*start, scenario.duration, *to),
            _ => return,
        };
        let (start, end) = (bar.0.max(0.0), bar.1.min(scenario.duration));
        if end > start {
            let bars = vec![SignalBar { start, end, text: text(bar.2) }];
            rows.push(SignalBars { label: name.replace('_', " "), bars });
        }
    };
    let torque = |value: f64| super::chart::number::number(value, 4) + "\u{a0}N·m";
    let share = |value: f64| super::chart::number::number(100.0 * value, 3) + "\u{a0}%";
    for motor in &scenario.motors {
        if let crate::component::motor::MotorLaw::Prescribed { torque: signal } = &motor.law {
            add(&motor.name, signal, &torque);
        }
        if let Some(signal) = &motor.scale {
            add(&motor.name, signal, &share);
        }
    }
    for load in &scenario.loads {
        if let crate::component::load::LoadLaw::Prescribed { torque: signal } = &load.law {
            add(&load.name, signal, &torque);
        }
        if let Some(signal) = &load.scale {
            add(&load.name, signal, &share);
        }
    }
    for brake in &scenario.brakes {
        add(&brake.name, &brake.applied, &share);
    }
    let overrides = equations.bank.no_overrides();
    let mut steps = Vec::new();
    let mut time = 0.0;
    while let Some(next) = equations.bank.next_kink(time, &overrides) {
        if next >= scenario.duration || steps.len() > 24 {
            break;
        }
        steps.push(next);
        time = next;
    }
    // A measured series has a corner at every row: lines for all of them would hide the curves.
    if steps.len() > 24 {
        steps.clear();
    }
    rows.truncate(3);
    (rows, steps)
}

/// Brakes and frictions that are not stuck when the run begins: what they hold turns already, or
/// they are not pressed.
pub(super) fn idle_at_start(scenario: &Scenario, figures: &Train) -> Vec<String> {
    let speed = |name: &str| {
        figures.bodies.iter().find(|body| body.name == name).map_or(0.0, |body| body.start_speed)
    };
    let turns = |body: &str, against: Option<&String>| {
        (speed(body) - against.map_or(0.0, |other| speed(other))).abs() > AT_REST
    };
    let mut bank = SignalBank::new(&scenario.signals);
    let mut is_zero = |name: &str, signal: &Signal| {
        let id = bank.add(name, signal);
        bank.value(id, 0.0, &bank.no_overrides()) == 0.0
    };
    let brakes = scenario.brakes.iter().map(|brake| {
        (&brake.name, Some(&brake.applied), turns(&brake.body, brake.against.as_ref()))
    });
    let loads = scenario
        .loads
        .iter()
        .map(|load| (&load.name, load.scale.as_ref(), turns(&load.body, load.against.as_ref())));
    brakes
        .chain(loads)
        .filter(|(name, signal, turns)| {
            *turns || signal.is_some_and(|signal| is_zero(name, signal))
        })
        .map(|(name, ..)| name.clone())
        .collect()
}
