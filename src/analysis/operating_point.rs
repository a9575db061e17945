//! The operating point as a table: speeds, torques, powers, losses, load angles, margin to pull-out.

use crate::analysis::linear_point::LinearPoint;
use crate::component::channel::{ChannelKind, ClutchChannel, MagneticChannel};
use crate::equations::assembly::assemble;
use crate::equations::frame::{Counters, Evaluator, Frame};
use crate::equations::{Equations, Owner, Sliding};
use crate::solve::steady;

/// An operating point, SI.
#[derive(Clone, Debug, PartialEq)]
pub struct OperatingPoint {
    /// Speed of each body, rad/s.
    pub bodies: Vec<(String, f64)>,
    /// Shafts, elastic and rigid.
    pub shafts: Vec<ShaftPoint>,
    /// Gear pairs and planetary sets: joint, member and torque on it, N*m.
    pub joints: Vec<(String, &'static str, f64)>,
    /// Magnetic gears, then couplings.
    pub magnets: Vec<MagnetPoint>,
    /// Motors, loads and brakes.
    pub actors: Vec<ActorPoint>,
    /// Power put in by motors and loads, W.
    pub supplied: f64,
    /// Power taken out by motors and loads, friction left out, W.
    pub absorbed: f64,
    /// Power turned to heat in the train, W.
    pub lost: f64,
    /// Absorbed over supplied; `None` when nothing is supplied.
    pub efficiency: Option<f64>,
}

/// A shaft at the point.
#[derive(Clone, Debug, PartialEq)]
pub struct ShaftPoint {
    /// Its name.
    pub name: String,
    /// On its second end, N*m.
    pub torque: f64,
    /// rad; `None` for a rigid shaft.
    pub twist: Option<f64>,
    /// Torque over the rated torque, where one is stated.
    pub utilisation: Option<f64>,
}

/// A magnet at the point.
#[derive(Clone, Debug, PartialEq)]
pub struct MagnetPoint {
    /// Its name.
    pub name: String,
    /// Electrical rad.
    pub load_angle: f64,
    /// Torque over the pull-out of its side, 0 to 1.
    pub pull_out_share: f64,
    /// One minus that.
    pub margin: f64,
    /// Pull-out over torque; `None` without load.
    pub service_factor: Option<f64>,
    /// W.
    pub loss: f64,
    /// Each member.
    pub members: Vec<MemberPoint>,
}

/// A member of a magnet at the point.
#[derive(Clone, Debug, PartialEq)]
pub struct MemberPoint {
    /// inner, modulator, outer, a or b.
    pub member: &'static str,
    /// Its body, or `ground`.
    pub body: String,
    /// On the member, N*m.
    pub torque: f64,
    /// N*m.
    pub pull_out_torque: f64,
}

/// A motor, load or brake at the point.
#[derive(Clone, Debug, PartialEq)]
pub struct ActorPoint {
    /// motor, load or brake.
    pub kind: &'static str,
    /// Its name.
    pub name: String,
    /// On its body, N*m.
    pub torque: f64,
    /// Into the train, W.
    pub power: f64,
}

/// The stable operating point nearest to the given speeds, with signals as at 0 s.
///
/// # Errors
/// Why there is none, in words.
pub fn find(equations: &Equations) -> Result<OperatingPoint, String> {
    let overrides = equations.bank.no_overrides();
    let found = steady::find(equations, 0.0, &overrides).map_err(|error| error.message)?;
    let point = LinearPoint {
        time: 0.0,
        state: found.state,
        mode: found.mode,
        overrides,
        notes: Vec::new(),
    };
    Ok(at(equations, &point))
}

/// The table of a point.
pub fn at(equations: &Equations, point: &LinearPoint) -> OperatingPoint {
    let assembly = assemble(equations, &point.mode, point.time, f64::INFINITY, &point.overrides);
    let evaluator = Evaluator { equations, assembly: &assembly, overrides: &point.overrides };
    let model = &equations.model;
    let counters = Counters {
        wells: vec![0; model.magnets.len()],
        slips: vec![0; model.magnets.len()],
        net_slips: vec![0; model.magnets.len()],
        angles: vec![0.0; equations.speeds],
    };
    let mut frame = Frame::default();
    evaluator.evaluate(point.time, &point.state, &counters, None, &mut frame);
    let table = Table { equations, values: &frame.channels };
    let mut sums = OperatingPoint {
        bodies: table.bodies(),
        shafts: table.shafts(),
        joints: table.joints(),
        magnets: table.magnets(),
        actors: table.actors(),
        supplied: 0.0,
        absorbed: 0.0,
        lost: 0.0,
        efficiency: None,
    };
    let rubs = |owner: Owner| {
        equations.frictions.iter().any(|friction| {
            friction.owner == owner && matches!(friction.sliding, Sliding::Constant(_))
        })
    };
    let (mut motors, mut loads) = (0, 0);
    for actor in &sums.actors {
        let lost = match actor.kind {
            "motor" => {
                motors += 1;
                false
            }
            "load" => {
                loads += 1;
                rubs(Owner::Load(loads - 1))
            }
            _ => true,
        };
        match (lost, actor.power >= 0.0) {
            (true, _) => sums.lost -= actor.power,
            (false, true) => sums.supplied += actor.power,
            (false, false) => sums.absorbed -= actor.power,
        }
    }
    debug_assert_eq!(motors, model.scenario.motors.len());
    for magnet in &mut sums.magnets {
        // Slip speeds are zero but for rounding, and so is what the damper loses.
        if magnet.loss <= 1e-15 * sums.supplied {
            magnet.loss = 0.0;
        }
        sums.lost += magnet.loss;
    }
    for (place, pair) in model.scenario.gear_pairs.iter().enumerate() {
        if !pair.drag.is_empty() {
            sums.lost += table.value(ChannelKind::GearPairLoss(place));
        }
    }
    sums.efficiency = (sums.supplied > 0.0).then(|| sums.absorbed / sums.supplied);
    sums
}

struct Table<'a> {
    equations: &'a Equations,
    values: &'a [f64],
}

