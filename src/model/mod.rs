//! The checked model: names become places, rigid joints are eliminated, starting speeds are found.
//!
//! After this stage nothing can be wrong any more except the numerics.

pub mod elimination;
pub mod magnet;
pub mod scales;
pub mod starting_speeds;

use crate::component::channel::Channel;
use crate::component::elastic_curve::ElasticCurve;
use crate::component::shaft::ShaftDamping;
use crate::diagnostic::Diagnostics;
use crate::scenario::Scenario;
use elimination::{Constraint, Reduction};
use magnet::Magnet;
use scales::Scales;

/// A linear form over body speeds: `(body, factor)` entries.
pub type BodyRow = Vec<(usize, f64)>;

/// A train ready to become equations.
#[derive(Clone, Debug)]
pub struct Model {
    /// The scenario as typed.
    pub scenario: Scenario,
    /// Every channel of the train in file order.
    pub channels: Vec<Channel>,
    /// Shafts with their ends and coefficients.
    pub shafts: Vec<ShaftModel>,
    /// Magnetic gears, then couplings.
    pub magnets: Vec<Magnet>,
    /// Rigid joints.
    pub constraints: Vec<Constraint>,
    /// Body speeds from independent speeds.
    pub reduction: Reduction,
    /// Speed of each body at the start, rad/s.
    pub start_speeds: Vec<f64>,
    /// Sizes by which the state is scaled.
    pub scales: Scales,
    /// What a reader of the results must know.
    pub warnings: Diagnostics,
}

/// A shaft with its ends found.
#[derive(Clone, Debug, PartialEq)]
pub struct ShaftModel {
    /// Bodies a and b; `None` is ground.
    pub ends: [Option<usize>; 2],
    /// N*m/rad.
    pub stiffness: f64,
    /// N*m*s/rad.
    pub damping: f64,
    /// Torque over twist where it has stages; `stiffness` is then the one at no twist.
    pub curve: Option<ElasticCurve>,
    /// Total free play, rad.
    pub backlash: f64,
    /// Eliminated instead of sprung.
    pub rigid: bool,
}

impl ShaftModel {
    /// The twist rate as a form over body speeds: a minus b.
    pub fn row(&self) -> BodyRow {
        difference(self.ends[0], self.ends[1])
    }
}

/// The form `speed_a - speed_b` with ground left out.
pub fn difference(a: Option<usize>, b: Option<usize>) -> BodyRow {
    a.map(|body| (body, 1.0)).into_iter().chain(b.map(|body| (body, -1.0))).collect()
}

impl Model {
    /// The place of a body by name; `None` for `ground`.
    pub fn body(&self, name: &str) -> Option<usize> {
        body_index(&self.scenario, name)
    }
}

/// The place of a body in its section; `None` for `ground` or a name that the reader has refused.
pub fn body_index(scenario: &Scenario, name: &str) -> Option<usize> {
    scenario.bodies.iter().position(|body| body.name == name)
}

