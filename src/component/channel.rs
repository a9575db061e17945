//! Channels: every quantity of a train that can be asked for by name.

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
