//! The region from which a gear falls back into step under the load at the end of a run.
//!
//! ```text
//! J_e phi'' + D phi' + damper(phi') + K law(phi) = T        shafts rigid, load constant
//! saddle: law(phi) = T/K beyond the peak;  its stable directions are the borders
//! ```
//! The borders are followed from the saddle backwards in time as slip speed over load angle:
//! `dw/dphi = (T - D w - damper(w) - K law(phi)) / (J_e w)`.

use crate::equations::Equations;
use crate::equations::Owner;
use crate::equations::channels::ends_of;
use crate::model::elimination::{self, Constraint};
use crate::model::magnet::Magnet;
use crate::results::{RunResult, Separatrix};
use std::f64::consts::{PI, TAU};

/// Steps of a border over one electrical turn.
const STEPS: usize = 4000;

/// The separatrix of a magnet for the torques at the end of a run; `None` where there is no saddle.
pub fn find(equations: &Equations, result: &RunResult, magnet: usize) -> Option<Separatrix> {
    let law = equations.model.magnets.get(magnet)?;
    if !law.phase_inertia.is_finite() {
        return None;
    }
    let load = end_load(equations, result, law)?;
    let share = load / law.amplitude;
    let rest = law.law.stable_angle_for(share)?;
    let beyond = law.law.unstable_angle_for(share)?;
    // The saddle ahead and the one a turn behind it bound the well.
    let ahead = if beyond > rest { beyond } else { beyond + TAU };
    let behind = ahead - TAU;
    let upper = border(law, load, ahead, -1.0, -PI);
    let lower = border(law, load, behind, 1.0, PI);
    if upper.len() < 2 || lower.len() < 2 {
        return None;
    }
    let shown = if ahead <= PI { ahead } else { behind };
    Some(Separatrix {
        load: "load at the end of the run".to_owned(),
        saddle: shown,
        rest,
        upper,
        lower,
    })
}

/// Torque along the phase from everything outside the magnet, at the end of a run, N*m per electrical rad.
fn end_load(equations: &Equations, result: &RunResult, magnet: &Magnet) -> Option<f64> {
    let model = &equations.model;
    let scenario = &model.scenario;
    let mut stiff: Vec<Constraint> = model.constraints.clone();
    stiff.extend(model.shafts.iter().filter(|shaft| !shaft.rigid).map(|shaft| Constraint {
        path: String::new(),
        label: String::new(),
        row: shaft.row(),
    }));
    let inertias: Vec<f64> = scenario.bodies.iter().map(|body| body.inertia).collect();
    let rigid = elimination::reduce_quietly(&stiff, &inertias);
    let along = rigid.dense(&magnet.row()).transpose() * &rigid.inverse_mass;
    let value = |name: &str| {
        result.channels.iter().find(|channel| channel.name == name).map(|channel| channel.last)
    };
    let mut sum = 0.0;
    let mut add = |owner: Owner, name: &str| {
        let (body, against) = ends_of(equations, owner);
        if let Some(torque) = value(&format!("{name}.torque")) {
            let row = crate::model::difference(body, against);
            sum += torque * (&along * rigid.dense(&row))[0];
        }
    };
    for (index, motor) in scenario.motors.iter().enumerate() {
        add(Owner::Motor(index), &motor.name);
    }
    for (index, load) in scenario.loads.iter().enumerate() {
        add(Owner::Load(index), &load.name);
    }
    for (index, brake) in scenario.brakes.iter().enumerate() {
        add(Owner::Brake(index), &brake.name);
    }
    let load = sum * magnet.phase_inertia;
    load.is_finite().then_some(load)
}

/// One border from a saddle, in the direction `side` of the load angle, up to `limit`; rising angles.
fn border(magnet: &Magnet, load: f64, saddle: f64, side: f64, limit: f64) -> Vec<[f64; 2]> {
    let inertia = magnet.phase_inertia;
    let damper = |w: f64| {
        let fading = magnet.fading.map_or(0.0, |fading| {
            let speed = w / fading.count;
            let share = speed / fading.peak_at;
            fading.coefficient * speed / (1.0 + share * share) / fading.count
        });
        magnet.damping * w + fading
    };
    let damping = damper(1e-9) / 1e-9;
    let slope = magnet.law.slope(saddle);
    // Stable direction of the saddle: J x^2 + D x + K law' = 0, the negative root.
    let root =
        (-damping - (damping * damping - 4.0 * inertia * slope).max(0.0).sqrt()) / (2.0 * inertia);
    let rate = |phi: f64, w: f64| (load - damper(w) - magnet.law.value(phi)) / (inertia * w);
    let step = side * TAU / STEPS as f64;
    let mut phi = saddle + step;
    let mut w = root * step;
    let mut points = vec![[saddle, 0.0], [phi, w]];
    while side * (limit - phi) > 1e-12 && points.len() <= 2 * STEPS {
        let length = if side * (limit - phi) < step.abs() { limit - phi } else { step };
        let k1 = rate(phi, w);
        let k2 = rate(phi + 0.5 * length, w + 0.5 * length * k1);
        let k3 = rate(phi + 0.5 * length, w + 0.5 * length * k2);
        let k4 = rate(phi + length, w + length * k3);
        w += length / 6.0 * (k1 + 2.0 * k2 + 2.0 * k3 + k4);
        phi += length;
        if !w.is_finite() || w * root * step <= 0.0 {
            break;
        }
        points.push([phi, w]);
    }
    points.retain(|point| (-PI..=PI).contains(&point[0]));
    let mut points: Vec<[f64; 2]> = points.into_iter().step_by(10).collect();
    if side < 0.0 {
        points.reverse();
    }
    points
}