impl Table<'_> {
    fn value(&self, kind: ChannelKind) -> f64 {
        let channels = &self.equations.model.channels;
        let place = channels.iter().position(|channel| channel.kind == kind);
        place.and_then(|place| self.values.get(place)).copied().unwrap_or(f64::NAN)
    }

    fn bodies(&self) -> Vec<(String, f64)> {
        let bodies = self.equations.model.scenario.bodies.iter().enumerate();
        bodies
            .map(|(place, body)| (body.name.clone(), self.value(ChannelKind::BodySpeed(place))))
            .collect()
    }

    fn shafts(&self) -> Vec<ShaftPoint> {
        let shafts = self.equations.model.scenario.shafts.iter().enumerate();
        shafts
            .map(|(place, shaft)| {
                let torque = self.value(ChannelKind::ShaftTorque(place));
                ShaftPoint {
                    name: shaft.name.clone(),
                    torque,
                    twist: (!shaft.rigid).then(|| self.value(ChannelKind::ShaftTwist(place))),
                    utilisation: shaft.rated_torque.map(|rated| torque.abs() / rated),
                }
            })
            .collect()
    }

    fn joints(&self) -> Vec<(String, &'static str, f64)> {
        let scenario = &self.equations.model.scenario;
        let mut list = Vec::new();
        for (place, pair) in scenario.gear_pairs.iter().enumerate() {
            for (member, name) in ["a", "b"].into_iter().enumerate() {
                let torque = self.value(ChannelKind::GearPairTorque(place, member));
                list.push((pair.name.clone(), name, torque));
            }
        }
        for (place, set) in scenario.planetary_gears.iter().enumerate() {
            for (member, name) in ["sun", "carrier", "ring"].into_iter().enumerate() {
                let torque = self.value(ChannelKind::PlanetaryTorque(place, member));
                list.push((set.name.clone(), name, torque));
            }
        }
        list
    }

    fn magnets(&self) -> Vec<MagnetPoint> {
        let model = &self.equations.model;
        let magnets = model.magnets.iter().enumerate();
        magnets
            .map(|(place, magnet)| {
                let channel = |what| self.value(ChannelKind::Magnetic(place, what));
                let share = channel(MagneticChannel::PullOutShare);
                MagnetPoint {
                    name: magnet.name.clone(),
                    load_angle: channel(MagneticChannel::LoadAngle),
                    pull_out_share: share,
                    margin: 1.0 - share,
                    service_factor: (share > 1e-12).then(|| 1.0 / share),
                    loss: channel(MagneticChannel::Loss),
                    members: magnet
                        .members
                        .iter()
                        .map(|member| MemberPoint {
                            member: member.name,
                            body: member.body.map_or_else(
                                || "ground".to_owned(),
                                |body| model.scenario.bodies[body].name.clone(),
                            ),
                            torque: channel(match member.name {
                                "inner" | "a" => MagneticChannel::TorqueFirst,
                                "modulator" => MagneticChannel::TorqueModulator,
                                _ => MagneticChannel::TorqueSecond,
                            }),
                            pull_out_torque: magnet.pull_out_at(member.count),
                        })
                        .collect(),
                }
            })
            .collect()
    }

    fn actors(&self) -> Vec<ActorPoint> {
        let scenario = &self.equations.model.scenario;
        let point = |kind, name: &str, torque, power| ActorPoint {
            kind,
            name: name.to_owned(),
            torque: self.value(torque),
            power: self.value(power),
        };
        let motors = scenario.motors.iter().enumerate().map(|(place, motor)| {
            let (torque, power) = (ChannelKind::MotorTorque(place), ChannelKind::MotorPower(place));
            point("motor", &motor.name, torque, power)
        });
        let loads = scenario.loads.iter().enumerate().map(|(place, load)| {
            let (torque, power) = (ChannelKind::LoadTorque(place), ChannelKind::LoadPower(place));
            point("load", &load.name, torque, power)
        });
        let brakes = scenario.brakes.iter().enumerate().map(|(place, brake)| {
            let (torque, power) = (ChannelKind::BrakeTorque(place), ChannelKind::BrakePower(place));
            point("brake", &brake.name, torque, power)
        });
        let clutches = scenario.clutches.iter().enumerate().map(|(place, clutch)| ActorPoint {
            kind: "clutch",
            name: clutch.name.clone(),
            torque: self.value(ChannelKind::Clutch(place, ClutchChannel::Torque)),
            power: -self.value(ChannelKind::Clutch(place, ClutchChannel::Loss)),
        });
        let fluids = scenario.fluid_couplings.iter().enumerate().map(|(place, it)| ActorPoint {
            kind: "fluid coupling",
            name: it.name.clone(),
            torque: self.value(ChannelKind::FluidCoupling(place, ClutchChannel::Torque)),
            power: -self.value(ChannelKind::FluidCoupling(place, ClutchChannel::Loss)),
        });
        motors.chain(loads).chain(brakes).chain(clutches).chain(fluids).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::testing::equations;

    // A pump on a magnetic gear of ratio 5.5: torque law T = 100 (w/20)^2 at the slow side against a
    // motor of slope -10 N m s/rad through 120 rad/s; balance at the fast side (closed form):
    // 10 (120 - w) = 100 (w/110)^2/5.5, and the load angle asin(T/300).
    #[test]
    fn a_pump_behind_a_gear_stands_where_the_curves_cross() {
        let found = find(&equations(
            "bodies: { fast: { inertia: 1, speed: 100 rad/s }, slow: { inertia: 5 } }
magnetic_gears:
  gear: { inner: fast, modulator: ground, outer: slow, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 300 }, damping: { at: outer, coefficient: 1 } }
motors: { drive: { body: fast, law: { curve: { points: [[0 rad/s, 1200], [240 rad/s, -1200]] } } } }
loads: { pump: { body: slow, law: { power_law: { torque: 100, speed: 20 rad/s, exponent: 2 } } } }",
        ))
        .unwrap();
        // 100/(5.5*110^2) w^2 + 10 w - 1200 = 0
        let a = 100.0 / (5.5 * 110.0_f64.powi(2));
        let speed = (-10.0 + (100.0 + 4.0 * a * 1200.0).sqrt()) / (2.0 * a);
        let torque = 100.0 * (speed / 110.0).powi(2);
        assert!((found.bodies[0].1 - speed).abs() < 1e-9);
        assert!((found.bodies[1].1 + speed / 5.5).abs() < 1e-10);
        let gear = &found.magnets[0];
        assert!((gear.load_angle.abs() - (torque / 300.0).asin()).abs() < 1e-10);
        assert!((gear.pull_out_share - torque / 300.0).abs() < 1e-10);
        assert!((gear.service_factor.unwrap() - 300.0 / torque).abs() < 1e-8);
        assert!(gear.loss.abs() < 1e-15);
        assert!((gear.members.iter().map(|member| member.torque).sum::<f64>()).abs() < 1e-10);
        // Nothing is lost: what the motor gives the pump takes.
        assert!((found.supplied - torque * speed / 5.5).abs() < 1e-6);
        assert!((found.efficiency.unwrap() - 1.0).abs() < 1e-10);
    }

    // Drag of 2 N m on the inner rotor costs 2 N m times its speed.
    #[test]
    fn losses_lie_between_supply_and_demand() {
        let found = find(&equations(
            "bodies: { fast: { inertia: 1, speed: 100 rad/s }, slow: { inertia: 5 } }
magnetic_gears:
  gear: { inner: fast, modulator: ground, outer: slow, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 300 }, drag: [{ at: inner, against: modulator, constant: 2 N*m, per_speed: 0 }] }
loads: { pump: { body: slow, law: { power_law: { torque: 100, speed: 20 rad/s, exponent: 2 } } }, gland: { body: slow, law: { friction: { sliding: 5 } } } }
motors: { drive: { body: fast, law: { speed_loop: { speed: 100 rad/s, torque_limit: 300, gain: 30, integral_time: 0.5 } } } }",
        ))
        .unwrap();
        let slow = 100.0 / 5.5;
        let pump = 100.0 * (slow / 20.0_f64).powi(2) * slow;
        assert!((found.bodies[0].1 - 100.0).abs() < 1e-9);
        assert!((found.lost - (200.0 + 5.0 * slow)).abs() < 1e-6, "{}", found.lost);
        assert!((found.absorbed - pump).abs() < 1e-6);
        assert!((found.supplied - found.absorbed - found.lost).abs() < 1e-6);
    }

    #[test]
    fn an_overload_is_refused_with_its_share() {
        let refused = find(&equations(
            "bodies: { a: { inertia: 1, speed: 10 rad/s }, b: { inertia: 1 } }
magnetic_couplings: { coupling: { between: [a, b], pole_pairs: 4, pull_out: 10 } }
motors: { drive: { body: a, law: { speed_loop: { speed: 10 rad/s, torque_limit: 300, gain: 30, integral_time: 0.5 } } } }
loads: { work: { body: b, law: { power_law: { torque: 11.2, speed: 10 rad/s, exponent: 1 } } } }",
        ))
        .unwrap_err();
        assert!(refused.contains("112 % of the pull-out of `coupling`"), "{refused}");
    }
}
