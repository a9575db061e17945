//! Channels: every quantity of a train that can be asked for by name.

use super::body::Body;
use super::brake::Brake;
use super::gear_pair::GearPair;
use super::load::{Load, LoadLaw};
use super::magnetic_gear::{MagneticCoupling, MagneticGear};
use super::motor::Motor;
use super::planetary::PlanetaryGear;
use super::shaft::Shaft;
use crate::quantity::Dimension;

/// One channel.
#[derive(Clone, Debug, PartialEq)]
pub struct Channel {
    /// For example `motor_shaft.torque`.
    pub name: String,
    /// What it is.
    pub kind: ChannelKind,
    /// Dimension of its value.
    pub dimension: Dimension,
    /// SI unit as written in files: rad/s, rad, N*m, W, 1, m/s.
    pub unit: &'static str,
}

/// What a channel shows; the number is the thing's place in its section of the file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ChannelKind {
    /// Speed of a body.
    BodySpeed(usize),
    /// Angle of a body, whole turns counted, 0 at the start.
    BodyAngle(usize),
    /// Torque of a shaft on b (of a rigid shaft: what the constraint puts on b).
    ShaftTorque(usize),
    /// Twist of an elastic shaft.
    ShaftTwist(usize),
    /// A magnetic gear or coupling (gears first, then couplings).
    Magnetic(usize, MagneticChannel),
    /// Constraint torque of a gear pair on its member (0 = a, 1 = b).
    GearPairTorque(usize, usize),
    /// Constraint torque of a planetary set on its member (0 = sun, 1 = carrier, 2 = ring).
    PlanetaryTorque(usize, usize),
    /// Torque of a motor on its body.
    MotorTorque(usize),
    /// Power of a motor into the train.
    MotorPower(usize),
    /// Torque of a load on its body.
    LoadTorque(usize),
    /// Power of a load into the train.
    LoadPower(usize),
    /// Torque of a brake on its body.
    BrakeTorque(usize),
    /// Power of a brake into the train.
    BrakePower(usize),
    /// Flow at an axial rotor.
    LoadFlow(usize),
    /// Tip speed ratio of an axial rotor, 0 while the flow is not positive.
    LoadTipSpeedRatio(usize),
    /// Power coefficient of an axial rotor, 0 while the flow is not positive.
    LoadPowerCoefficient(usize),
    /// Advance ratio of a propeller, within plus and minus 100.
    LoadAdvanceRatio(usize),
}

/// Channels of a magnetic gear or coupling.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum MagneticChannel {
    /// In (-pi, pi].
    LoadAngle,
    /// Not wrapped.
    Phase,
    /// All slips.
    Slips,
    /// Forward minus backward.
    NetSlips,
    /// Synchronous torque over the peak on its side.
    PullOutShare,
    /// 1 while short of the peak, else 0.
    ShortOfPeak,
    /// Phase rate, electrical rad/s.
    SlipSpeed,
    /// Damper's power, W, never negative.
    Loss,
    /// Torque on the inner rotor (coupling: a).
    TorqueFirst,
    /// Torque on the outer rotor (coupling: b).
    TorqueSecond,
    /// Torque on the modulator (gears only).
    TorqueModulator,
}

/// The channels of a train as the reader of limits knows them.
#[derive(Clone, Copy, Debug)]
pub struct Known<'a> {
    /// All that could be listed.
    pub channels: &'a [Channel],
    /// False when a part of the train could not be read, so that a channel may be missing for that reason.
    pub complete: bool,
}

impl<'a> Known<'a> {
    /// The channels of a train that was read without fault.
    pub fn all(channels: &'a [Channel]) -> Self {
        Self { channels, complete: true }
    }
}

/// The dimension of a channel by the part of its name after the dot.
pub fn dimension_of(channel: &str) -> Option<Dimension> {
    let quantity = channel.split_once('.')?.1;
    Some(match quantity {
        "speed" | "slip_speed" => Dimension::Speed,
        "angle" | "twist" | "load_angle" | "phase" => Dimension::Angle,
        "power" | "loss" => Dimension::Power,
        "flow" => Dimension::LinearSpeed,
        "slips" | "net_slips" | "pull_out_share" | "short_of_peak" | "tip_speed_ratio"
        | "power_coefficient" | "advance_ratio" => Dimension::One,
        _ if quantity.starts_with("torque") => Dimension::Torque,
        _ => return None,
    })
}

