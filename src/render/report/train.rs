//! The train as pictures need it: the drawn diagram, and the train of the charts.

use super::figures::{Written, plain, tidy};
use super::sides::sides;
use crate::analysis::train::{MagnetFigures, Train as TrainFigures};
use crate::component::clutch::ClutchKind;
use crate::component::load::LoadLaw;
use crate::component::motor::MotorLaw;
use crate::quantity::{Dimension, format_quantity};
use crate::render::chart::number::{NBSP, number, words};
use crate::render::chart::palette::Side;
use crate::render::chart::schematic::view::{Actor, BodyView, BrakeView, Link, Port, Schematic};
use crate::results::RunResult;
use crate::scenario::Scenario;

/// Speeds below this share of the train's largest count as rest.
const AT_REST: f64 = 1e-6;

/// The diagram of a train; speeds are those at the end of the run.
pub fn schematic(
    scenario: &Scenario,
    figures: &TrainFigures,
    result: &RunResult,
    written: Written<'_>,
) -> Schematic {
    let port = |name: &str| {
        scenario.bodies.iter().position(|body| body.name == name).map_or(Port::Ground, Port::Body)
    };
    Schematic {
        id: "train".to_owned(),
        title: format!("Diagram of the train: {}", result.title),
        bodies: bodies(scenario, figures, result, written),
        links: links(scenario, figures, written, &port),
        actors: actors(scenario, result, written),
        brakes: brakes(scenario, written),
    }
}

fn place(scenario: &Scenario, name: &str) -> usize {
    scenario.bodies.iter().position(|body| body.name == name).unwrap_or(0)
}

fn bodies(
    scenario: &Scenario,
    figures: &TrainFigures,
    result: &RunResult,
    written: Written<'_>,
) -> Vec<BodyView> {
    let last = |name: &str| {
        let channel = format!("{name}.speed");
        result.channels.iter().find(|one| one.name == channel).map(|one| one.last)
    };
    let speeds: Vec<f64> =
        scenario.bodies.iter().map(|body| last(&body.name).unwrap_or(0.0)).collect();
    let largest = speeds.iter().fold(0.0_f64, |largest, speed| largest.max(speed.abs()));
    let reference = words(&figures.reference);
    scenario
        .bodies
        .iter()
        .zip(sides(scenario))
        .zip(&figures.bodies)
        .zip(&speeds)
        .map(|(((body, side), figure), speed)| {
            let referred = match (figure.ratio, figure.referred_inertia) {
                (Some(ratio), Some(inertia)) if (ratio.abs() - 1.0).abs() > 1e-9 => {
                    format!("{} at the {reference}", number(inertia, 3))
                }
                _ => String::new(),
            };
            let turns = speed.is_finite() && speed.abs() > AT_REST * largest;
            BodyView {
                name: words(&body.name),
                side,
                inertia: body.inertia,
                inertia_text: format!("{}{NBSP}kg·m²", plain(body.inertia)),
                referred_text: referred,
                speed: turns.then(|| (written.speed(speed.abs()), *speed > 0.0)),
            }
        })
        .collect()
}

fn links(
    scenario: &Scenario,
    figures: &TrainFigures,
    written: Written<'_>,
    port: &dyn Fn(&str) -> Port,
) -> Vec<Link> {
    let mut links = Vec::new();
    for (shaft, figure) in scenario.shafts.iter().zip(&figures.shafts) {
        let text = if figure.rigid {
            "rigid".to_owned()
        } else {
            let unit = if figure.stiffness >= 1e4 { "kN*m/rad" } else { "N*m/rad" };
            tidy(&format_quantity(figure.stiffness, Dimension::Stiffness, unit))
        };
        links.push(Link::Shaft {
            name: words(&shaft.name),
            between: [port(&shaft.between[0]), port(&shaft.between[1])],
            text,
            elastic: !figure.rigid,
            backlash: figure.backlash > 0.0,
        });
    }
    let magnet = |name: &str| figures.magnets.iter().find(|magnet| magnet.name == name);
    for gear in &scenario.magnetic_gears {
        let found = magnet(&gear.name);
        links.push(Link::MagneticGear {
            name: named_ratio(&gear.name, found.and_then(|it| it.ratio)),
            members: [port(&gear.inner), port(&gear.modulator), port(&gear.outer)],
            counts: [
                gear.inner_pole_pairs.to_string(),
                gear.inner_pole_pairs.saturating_add(gear.outer_pole_pairs).to_string(),
                gear.outer_pole_pairs.to_string(),
            ],
            text: found.map_or_else(String::new, |it| pull_out(it, written)),
        });
    }
    for coupling in &scenario.magnetic_couplings {
        links.push(Link::Coupling {
            name: words(&coupling.name),
            between: [port(&coupling.between[0]), port(&coupling.between[1])],
            text: format!("pull-out {}", written.torque(coupling.pull_out)),
        });
    }
    for pair in &scenario.gear_pairs {
        links.push(Link::GearPair {
            name: words(&pair.name),
            between: [port(&pair.between[0]), port(&pair.between[1])],
            ratio: pair.ratio,
            text: format!("{} : 1", number(pair.ratio, 4)),
        });
    }
    for set in &scenario.planetary_gears {
        links.push(Link::Planetary {
            name: words(&set.name),
            members: [port(&set.sun), port(&set.carrier), port(&set.ring)],
            text: format!("teeth {} and {}", set.teeth_sun, set.teeth_ring),
        });
    }
    for clutch in &scenario.clutches {
        let text = match clutch.kind {
            ClutchKind::Overrunning { .. } => "locks one way".to_owned(),
            ClutchKind::Limiter { breakaway, .. } => {
                format!("slips at {}", written.torque(breakaway))
            }
        };
        links.push(Link::Shaft {
            name: words(&clutch.name),
            between: [port(&clutch.between[0]), port(&clutch.between[1])],
            text,
            elastic: false,
            backlash: true,
        });
    }
    for coupling in &scenario.fluid_couplings {
        links.push(Link::Shaft {
            name: words(&coupling.name),
            between: [port(&coupling.between[0]), port(&coupling.between[1])],
            text: "fluid coupling".to_owned(),
            elastic: false,
            backlash: true,
        });
    }
    links
}

