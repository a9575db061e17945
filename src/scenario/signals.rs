//! Every place of a scenario where a signal stands, and the rules for what it may show there.

use super::Scenario;
use crate::component::load::{Load, LoadLaw};
use crate::component::motor::{Motor, MotorLaw};
use crate::component::protection::Action;
use crate::diagnostic::Diagnostics;
use crate::quantity::{Dimension, format_number};
use crate::signal::Signal;
use crate::signal::check::{check_named_signals, check_use};
use crate::signal::course::SignalBank;

/// What is asked of the values of a signal at a place.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Bounds {
    /// Anything.
    Free,
    /// Zero or more: a factor on what a law delivers.
    NotNegative,
    /// Zero or more: the share of the rated voltage.
    Voltage,
    /// From 0 to 1: how far a brake is pressed.
    Share,
}

impl Bounds {
    /// The smallest and the largest value allowed.
    pub fn limits(self) -> [f64; 2] {
        match self {
            Self::Free => [f64::NEG_INFINITY, f64::INFINITY],
            Self::NotNegative | Self::Voltage => [0.0, f64::INFINITY],
            Self::Share => [0.0, 1.0],
        }
    }

    /// The rule in words.
    pub fn rule(self) -> &'static str {
        match self {
            Self::Free => "any value is allowed",
            Self::NotNegative => "a scale must not be negative",
            Self::Voltage => "a voltage must not be negative",
            Self::Share => "a brake is applied from 0 to 1",
        }
    }
}

/// The places whose values are bounded, by path; scales that the file leaves out are among them,
/// since a protection may set them.
pub fn bounded(scenario: &Scenario) -> Vec<(String, Bounds)> {
    let mut places: Vec<(String, Bounds)> =
        uses(scenario).into_iter().map(|place| (place.path, place.bounds)).collect();
    let absent = scenario
        .motors
        .iter()
        .filter(|motor| motor.scale.is_none())
        .map(|motor| (format!("motors.{}.scale", motor.name), motor_bounds(motor)))
        .chain(
            scenario
                .loads
                .iter()
                .filter(|load| load.scale.is_none())
                .map(|load| (format!("loads.{}.scale", load.name), load_bounds(load))),
        );
    places.extend(absent);
    places.retain(|(_, bounds)| *bounds != Bounds::Free);
    places
}

/// A place where a signal stands.
struct Use<'a> {
    path: String,
    signal: &'a Signal,
    dimension: Dimension,
    bounds: Bounds,
}

/// Rounding that is no fault: a sine of 0.5 about 0.5 may come out a little below zero.
pub const ROUNDING: f64 = 1e-9;

/// Checks all signals of a scenario: their names, dimensions and values.
pub(super) fn check(scenario: &Scenario, faults: &mut Diagnostics) {
    let before = faults.len();
    check_named_signals(&scenario.signals, faults);
    let uses = uses(scenario);
    for place in &uses {
        check_use(&place.path, place.signal, place.dimension, &scenario.signals, faults);
    }
    let sound = !faults.iter().skip(before).any(|fault| fault.severity.is_error());
    if sound {
        check_values(scenario, &uses, faults);
        check_actions(scenario, faults);
    }
    for place in &uses {
        warn_of_held_ends(&place.path, place.signal, scenario.duration, faults);
    }
    for named in &scenario.signals {
        let path = format!("signals.{}", named.name);
        warn_of_held_ends(&path, &named.signal, scenario.duration, faults);
    }
}