/// Builds the model of a scenario, or says everything that is wrong with its train.
///
/// # Errors
/// All faults of the train: a body that cannot turn or has no inertia, speeds that
/// contradict a rigid joint, a law that cannot be built.
pub fn build(scenario: &Scenario) -> Result<Model, Diagnostics> {
    let mut found = Diagnostics::new();
    let end = |name: &str| body_index(scenario, name);
    let mut shafts: Vec<ShaftModel> = scenario
        .shafts
        .iter()
        .map(|shaft| ShaftModel {
            ends: [end(&shaft.between[0]), end(&shaft.between[1])],
            stiffness: shaft.stiffness,
            damping: match shaft.damping {
                ShaftDamping::Coefficient(value) => value,
                ShaftDamping::Ratio(_) => 0.0,
            },
            curve: shaft.curve.clone(),
            backlash: shaft.backlash,
            rigid: shaft.rigid,
        })
        .collect();
    let constraints = elimination::constraints(scenario, &shafts);
    let inertias: Vec<f64> = scenario.bodies.iter().map(|body| body.inertia).collect();
    let Some(reduction) = elimination::reduce(scenario, &constraints, &inertias, &mut found) else {
        return Err(found);
    };
    for (shaft, typed) in shafts.iter_mut().zip(&scenario.shafts) {
        if let (ShaftDamping::Ratio(ratio), false) = (typed.damping, shaft.rigid) {
            let inertia = reduction.inertia_along(&shaft.row());
            shaft.damping = 2.0 * ratio * (shaft.stiffness * inertia).sqrt();
        }
    }
    let magnets = magnet::build(scenario, &shafts, &constraints, &inertias, &mut found);
    let start_speeds =
        starting_speeds::find(scenario, &constraints, &shafts, &magnets, &reduction, &mut found);
    refuse_clutches_overtaken(scenario, &start_speeds, &mut found);
    warn_of_idle_bodies(scenario, &mut found);
    if found.has_errors() {
        return Err(found);
    }
    let scales = scales::find(scenario, &shafts, &magnets, &constraints, &reduction, &start_speeds);
    let channels = scenario.channels.clone();
    Ok(Model {
        scenario: scenario.clone(),
        channels,
        shafts,
        magnets,
        constraints,
        reduction,
        start_speeds,
        scales,
        warnings: found,
    })
}

/// A clutch that passes any torque cannot begin with a difference that only an impact would end.
fn refuse_clutches_overtaken(scenario: &Scenario, speeds: &[f64], found: &mut Diagnostics) {
    for clutch in &scenario.clutches {
        let of = |name: &str| body_index(scenario, name).and_then(|body| speeds.get(body));
        let [first, second] =
            [0, 1].map(|end: usize| of(&clutch.between[end]).copied().unwrap_or(0.0));
        let ([forward, backward], _) = clutch.torques();
        let room = 1e-9 * first.abs().max(second.abs());
        let gap = first - second;
        if (gap > room && forward.is_infinite()) || (gap < -room && backward.is_infinite()) {
            let [faster, slower] = if gap > 0.0 { [0, 1] } else { [1, 0] };
            found.error_hint(
                format!("{}.{}.between", clutch.section(), clutch.name),
                format!(
                    "`{}` starts faster than `{}`, but the clutch locks that way",
                    clutch.between[faster], clutch.between[slower]
                ),
                "give both the same speed, or the clutch a `slipping_torque`",
            );
        }
    }
}

/// A body on which nothing acts keeps its speed for ever: more likely forgotten than meant.
fn warn_of_idle_bodies(scenario: &Scenario, found: &mut Diagnostics) {
    for body in &scenario.bodies {
        let name = body.name.as_str();
        let touched = scenario
            .shafts
            .iter()
            .any(|shaft| shaft.between.iter().any(|end| end == name))
            || scenario.magnetic_gears.iter().any(|gear| {
                [&gear.inner, &gear.modulator, &gear.outer].iter().any(|end| *end == name)
            })
            || scenario
                .magnetic_couplings
                .iter()
                .any(|it| it.between.iter().any(|end| end == name))
            || scenario.gear_pairs.iter().any(|pair| pair.between.iter().any(|end| end == name))
            || scenario
                .planetary_gears
                .iter()
                .any(|set| [&set.sun, &set.carrier, &set.ring].iter().any(|end| *end == name))
            || scenario.clutches.iter().any(|it| it.between.iter().any(|end| end == name))
            || scenario.fluid_couplings.iter().any(|it| it.between.iter().any(|end| end == name))
            || scenario.motors.iter().any(|motor| motor.body == name)
            || scenario
                .loads
                .iter()
                .any(|load| load.body == name || load.against.as_deref() == Some(name))
            || scenario
                .brakes
                .iter()
                .any(|brake| brake.body == name || brake.against.as_deref() == Some(name));
        if !touched {
            found.warning(
                format!("bodies.{name}"),
                format!("nothing acts on `{name}`: it keeps its starting speed"),
            );
        }
    }
}
