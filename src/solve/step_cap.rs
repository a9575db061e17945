//! The largest step that keeps the fastest mode of the linearised train stable.
//!
//! In steady running an explicit method's step is limited by stability, and the step controller
//! lets the fastest mode jitter there. A cap just below the limit costs fewer evaluations and
//! leaves no jitter.

use super::tableau;
use crate::component::load::LoadLaw;
use crate::equations::frame::Evaluator;
use crate::equations::linearise::{MagnetSlope, eigenvalues, jacobian};
use crate::equations::{Equations, Owner, Shape};
use crate::model::body_index;
use crate::quantity::format_number;
use crate::scenario::Method;

/// Share of the stable step that is used.
const SHARE: f64 = 0.97;

/// Beyond this many states the eigenvalues cost more than they save.
const LARGEST: usize = 64;

/// Steps of a run beyond which its stiffest part is named.
const MANY: f64 = 2e6;

/// A warning with the path of the stiffest part, when stability makes a run long.
pub fn warning(equations: &Equations, stable: f64) -> Option<(String, String)> {
    let steps = equations.model.scenario.duration / stable;
    if steps.is_nan() || steps < MANY {
        return None;
    }
    let (path, rate) = stiffest(equations)?;
    let name = path.rsplit('.').next().unwrap_or_default();
    let text = format!(
        "stability holds the steps to {} s, about {} million for this run: `{name}` is the stiffest \
         part, {} 1/s with the inertias that it joins; is it meant so?",
        format_number(stable, 2),
        format_number(steps / 1e6, 2),
        format_number(rate, 2),
    );
    Some((path, text))
}

/// Path and rate (1/s) of the spring, magnet or damper that is stiffest to the inertias it joins.
fn stiffest(equations: &Equations) -> Option<(String, f64)> {
    let model = &equations.model;
    let along = |row: &[(usize, f64)]| model.reduction.inertia_along(row);
    let shafts = model.shafts.iter().zip(&model.scenario.shafts).filter(|(shaft, _)| !shaft.rigid);
    let shafts = shafts.map(|(shaft, typed)| {
        let inertia = along(&shaft.row());
        let rate = (shaft.stiffness / inertia).sqrt().max(shaft.damping / inertia);
        (format!("shafts.{}", typed.name), rate)
    });
    let magnets = model.magnets.iter().map(|magnet| {
        let inertia = along(&magnet.row());
        let fading = magnet.fading.map_or(0.0, |damper| damper.coefficient / damper.count.powi(2));
        let damping = magnet.damping.max(fading) / inertia;
        let rate = (magnet.amplitude * magnet.law.steepest() / inertia).sqrt().max(damping);
        (magnet.path.clone(), rate)
    });
    let loads = equations.terms.iter().filter_map(|term| match (&term.owner, &term.shape) {
        (Owner::Load(load), Shape::Linear) => match &model.scenario.loads[*load].law {
            LoadLaw::Viscous { coefficient } => {
                let body = body_index(&model.scenario, &model.scenario.loads[*load].body)?;
                let rate = coefficient / along(&[(body, 1.0)]);
                Some((format!("loads.{}", model.scenario.loads[*load].name), rate))
            }
            _ => None,
        },
        _ => None,
    });
    shafts
        .chain(magnets)
        .chain(loads)
        .filter(|(_, rate)| rate.is_finite())
        .max_by(|one, other| one.1.total_cmp(&other.1))
}

/// The cap, s; infinite when stability sets none.
pub fn stable_step(evaluator: &Evaluator<'_>, method: Method, time: f64, state: &[f64]) -> f64 {
    if state.len() > LARGEST || method == Method::Rk4 {
        return f64::INFINITY;
    }
    let matrix = jacobian(evaluator, time, state, MagnetSlope::Steepest);
    let Some(values) = eigenvalues(&matrix) else { return f64::INFINITY };
    let tableau = tableau::of(method);
    let mut cap = f64::INFINITY;
    for (re, im) in values {
        let size = re.hypot(im);
        // Undamped and growing modes have no stability limit of this kind: accuracy rules them.
        if size == 0.0 || re >= -1e-6 * size {
            continue;
        }
        let (unit_re, unit_im) = (re / size, im / size);
        let mut low = 0.0;
        let mut high = 0.05;
        while high < 12.0 && tableau.growth(high * unit_re, high * unit_im) <= 1.0 {
            low = high;
            high += 0.05;
        }
        for _ in 0..30 {
            let middle = 0.5 * (low + high);
            if tableau.growth(middle * unit_re, middle * unit_im) <= 1.0 {
                low = middle;
            } else {
                high = middle;
            }
        }
        cap = f64::min(cap, SHARE * low / size);
    }
    if cap > 0.0 { cap } else { f64::INFINITY }
}