/// Values that a place does not allow, where the file shows them.
fn check_values(scenario: &Scenario, uses: &[Use<'_>], faults: &mut Diagnostics) {
    let mut bank: Option<SignalBank> = None;
    for place in uses.iter().filter(|place| place.bounds != Bounds::Free) {
        let (low, high) = if let Signal::Constant(value) = place.signal {
            if matches!(place.bounds, Bounds::NotNegative | Bounds::Voltage) {
                continue; // Told when it was read.
            }
            (*value, *value)
        } else {
            if !scenario.duration.is_finite() {
                return;
            }
            let bank = bank.get_or_insert_with(|| SignalBank::new(&scenario.signals));
            let id = bank.add(&place.path, place.signal);
            bank.range_on(id, 0.0, scenario.duration, &bank.no_overrides())
        };
        let shown = |value: f64| format_number(value, 4);
        match place.bounds {
            Bounds::NotNegative if low < -ROUNDING => faults.error_hint(
                place.path.as_str(),
                format!("the scale reaches {}, but it must not be negative", shown(low)),
                "`reversed: true` mirrors a law; only a prescribed torque may be scaled below zero",
            ),
            Bounds::Voltage if low < -ROUNDING => faults.error(
                place.path.as_str(),
                format!("the voltage reaches {}, but it must not be negative", shown(low)),
            ),
            Bounds::Share if low < -ROUNDING || high > 1.0 + ROUNDING => {
                let outside = if low < -ROUNDING { low } else { high };
                faults.error(
                    place.path.as_str(),
                    format!(
                        "the brake is applied from 0 to 1, but this reaches {}",
                        shown(outside)
                    ),
                );
            }
            _ => {}
        }
    }
}

/// The same rules for what protections set.
fn check_actions(scenario: &Scenario, faults: &mut Diagnostics) {
    let places = uses(scenario);
    for protection in &scenario.protections {
        for (index, action) in protection.then.iter().enumerate() {
            let Action::Set { signal, to, .. } = action else { continue };
            let circuit = scenario.motors.iter().find(|motor| {
                *signal == format!("motors.{}.scale", motor.name)
                    && matches!(motor.law, MotorLaw::InductionCircuit { .. })
            });
            if circuit.is_some() {
                faults.error_hint(
                    format!("protections.{}.then.{index}.set", protection.name),
                    "`scale` has no meaning for `induction_circuit`",
                    "`law.induction_circuit.connected` switches it, `voltage` lowers its torque",
                );
                continue;
            }
            let bounds = match places.iter().find(|place| place.path == *signal) {
                Some(place) => place.bounds,
                None if signal.ends_with(".scale") => scale_bounds(scenario, signal),
                None => Bounds::Free,
            };
            let [low, high] = bounds.limits();
            if to.is_finite() && !(low..=high).contains(to) {
                let path = format!("protections.{}.then.{index}.to", protection.name);
                faults.error(path, bounds.rule());
            }
        }
    }
}

/// The bounds of a scale that the file leaves out.
fn scale_bounds(scenario: &Scenario, path: &str) -> Bounds {
    let named = |section: &str, name: &str| path == format!("{section}.{name}.scale");
    let motor = scenario.motors.iter().find(|motor| named("motors", &motor.name));
    let load = scenario.loads.iter().find(|load| named("loads", &load.name));
    match (motor, load) {
        (Some(motor), _) => motor_bounds(motor),
        (_, Some(load)) => load_bounds(load),
        _ => Bounds::Free,
    }
}

fn motor_bounds(motor: &Motor) -> Bounds {
    match motor.law {
        MotorLaw::Prescribed { .. } => Bounds::Free,
        _ => Bounds::NotNegative,
    }
}

fn load_bounds(load: &Load) -> Bounds {
    match load.law {
        LoadLaw::Prescribed { .. } => Bounds::Free,
        _ => Bounds::NotNegative,
    }
}

/// Points and tables hold their end values; a run that goes beyond them is told.
fn warn_of_held_ends(path: &str, signal: &Signal, duration: f64, faults: &mut Diagnostics) {
    signal.visit(path, &mut |path, inside| {
        let (rows, path) = match inside {
            Signal::Points(rows) => (rows, format!("{path}.points")),
            Signal::Table { rows, .. } => (rows, format!("{path}.table.file")),
            Signal::Turbulence(spectrum) if spectrum.period() < duration => {
                faults.warning(
                    format!("{path}.turbulence"),
                    format!(
                        "the wind repeats after {} s; a lower `highest_frequency` makes that longer",
                        format_number(spectrum.period(), 4)
                    ),
                );
                return;
            }
            _ => return,
        };
        let (Some(first), Some(last)) = (rows.first(), rows.last()) else { return };
        let shown = |value: f64| format_number(value, 4);
        if rows.len() > 1 && first[0] > 0.0 {
            faults.warning(
                path.as_str(),
                format!("it begins at {} s; until then its first value holds", shown(first[0])),
            );
        }
        if rows.len() > 1 && last[0] < duration {
            faults.warning(
                path.as_str(),
                format!(
                    "it ends at {} s, the run at {} s; its last value holds in between",
                    shown(last[0]),
                    shown(duration)
                ),
            );
        }
    });
}

/// All places of signals in the train, in file order.
fn uses(scenario: &Scenario) -> Vec<Use<'_>> {
    let mut uses = Vec::new();
    for motor in &scenario.motors {
        let path = format!("motors.{}", motor.name);
        if let Some(scale) = &motor.scale {
            uses.push(Use {
                path: format!("{path}.scale"),
                signal: scale,
                dimension: Dimension::One,
                bounds: motor_bounds(motor),
            });
        }
        motor_signals(&path, &motor.law, &mut uses);
    }
    for load in &scenario.loads {
        let path = format!("loads.{}", load.name);
        if let Some(scale) = &load.scale {
            uses.push(Use {
                path: format!("{path}.scale"),
                signal: scale,
                dimension: Dimension::One,
                bounds: load_bounds(load),
            });
        }
        load_signals(&path, &load.law, &mut uses);
    }
    for brake in &scenario.brakes {
        uses.push(Use {
            path: format!("brakes.{}.applied", brake.name),
            signal: &brake.applied,
            dimension: Dimension::One,
            bounds: Bounds::Share,
        });
    }
    uses
}