fn named_ratio(name: &str, ratio: Option<f64>) -> String {
    let name = words(name);
    ratio.map_or_else(|| name.clone(), |ratio| format!("{name} {} : 1", number(ratio, 4)))
}

/// Pull-out at the members that turn, the largest first.
fn pull_out(magnet: &MagnetFigures, written: Written<'_>) -> String {
    let mut turning: Vec<_> =
        magnet.members.iter().filter(|member| member.body.is_some()).collect();
    turning.sort_by(|a, b| b.pull_out_torque.total_cmp(&a.pull_out_torque));
    let list: Vec<String> = turning
        .iter()
        .map(|member| {
            format!("{} at the {}", written.torque(member.pull_out_torque), member.member)
        })
        .collect();
    format!("pull-out {}", list.join(", "))
}

fn actors(scenario: &Scenario, result: &RunResult, written: Written<'_>) -> Vec<Actor> {
    // Whoever put in more at its best than it took at its worst drives.
    let drives = |name: &str| {
        let channel = format!("{name}.power");
        result
            .channels
            .iter()
            .find(|one| one.name == channel)
            .is_some_and(|one| one.max > one.min.abs())
    };
    let motors = scenario.motors.iter().map(|motor| Actor {
        name: words(&motor.name),
        text: motor_text(&motor.law, written),
        body: place(scenario, &motor.body),
        motor: true,
        drives: drives(&motor.name),
    });
    let loads = scenario.loads.iter().map(|load| Actor {
        name: words(&load.name),
        text: load_text(&load.law, written),
        body: place(scenario, &load.body),
        motor: false,
        drives: drives(&load.name),
    });
    motors.chain(loads).collect()
}

fn motor_text(law: &MotorLaw, written: Written<'_>) -> String {
    match law {
        MotorLaw::RatingPlate { power, speed, .. } => {
            format!("{}, {}", tidy(&crate::render::shown::power(*power)), written.speed(*speed))
        }
        MotorLaw::Induction { breakdown_torque, .. } => {
            format!("breakdown {}", written.torque(*breakdown_torque))
        }
        MotorLaw::InductionCircuit { figures, .. } => {
            format!("{}{NBSP}V, {}{NBSP}Hz", plain(figures.line_voltage), plain(figures.frequency))
        }
        MotorLaw::SpeedLoop { drive, .. } => {
            format!("speed loop, up to {}", written.torque(drive.limits.torque_limit))
        }
        MotorLaw::TorqueLoop { drive, .. } => {
            format!("torque loop, up to {}", written.torque(drive.limits.torque_limit))
        }
        MotorLaw::OptimalPower { figures } => {
            format!("generator, up to {}", written.torque(figures.largest_torque()))
        }
        MotorLaw::Prescribed { .. } => "torque as given".to_owned(),
        _ => String::new(),
    }
}

fn load_text(law: &LoadLaw, written: Written<'_>) -> String {
    match law {
        LoadLaw::PowerLaw { torque, speed, .. } => {
            format!("{} at {}", written.torque(*torque), written.speed(*speed))
        }
        LoadLaw::Friction { sliding, .. } => format!("friction {}", written.torque(*sliding)),
        LoadLaw::Prescribed { .. } => "torque as given".to_owned(),
        LoadLaw::Periodic { mean, .. } => {
            format!("{} and a ripple over each turn", written.torque(*mean))
        }
        LoadLaw::Propeller { diameter, .. } => {
            format!("propeller, diameter {}{NBSP}m", plain(*diameter))
        }
        LoadLaw::Reciprocating { mass, .. } => {
            format!("reciprocating mass {}{NBSP}kg", plain(*mass))
        }
        LoadLaw::AxialRotor { radius, .. } => format!("rotor, radius {}{NBSP}m", plain(*radius)),
        _ => String::new(),
    }
}

fn brakes(scenario: &Scenario, written: Written<'_>) -> Vec<BrakeView> {
    scenario
        .brakes
        .iter()
        .map(|brake| BrakeView {
            name: words(&brake.name),
            text: written.torque(brake.torque),
            body: place(scenario, &brake.body),
            grounded: brake.against.is_none(),
        })
        .collect()
}

/// True when a train has bodies of that side, for captions.
pub fn has_side(scenario: &Scenario, side: Side) -> bool {
    sides(scenario).contains(&side)
}
