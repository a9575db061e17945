//! The region from which a gear falls back into step under the load at the end of a run.
//!
//! ```text
//! J_e phi'' + D phi' + damper(phi') + K law(phi) = T        shafts rigid, load constant
//! saddle: law(phi) = T/K beyond the peak;  its stable directions are the borders
//! ```
//! The borders are followed from the saddle backwards in time.

use crate::equations::Equations;
use crate::equations::Owner;
use crate::equations::channels::ends_of;
use crate::model::elimination::{self, Constraint};
use crate::model::magnet::Magnet;
use crate::results::{RunResult, Separatrix};
use std::f64::consts::{PI, TAU};

/// Steps for each radian of the fastest swing.
const STEPS_PER_RADIAN: f64 = 200.0;

/// Steps after which a border that still circles is left.
const LONGEST: usize = 200_000;

/// Distance from the saddle at which a border is begun, electrical rad.
const START: f64 = 1e-4;

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
    let from_ahead = border(law, load, ahead, -1.0);
    let from_behind = border(law, load, behind, 1.0);
    // Under load with little damping a border turns back before the saddle behind: it then closes
    // the region by itself, and what lies beyond its tip is not caught in this well.
    let (upper, lower) = if from_ahead.after.len() > 1 && from_ahead.after[0][0] > -PI {
        (within(&from_ahead.first), within(&from_ahead.after))
    } else if from_behind.after.len() > 1 && from_behind.after[0][0] < PI {
        (within(&from_behind.after), within(&from_behind.first))
    } else {
        (within(&from_ahead.first), within(&from_behind.first))
    };
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
    for (index, clutch) in scenario.clutches.iter().enumerate() {
        add(Owner::Clutch(index), &clutch.name);
    }
    for (index, coupling) in scenario.fluid_couplings.iter().enumerate() {
        add(Owner::FluidCoupling(index), &coupling.name);
    }
    let load = sum * magnet.phase_inertia;
    load.is_finite().then_some(load)
}

/// A border followed backwards in time from a saddle: until its slip speed turns, and beyond.
struct Border {
    /// From the saddle on, while the slip speed keeps its sign.
    first: Vec<[f64; 2]>,
    /// What comes after the slip speed has turned; empty when it never does.
    after: Vec<[f64; 2]>,
}

/// Follows the stable direction of a saddle that leaves it towards `side`.
fn border(magnet: &Magnet, load: f64, saddle: f64, side: f64) -> Border {
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
    let step =
        -1.0 / (STEPS_PER_RADIAN * (magnet.amplitude * magnet.law.steepest() / inertia).sqrt());
    let rate = |[phi, w]: [f64; 2]| [w, (load - damper(w) - magnet.law.value(phi)) / inertia];
    let ahead = |a: [f64; 2], h: f64, b: [f64; 2]| [a[0] + h * b[0], a[1] + h * b[1]];
    let mut state = [saddle + side * START, side * START * root];
    let mut border = Border { first: vec![[saddle, 0.0], state], after: Vec::new() };
    for _ in 0..LONGEST {
        let k1 = rate(state);
        let k2 = rate(ahead(state, 0.5 * step, k1));
        let k3 = rate(ahead(state, 0.5 * step, k2));
        let k4 = rate(ahead(state, step, k3));
        let mean = [0, 1].map(|i: usize| (k1[i] + 2.0 * k2[i] + 2.0 * k3[i] + k4[i]) / 6.0);
        let next = ahead(state, step, mean);
        if !next[0].is_finite() || !next[1].is_finite() {
            break;
        }
        let turned = next[1] * side * root <= 0.0;
        if turned && border.after.is_empty() {
            // The turning point itself belongs to both parts.
            let share = state[1] / (state[1] - next[1]);
            let tip = [state[0] + share * (next[0] - state[0]), 0.0];
            border.first.push(tip);
            border.after.push(tip);
        }
        if !turned && !border.after.is_empty() {
            break;
        }
        state = next;
        if turned {
            border.after.push(state);
        } else {
            border.first.push(state);
        }
        let gone = if turned { side * state[0] < -PI - 0.1 } else { side * state[0] > PI + 0.1 };
        if gone {
            break;
        }
    }
    border
}

/// Points within one turn, by rising load angle, thinned for a chart.
fn within(points: &[[f64; 2]]) -> Vec<[f64; 2]> {
    let last = points.len().saturating_sub(1);
    let mut kept: Vec<[f64; 2]> = points
        .iter()
        .enumerate()
        .filter(|(place, point)| {
            (place % 8 == 0 || *place == last) && (-PI..=PI).contains(&point[0])
        })
        .map(|(_, point)| *point)
        .collect();
    kept.sort_by(|a, b| a[0].total_cmp(&b[0]));
    kept
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::component::magnetic_law::MagnetLaw;
    use crate::model::magnet::MagnetMember;

    fn pendulum(damping: f64) -> Magnet {
        Magnet {
            name: String::new(),
            path: String::new(),
            coupling: true,
            members: vec![MagnetMember { name: "a", body: Some(0), count: 1.0 }],
            law: MagnetLaw::new(1.0, &[]).unwrap(),
            amplitude: 1.0,
            damping,
            fading: None,
            warmth: crate::component::magnet_temperature::Warmth::default(),
            start_phase: 0.0,
            phase_inertia: 1.0,
        }
    }

    #[test]
    fn without_load_and_damping_it_is_the_pendulum_s_own() {
        // Closed form: w = 2 cos(phi/2).
        let border = border(&pendulum(0.0), 0.0, PI, -1.0);
        assert!(border.first.len() > 500);
        for [phi, w] in &border.first[5..] {
            if *phi > -2.9 {
                assert!((w - 2.0 * (phi / 2.0).cos()).abs() < 1e-5, "{phi} {w}");
            }
        }
    }

    #[test]
    fn under_load_with_little_damping_the_region_closes_behind_the_well() {
        let found = border(&pendulum(0.01), 0.5, PI - 0.5_f64.asin(), -1.0);
        let tip = found.after.first().unwrap();
        assert!(tip[0] > -1.5 && tip[0] < 0.5 && found.after.len() > 100);
    }
}
