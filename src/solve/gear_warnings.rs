//! What a run did to its magnetic gears and couplings that their owner does not allow.

use super::run::Run;
use crate::component::channel::{ChannelKind, MagneticChannel};
use crate::component::magnetic_gear::Field;
use crate::component::requirement::{Requirement, Test};
use crate::equations::Equations;
use crate::quantity::format_number;

/// Channels of the magnets' temperatures that have a limit, each with the watch on it.
pub fn watches(equations: &Equations) -> Vec<(usize, Requirement)> {
    let channels = equations.model.channels.iter().enumerate();
    channels
        .filter_map(|(place, channel)| {
            let ChannelKind::Magnetic(magnet, MagneticChannel::Temperature(node)) = channel.kind
            else {
                return None;
            };
            let warmth = &equations.model.magnets.get(magnet)?.warmth;
            let [first, second] = warmth.maximum;
            let limit = match warmth.thermal.and_then(|thermal| thermal.second) {
                Some(_) => warmth.maximum[node],
                None => first.into_iter().chain(second).reduce(f64::min),
            };
            let watch = Requirement {
                name: String::new(),
                of: channel.name.clone(),
                test: Test::Reaches { value: limit?, within: None, band: None },
                signed: true,
                after: None,
                before: None,
                text: String::new(),
                source: None,
            };
            Some((place, watch))
        })
        .collect()
}

/// Adds the warnings of a finished run.
pub fn add(run: &mut Run<'_, '_>) {
    warn_of_slipping(run);
    warn_of_heat(run);
}

fn fields<'r>(run: &'r Run<'_, '_>) -> impl Iterator<Item = &'r Field> {
    let scenario = &run.equations.model.scenario;
    let gears = scenario.magnetic_gears.iter().map(|gear| &gear.field);
    gears.chain(scenario.magnetic_couplings.iter().map(|coupling| &coupling.field))
}

fn warn_of_slipping(run: &mut Run<'_, '_>) {
    let magnets = run.equations.model.magnets.iter();
    let told: Vec<_> = fields(run)
        .zip(magnets)
        .zip(&run.observer.gears)
        .filter_map(|((field, magnet), track)| {
            let limit = field.slip_time_limit.filter(|limit| track.spells.longest > *limit)?;
            let text = format!(
                "`{}` slips for {} s at a stretch, from {} s on; {} s are allowed",
                magnet.name,
                format_number(track.spells.longest, 4),
                format_number(track.spells.longest_start, 6),
                format_number(limit, 4),
            );
            Some((format!("{}.slip_time_limit", magnet.path), text))
        })
        .collect();
    run.warnings.extend(told);
}

fn warn_of_heat(run: &mut Run<'_, '_>) {
    let equations = run.equations;
    // The watches stand behind those of the motors' run-up.
    let own = run.observer.windows.iter().filter(|window| window.requirement.is_none());
    let told: Vec<_> = own
        .skip(equations.heats.len())
        .zip(watches(equations))
        .filter_map(|(window, (channel, watch))| {
            let hottest = run.observer.extremes[channel].max;
            let Test::Reaches { value: limit, .. } = watch.test else { return None };
            let kind = equations.model.channels[channel].kind;
            let ChannelKind::Magnetic(magnet, MagneticChannel::Temperature(node)) = kind else {
                return None;
            };
            let magnet = &equations.model.magnets[magnet];
            let start = magnet.warmth.thermal?.initial()[node];
            let when = match window.reached() {
                Some(time) if start <= limit => format!("from {} s on", format_number(time, 6)),
                _ => "from the start".to_owned(),
            };
            let text = format!(
                "`{}` stands above the maximum_temperature of {} degC {when}, at most at {} degC: part of the \
                 remanence may be lost for good, and the pull-out torque with it",
                watch.of,
                format_number(limit, 6),
                format_number(hottest, 6),
            );
            let path = format!("{}.maximum_temperature", magnet.path);
            (hottest > limit).then_some((path, text))
        })
        .collect();
    run.warnings.extend(told);
}
