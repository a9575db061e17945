//! Channels: every quantity of a train that can be asked for by name.

use super::body::Body;
use super::brake::Brake;
use super::clutch::Clutch;
use super::fluid_coupling::FluidCoupling;
use super::gear_pair::GearPair;
use super::load::Load;
use super::magnetic_gear::{MagneticCoupling, MagneticGear};
use super::motor::Motor;
use super::planetary::PlanetaryGear;
use super::shaft::Shaft;
use crate::quantity::Dimension;

pub use super::channel_list::list;

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
    /// Power that a gear pair's drag loses.
    GearPairLoss(usize),
    /// Constraint torque of a planetary set on its member (0 = sun, 1 = carrier, 2 = ring).
    PlanetaryTorque(usize, usize),
    /// A clutch (overrunning ones first, then torque limiters).
    Clutch(usize, ClutchChannel),
    /// A fluid coupling.
    FluidCoupling(usize, ClutchChannel),
    /// Torque of a motor on its body.
    MotorTorque(usize),
    /// Power of a motor into the train.
    MotorPower(usize),
    /// Current of a line of an induction motor by its circuit.
    MotorCurrent(usize),
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
    /// Pitch of an axial rotor with a pitch loop.
    LoadPitch(usize),
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
    /// What hysteresis takes, W.
    HysteresisLoss,
    /// What eddy currents take, W.
    EddyLoss,
    /// Temperature of the magnets of a thermal node, degC.
    Temperature(usize),
    /// Torque on the inner rotor (coupling: a).
    TorqueFirst,
    /// Torque on the outer rotor (coupling: b).
    TorqueSecond,
    /// Torque on the modulator (gears only).
    TorqueModulator,
}

/// Channels of an overrunning clutch, a torque limiter or a fluid coupling.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ClutchChannel {
    /// Torque on the second body.
    Torque,
    /// Speed of the first body against the second.
    SlipSpeed,
    /// Heat in W, never negative.
    Loss,
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
        "angle" | "twist" | "load_angle" | "phase" | "pitch" => Dimension::Angle,
        "power" | "loss" | "hysteresis_loss" | "eddy_loss" => Dimension::Power,
        "flow" => Dimension::LinearSpeed,
        "current" => Dimension::Current,
        "slips" | "net_slips" | "pull_out_share" | "short_of_peak" | "tip_speed_ratio"
        | "power_coefficient" | "advance_ratio" => Dimension::One,
        _ if quantity.starts_with("magnet_temperature") => Dimension::Temperature,
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
    /// `overrunning_clutches`.
    OverrunningClutches,
    /// `torque_limiters`.
    TorqueLimiters,
    /// `fluid_couplings`.
    FluidCouplings,
    /// `motors`.
    Motors,
    /// `loads`.
    Loads,
    /// `brakes`.
    Brakes,
}

impl Section {
    /// All of them in the order of the documentation.
    pub const ALL: [Self; 12] = [
        Self::Bodies,
        Self::Shafts,
        Self::MagneticGears,
        Self::MagneticCouplings,
        Self::GearPairs,
        Self::PlanetaryGears,
        Self::OverrunningClutches,
        Self::TorqueLimiters,
        Self::FluidCouplings,
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
            Self::OverrunningClutches => "overrunning_clutches",
            Self::TorqueLimiters => "torque_limiters",
            Self::FluidCouplings => "fluid_couplings",
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
    /// Overrunning clutches, then torque limiters.
    pub clutches: &'a [Clutch],
    /// Fluid couplings.
    pub fluid_couplings: &'a [FluidCoupling],
    /// Motors.
    pub motors: &'a [Motor],
    /// Loads.
    pub loads: &'a [Load],
    /// Brakes.
    pub brakes: &'a [Brake],
}
