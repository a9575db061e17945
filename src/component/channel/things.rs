//! The channels of the things that have several.

use super::{Channel, ChannelKind, ClutchChannel, MagneticChannel};
use crate::component::clutch::{Clutch, ClutchKind};
use crate::component::load::{Load, LoadLaw};
use crate::component::magnetic_gear::Field;
use crate::quantity::Dimension;

/// A closure that appends channels of one thing.
pub(super) fn adder<'a>(
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

pub(super) fn magnetic(channels: &mut Vec<Channel>, name: &str, place: usize, coupling: bool) {
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

/// `magnet_temperature` of the one node, or one a member.
pub(super) fn temperatures(
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

pub(super) fn clutches(channels: &mut Vec<Channel>, list: &[Clutch], overrunning: bool) {
    for (place, clutch) in list.iter().enumerate() {
        if matches!(clutch.kind, ClutchKind::Overrunning { .. }) != overrunning {
            continue;
        }
        between(channels, &clutch.name, &|what| ChannelKind::Clutch(place, what));
    }
}

pub(super) fn between(
    channels: &mut Vec<Channel>,
    name: &str,
    kind: &dyn Fn(ClutchChannel) -> ChannelKind,
) {
    let mut add = adder(channels, name);
    add("torque", kind(ClutchChannel::Torque), Dimension::Torque);
    add("slip_speed", kind(ClutchChannel::SlipSpeed), Dimension::Speed);
    add("loss", kind(ClutchChannel::Loss), Dimension::Power);
}

pub(super) fn load_channels(channels: &mut Vec<Channel>, load: &Load, place: usize) {
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
}
