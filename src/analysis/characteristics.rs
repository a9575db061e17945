//! Motor and load torque over speed at the motor shaft, for a chart of a start.

use super::train::Train;
use crate::component::law::Law;
use crate::component::load::LoadLaw;
use crate::equations::{Equations, Owner, Shape};
use crate::results::RunResult;
use crate::signal::course::SlotId;

/// Points of a curve.
const POINTS: usize = 241;

/// Curves of torque over speed, referred to the motor's body.
#[derive(Clone, Debug, PartialEq)]
pub struct Characteristics {
    /// The motor.
    pub motor: String,
    /// Its body.
    pub body: String,
    /// Motor torque, `[rad/s, N*m]`, at the largest voltage and scale that the file shows.
    pub drive: Vec<[f64; 2]>,
    /// Load torque in step, positive where it brakes, at the largest scale that the file shows.
    pub load: Option<Vec<[f64; 2]>>,
    /// Where the run came to rest: speed and torque.
    pub operating_point: Option<[f64; 2]>,
}

/// The curves of the first motor that has a curve over speed.
pub fn find(equations: &Equations, train: &Train, result: &RunResult) -> Option<Characteristics> {
    let scenario = &equations.model.scenario;
    let term = equations.terms.iter().find(|term| {
        matches!(term.owner, Owner::Motor(_))
            && matches!(
                term.shape,
                Shape::Law(
                    Law::RatingPlate(_) | Law::Induction(_) | Law::MotorCurve(_) | Law::Circuit(_)
                )
            )
    })?;
    let (Owner::Motor(index), Shape::Law(law)) = (term.owner, &term.shape) else { return None };
    let motor = &scenario.motors[index];
    let sign = if motor.reversed { -1.0 } else { 1.0 };
    let channel = |name: String| result.channels.iter().find(|channel| channel.name == name);
    let speed = channel(format!("{}.speed", motor.body))?;
    let top = match equations.heats.iter().find(|(place, _)| *place == index) {
        Some((_, synchronous)) => sign * synchronous,
        None => sign * law.boundaries().last().copied()?,
    };
    let top = if top.abs() > 0.0 { top } else { speed.max };
    let sense = top.signum();
    let free = equations.bank.no_overrides();
    let most = |slot| equations.bank.range_on(slot, 0.0, scenario.duration, &free).1;
    let largest = |slots: &[(SlotId, i32)]| -> f64 {
        slots.iter().map(|(slot, power)| most(*slot).powi(*power)).product()
    };
    let strength = largest(&term.factor.slots);
    // A circuit is drawn at its largest voltage, on the line.
    let parameters = term.parameters.map(|slot| slot.map_or(1.0, most));
    let value = |speed: f64| {
        let piece = law.piece(sign * speed, parameters);
        strength * sense * sign * law.value(sign * speed, parameters, piece)
    };
    let grid = |place: usize| top * place as f64 / (POINTS - 1) as f64;
    let drive = (0..POINTS).map(|place| [sense * grid(place), value(grid(place))]).collect();
    let own = train.bodies.iter().find(|body| body.name == motor.body)?.ratio?;
    let mut load = vec![0.0; POINTS];
    let mut any = false;
    for typed in &scenario.loads {
        let Some(ratio) =
            train.bodies.iter().find(|body| body.name == typed.body).and_then(|body| body.ratio)
        else {
            continue;
        };
        if typed.against.is_some() {
            continue;
        }
        let referred = ratio / own;
        let scale = equations.bank.find(&format!("loads.{}.scale", typed.name));
        let scale = scale.map_or(1.0, |slot| largest(&[(slot, 1)]));
        for (slot, sum) in load.iter_mut().enumerate() {
            if let Some(torque) = torque_at(&typed.law, grid(slot) * referred, typed.reversed) {
                *sum -= sense * scale * torque * referred;
                any = true;
            }
        }
    }
    let load = any.then(|| {
        load.iter().enumerate().map(|(place, torque)| [sense * grid(place), *torque]).collect()
    });
    let torque = channel(format!("{}.torque", motor.name))?;
    let settled =
        result.gears.iter().all(|gear| gear.state_at_end == crate::results::GearState::Synchronous);
    let operating_point =
        (settled && result.completed).then_some([sense * speed.last, sense * torque.last]);
    Some(Characteristics {
        motor: motor.name.clone(),
        body: motor.body.clone(),
        drive,
        load,
        operating_point,
    })
}

/// Torque of a load on its body at a speed of it; `None` for loads that follow time.
fn torque_at(law: &LoadLaw, speed: f64, reversed: bool) -> Option<f64> {
    let sign = if reversed { -1.0 } else { 1.0 };
    match law {
        LoadLaw::Friction { sliding, .. } => {
            Some(if speed == 0.0 { 0.0 } else { -sliding.copysign(speed) })
        }
        LoadLaw::Viscous { coefficient } => Some(-coefficient * speed),
        LoadLaw::PowerLaw { .. } => law
            .scalar()
            .map(|law| sign * law.value(sign * speed, [0.0; 2], law.piece_at(sign * speed))),
        LoadLaw::Curve { .. } => match law.scalar()? {
            Law::LoadCurve(curve) => Some(-curve.sliding(speed.abs()).copysign(speed)),
            _ => None,
        },
        _ => None,
    }
}
