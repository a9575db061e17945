//! The channels of a train, thing by thing.

use super::channel::{Channel, ChannelKind, ClutchChannel, MagneticChannel, Section, Train};
use super::clutch::{Clutch, ClutchKind};
use super::load::{Load, LoadLaw};
use super::magnet_temperature::{HALVES, ROTORS};
use super::magnetic_gear::Field;
use super::motor::MotorLaw;
use crate::quantity::Dimension;

/// Lists all channels of a train, sections in the order given, things in file order.
pub fn list(train: &Train<'_>, order: &[Section]) -> Vec<Channel> {
    let mut channels = Vec::new();
    for section in order {
        match section {
            Section::Bodies => {
                for (place, body) in train.bodies.iter().enumerate() {
                    let mut add = adder(&mut channels, &body.name);
                    add("speed", ChannelKind::BodySpeed(place), Dimension::Speed);
                    add("angle", ChannelKind::BodyAngle(place), Dimension::Angle);
                }
            }
            Section::Shafts => {
                for (place, shaft) in train.shafts.iter().enumerate() {
                    let mut add = adder(&mut channels, &shaft.name);
                    add("torque", ChannelKind::ShaftTorque(place), Dimension::Torque);
                    if !shaft.rigid {
                        add("twist", ChannelKind::ShaftTwist(place), Dimension::Angle);
                    }
                }
            }
            Section::MagneticGears => {
                for (place, gear) in train.magnetic_gears.iter().enumerate() {
                    magnetic(&mut channels, &gear.name, place, false);
                    if gear.losses.is_some() {
                        let mut add = adder(&mut channels, &gear.name);
                        for (channel, kind) in [
                            ("hysteresis_loss", MagneticChannel::HysteresisLoss),
                            ("eddy_loss", MagneticChannel::EddyLoss),
                        ] {
                            add(channel, ChannelKind::Magnetic(place, kind), Dimension::Power);
                        }
                    }
                    temperatures(&mut channels, &gear.name, place, &gear.field, ROTORS);
                }
            }
            Section::MagneticCouplings => {
                let gears = train.magnetic_gears.len();
                for (place, coupling) in train.magnetic_couplings.iter().enumerate() {
                    magnetic(&mut channels, &coupling.name, gears + place, true);
                    let (name, place) = (&coupling.name, gears + place);
                    temperatures(&mut channels, name, place, &coupling.field, HALVES);
                }
            }
            Section::GearPairs => {
                for (place, pair) in train.gear_pairs.iter().enumerate() {
                    let mut add = adder(&mut channels, &pair.name);
                    for (member, channel) in ["torque_a", "torque_b"].into_iter().enumerate() {
                        let kind = ChannelKind::GearPairTorque(place, member);
                        add(channel, kind, Dimension::Torque);
                    }
                    if !pair.drag.is_empty() {
                        add("loss", ChannelKind::GearPairLoss(place), Dimension::Power);
                    }
                }
            }
            Section::PlanetaryGears => {
                for (place, set) in train.planetary_gears.iter().enumerate() {
                    let mut add = adder(&mut channels, &set.name);
                    let members = ["torque_sun", "torque_carrier", "torque_ring"];
                    for (member, channel) in members.into_iter().enumerate() {
                        let kind = ChannelKind::PlanetaryTorque(place, member);
                        add(channel, kind, Dimension::Torque);
                    }
                }
            }
            Section::OverrunningClutches => clutches(&mut channels, train.clutches, true),
            Section::TorqueLimiters => clutches(&mut channels, train.clutches, false),
            Section::FluidCouplings => {
                for (place, coupling) in train.fluid_couplings.iter().enumerate() {
                    let kind = |what| ChannelKind::FluidCoupling(place, what);
                    between(&mut channels, &coupling.name, &kind);
                }
            }
            Section::Motors => {
                for (place, motor) in train.motors.iter().enumerate() {
                    let mut add = adder(&mut channels, &motor.name);
                    add("torque", ChannelKind::MotorTorque(place), Dimension::Torque);
                    add("power", ChannelKind::MotorPower(place), Dimension::Power);
                    if matches!(motor.law, MotorLaw::InductionCircuit { .. }) {
                        add("current", ChannelKind::MotorCurrent(place), Dimension::Current);
                    }
                }
            }
            Section::Loads => {
                for (place, load) in train.loads.iter().enumerate() {
                    load_channels(&mut channels, load, place);
                }
            }
            Section::Brakes => {
                for (place, brake) in train.brakes.iter().enumerate() {
                    let mut add = adder(&mut channels, &brake.name);
                    add("torque", ChannelKind::BrakeTorque(place), Dimension::Torque);
                    add("power", ChannelKind::BrakePower(place), Dimension::Power);
                }
            }
        }
    }
    channels
}