fn motor_signals<'a>(path: &str, law: &'a MotorLaw, uses: &mut Vec<Use<'a>>) {
    let mut add = |law: &str, key: &str, signal, dimension| {
        let bounds = if key == "voltage" { Bounds::Voltage } else { Bounds::Free };
        uses.push(Use { path: format!("{path}.law.{law}.{key}"), signal, dimension, bounds });
    };
    match law {
        MotorLaw::RatingPlate { voltage, .. } => {
            add("rating_plate", "voltage", voltage, Dimension::One);
        }
        MotorLaw::Induction { voltage, .. } => add("induction", "voltage", voltage, Dimension::One),
        MotorLaw::Curve { voltage, .. } => add("curve", "voltage", voltage, Dimension::One),
        MotorLaw::Prescribed { torque } => add("prescribed", "torque", torque, Dimension::Torque),
        MotorLaw::SpeedLoop { speed, feed_forward, .. } => {
            add("speed_loop", "speed", speed, Dimension::Speed);
            add("speed_loop", "feed_forward", feed_forward, Dimension::Torque);
        }
        MotorLaw::TorqueLoop { torque, .. } => {
            add("torque_loop", "torque", torque, Dimension::Torque);
        }
        MotorLaw::InductionCircuit { voltage, connected, .. } => {
            add("induction_circuit", "voltage", voltage, Dimension::One);
            add("induction_circuit", "connected", connected, Dimension::One);
        }
        MotorLaw::OptimalPower { .. } => {}
    }
}

fn load_signals<'a>(path: &str, law: &'a LoadLaw, uses: &mut Vec<Use<'a>>) {
    let mut add = |key: &str, signal, dimension| {
        uses.push(Use {
            path: format!("{path}.law.{key}"),
            signal,
            dimension,
            bounds: Bounds::Free,
        });
    };
    match law {
        LoadLaw::Prescribed { torque } => add("prescribed.torque", torque, Dimension::Torque),
        LoadLaw::AxialRotor { flow, pitch, pitch_loop, .. } => {
            add("axial_rotor.flow", flow, Dimension::LinearSpeed);
            match pitch_loop {
                Some(pitch_loop) => {
                    let speed = &pitch_loop.speed;
                    add("axial_rotor.pitch_loop.speed", speed, Dimension::Speed);
                }
                None => add("axial_rotor.pitch", pitch, Dimension::Angle),
            }
        }
        LoadLaw::Propeller { advance, .. } => {
            add("propeller.advance", advance, Dimension::LinearSpeed);
        }
        LoadLaw::PowerLaw { .. }
        | LoadLaw::Friction { .. }
        | LoadLaw::Viscous { .. }
        | LoadLaw::Curve { .. }
        | LoadLaw::Periodic { .. }
        | LoadLaw::Reciprocating { .. } => {}
    }
}