/// The sections of a scenario that have channels.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Section {
    /// `bodies`.
    Bodies,
    /// `shafts`.
    Shafts,
    /// `magnetic_gears`.
    MagneticGears,
    /// `magnetic_couplings`.
    MagneticCouplings,
    /// `gear_pairs`.
    GearPairs,
    /// `planetary_gears`.
    PlanetaryGears,
    /// `motors`.
    Motors,
    /// `loads`.
    Loads,
    /// `brakes`.
    Brakes,
}

impl Section {
    /// All of them in the order of the documentation.
    pub const ALL: [Self; 9] = [
        Self::Bodies,
        Self::Shafts,
        Self::MagneticGears,
        Self::MagneticCouplings,
        Self::GearPairs,
        Self::PlanetaryGears,
        Self::Motors,
        Self::Loads,
        Self::Brakes,
    ];

    /// Its key in the file.
    pub fn key(self) -> &'static str {
        match self {
            Self::Bodies => "bodies",
            Self::Shafts => "shafts",
            Self::MagneticGears => "magnetic_gears",
            Self::MagneticCouplings => "magnetic_couplings",
            Self::GearPairs => "gear_pairs",
            Self::PlanetaryGears => "planetary_gears",
            Self::Motors => "motors",
            Self::Loads => "loads",
            Self::Brakes => "brakes",
        }
    }
}

/// The things of a train that have channels.
#[derive(Clone, Copy, Debug)]
pub struct Train<'a> {
    /// Bodies.
    pub bodies: &'a [Body],
    /// Shafts.
    pub shafts: &'a [Shaft],
    /// Magnetic gears.
    pub magnetic_gears: &'a [MagneticGear],
    /// Magnetic couplings.
    pub magnetic_couplings: &'a [MagneticCoupling],
    /// Rigid gear pairs.
    pub gear_pairs: &'a [GearPair],
    /// Rigid planetary sets.
    pub planetary_gears: &'a [PlanetaryGear],
    /// Motors.
    pub motors: &'a [Motor],
    /// Loads.
    pub loads: &'a [Load],
    /// Brakes.
    pub brakes: &'a [Brake],
}

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
                }
            }
            Section::MagneticCouplings => {
                let gears = train.magnetic_gears.len();
                for (place, coupling) in train.magnetic_couplings.iter().enumerate() {
                    magnetic(&mut channels, &coupling.name, gears + place, true);
                }
            }
            Section::GearPairs => {
                for (place, pair) in train.gear_pairs.iter().enumerate() {
                    let mut add = adder(&mut channels, &pair.name);
                    for (member, channel) in ["torque_a", "torque_b"].into_iter().enumerate() {
                        let kind = ChannelKind::GearPairTorque(place, member);
                        add(channel, kind, Dimension::Torque);
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
            Section::Motors => {
                for (place, motor) in train.motors.iter().enumerate() {
                    let mut add = adder(&mut channels, &motor.name);
                    add("torque", ChannelKind::MotorTorque(place), Dimension::Torque);
                    add("power", ChannelKind::MotorPower(place), Dimension::Power);
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

fn load_channels(channels: &mut Vec<Channel>, load: &Load, place: usize) {
    let mut add = adder(channels, &load.name);
    add("torque", ChannelKind::LoadTorque(place), Dimension::Torque);
    add("power", ChannelKind::LoadPower(place), Dimension::Power);
    if matches!(load.law, LoadLaw::AxialRotor { .. }) {
        add("flow", ChannelKind::LoadFlow(place), Dimension::LinearSpeed);
        add("tip_speed_ratio", ChannelKind::LoadTipSpeedRatio(place), Dimension::One);
        add("power_coefficient", ChannelKind::LoadPowerCoefficient(place), Dimension::One);
    }
    if matches!(load.law, LoadLaw::Propeller { .. }) {
        add("advance_ratio", ChannelKind::LoadAdvanceRatio(place), Dimension::One);
    }
}