/// A closure that appends channels of one thing.
fn adder<'a>(
    channels: &'a mut Vec<Channel>,
    thing: &'a str,
) -> impl FnMut(&str, ChannelKind, Dimension) + 'a {
    move |channel, kind, dimension| {
        channels.push(Channel {
            name: format!("{thing}.{channel}"),
            kind,
            dimension,
            unit: dimension.si_unit(),
        });
    }
}

fn magnetic(channels: &mut Vec<Channel>, name: &str, place: usize, coupling: bool) {
    use MagneticChannel as M;
    let (first, second) =
        if coupling { ("torque_a", "torque_b") } else { ("torque_inner", "torque_outer") };
    let mut add = adder(channels, name);
    for (channel, kind, dimension) in [
        ("load_angle", M::LoadAngle, Dimension::Angle),
        ("phase", M::Phase, Dimension::Angle),
        ("slips", M::Slips, Dimension::One),
        ("net_slips", M::NetSlips, Dimension::One),
        ("pull_out_share", M::PullOutShare, Dimension::One),
        ("short_of_peak", M::ShortOfPeak, Dimension::One),
        ("slip_speed", M::SlipSpeed, Dimension::Speed),
        ("loss", M::Loss, Dimension::Power),
        (first, M::TorqueFirst, Dimension::Torque),
        (second, M::TorqueSecond, Dimension::Torque),
    ] {
        add(channel, ChannelKind::Magnetic(place, kind), dimension);
    }
    if !coupling {
        let kind = ChannelKind::Magnetic(place, M::TorqueModulator);
        add("torque_modulator", kind, Dimension::Torque);
    }
}

fn clutches(channels: &mut Vec<Channel>, list: &[Clutch], overrunning: bool) {
    for (place, clutch) in list.iter().enumerate() {
        if matches!(clutch.kind, ClutchKind::Overrunning { .. }) != overrunning {
            continue;
        }
        between(channels, &clutch.name, &|what| ChannelKind::Clutch(place, what));
    }
}

fn between(channels: &mut Vec<Channel>, name: &str, kind: &dyn Fn(ClutchChannel) -> ChannelKind) {
    let mut add = adder(channels, name);
    add("torque", kind(ClutchChannel::Torque), Dimension::Torque);
    add("slip_speed", kind(ClutchChannel::SlipSpeed), Dimension::Speed);
    add("loss", kind(ClutchChannel::Loss), Dimension::Power);
}

/// `magnet_temperature` of the one node, or one a member.
fn temperatures(
    channels: &mut Vec<Channel>,
    name: &str,
    place: usize,
    field: &Field,
    members: [&str; 2],
) {
    let Some(thermal) = &field.warmth.thermal else { return };
    let mut add = adder(channels, name);
    for (node, member) in members.iter().enumerate().take(thermal.nodes().count()) {
        let channel = match thermal.second {
            Some(_) => format!("magnet_temperature_{member}"),
            None => "magnet_temperature".to_owned(),
        };
        let kind = ChannelKind::Magnetic(place, MagneticChannel::Temperature(node));
        add(&channel, kind, Dimension::Temperature);
    }
}

fn load_channels(channels: &mut Vec<Channel>, load: &Load, place: usize) {
    let mut add = adder(channels, &load.name);
    add("torque", ChannelKind::LoadTorque(place), Dimension::Torque);
    add("power", ChannelKind::LoadPower(place), Dimension::Power);
    if matches!(load.law, LoadLaw::AxialRotor { .. }) {
        add("flow", ChannelKind::LoadFlow(place), Dimension::LinearSpeed);
        add("tip_speed_ratio", ChannelKind::LoadTipSpeedRatio(place), Dimension::One);
        add("power_coefficient", ChannelKind::LoadPowerCoefficient(place), Dimension::One);
    }
    if matches!(load.law, LoadLaw::AxialRotor { pitch_loop: Some(_), .. }) {
        add("pitch", ChannelKind::LoadPitch(place), Dimension::Angle);
    }
    if matches!(load.law, LoadLaw::Propeller { .. }) {
        add("advance_ratio", ChannelKind::LoadAdvanceRatio(place), Dimension::One);
    }
}
