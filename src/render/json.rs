//! `summary.json`: the results of a run in SI and rad, for machines.

use super::measured;
use super::number::{json, json_optional};
use crate::analysis::records::RecordComparison;
use crate::analysis::study::outcome::{Extremes, GearFound};
use crate::results::{ChannelResult, GearResult, RequirementResult, RunResult};
use serde_json::{Map, Value};
use std::fmt::Write as _;

/// The width up to which a map or a list stays on one line.
const ONE_LINE: usize = 200;

/// What a summary says of itself beside the results.
#[derive(Clone, Copy, Debug, Default)]
pub struct Origin<'a> {
    /// The scenario file as the command named it.
    pub scenario: &'a str,
    /// Values set on the command line: path and value as typed.
    pub sets: &'a [(String, String)],
    /// The folder that holds the results.
    pub output_folder: &'a str,
}

/// The summary of a run.
pub fn summary(result: &RunResult, records: &[RecordComparison], origin: &Origin<'_>) -> Value {
    let mut root = Map::new();
    let mut put = |key: &str, value: Value| {
        root.insert(key.to_owned(), value);
    };
    put("title", Value::from(result.title.as_str()));
    put("program", Value::from(concat!("lodeshaft ", env!("CARGO_PKG_VERSION"))));
    put("scenario", Value::from(origin.scenario));
    put("set", named(origin.sets.iter().map(|(path, text)| (path.as_str(), text.as_str().into()))));
    put("output_folder", Value::from(origin.output_folder));
    put("completed", Value::from(result.completed));
    put("failure", result.failure.as_deref().map_or(Value::Null, Value::from));
    put("end_time", json(result.end_time));
    put("gears", gears(&result.gears));
    put("channels", named(result.channels.iter().map(channel)));
    put("requirements", requirements(&result.requirements));
    put("energy", energy(result));
    put("motors", motors(result));
    if !result.clutches.is_empty() {
        put("clutches", clutches(result));
    }
    if !records.is_empty() {
        put("measured", measured::to_json(records));
    }
    put("warnings", warnings(result));
    put("solver", solver(result));
    Value::Object(root)
}

/// Gears and couplings by name.
pub fn gears(gears: &[GearResult]) -> Value {
    named(gears.iter().map(|one| (one.name.as_str(), gear(one))))
}

/// Verdicts by name.
pub fn requirements(requirements: &[RequirementResult]) -> Value {
    named(requirements.iter().map(|one| (one.name.as_str(), requirement(one))))
}

/// A map from names to values in the order given.
pub fn named<'a>(entries: impl IntoIterator<Item = (&'a str, Value)>) -> Value {
    Value::Object(entries.into_iter().map(|(name, value)| (name.to_owned(), value)).collect())
}

fn gear(gear: &GearResult) -> Value {
    let slips = gear.slip_events.iter().map(|slip| {
        named([
            ("time", json(slip.time)),
            ("direction", Value::from(slip.direction)),
            ("slip_speed", json(slip.slip_speed)),
        ])
    });
    let members = gear.members.iter().map(|member| {
        let figures = named([
            ("body", Value::from(member.body.as_str())),
            ("count", json(member.count)),
            ("pull_out_torque", json(member.pull_out_torque)),
        ]);
        (member.member, figures)
    });
    named(gear_found(&GearFound::of(gear)).into_iter().chain([
        ("run_longer", json_optional(gear.run_longer)),
        ("time_past_peak", json(gear.time_past_peak)),
        ("slipping_time", json(gear.slipping_time)),
        ("longest_slipping", json(gear.longest_slipping)),
        ("longest_slipping_from", json(gear.longest_slipping_from)),
        ("ratio", json_optional(gear.ratio)),
        ("natural_frequency_hz", json(1.0 / gear.natural_period)),
        ("law_peaks", Value::Array(gear.law_peaks.iter().map(|peak| json(*peak)).collect())),
        ("members", named(members)),
        ("slip_events", Value::Array(slips.collect())),
    ]))
}

fn channel(channel: &ChannelResult) -> (&str, Value) {
    (channel.name.as_str(), extremes(channel.unit, &Extremes::of(channel)))
}

/// What every run tells of a gear or coupling.
pub fn gear_found(gear: &GearFound) -> [(&'static str, Value); 9] {
    [
        ("slips", Value::from(gear.slips)),
        ("net_slips", Value::from(gear.net_slips)),
        ("state_at_end", Value::from(gear.state_at_end.word())),
        ("resynchronised_at", json_optional(gear.resynchronised_at)),
        ("peak_pull_out_share", json(gear.peak_pull_out_share)),
        ("peak_pull_out_share_time", json(gear.peak_pull_out_share_time)),
        ("peak_load_angle", json(gear.peak_load_angle)),
        ("peak_load_angle_time", json(gear.peak_load_angle_time)),
        ("final_load_angle", json(gear.final_load_angle)),
    ]
}

/// Extremes of a channel in its unit.
pub fn extremes(unit: &str, found: &Extremes) -> Value {
    named([
        ("unit", Value::from(unit)),
        ("min", json(found.min)),
        ("min_time", json(found.min_time)),
        ("max", json(found.max)),
        ("max_time", json(found.max_time)),
        ("final", json(found.last)),
    ])
}

fn requirement(requirement: &RequirementResult) -> Value {
    named([
        ("text", Value::from(requirement.text.as_str())),
        ("of", Value::from(requirement.of.as_str())),
        ("met", requirement.met.map_or(Value::Null, Value::from)),
        ("value", json_optional(requirement.value)),
        ("limit", json_optional(requirement.limit)),
        ("unit", Value::from(requirement.unit)),
        ("time", json_optional(requirement.time)),
    ])
}

fn energy(result: &RunResult) -> Value {
    named([
        ("supplied", json(result.energy.supplied)),
        ("absorbed", json(result.energy.absorbed)),
        ("lost", json(result.energy.lost)),
        ("stored_change", json(result.energy.stored_change)),
        ("residual_share", json(result.energy.residual_share)),
    ])
}

fn motors(result: &RunResult) -> Value {
    named(result.motors.iter().map(|motor| {
        let figures = named([
            ("run_up_time", json_optional(motor.run_up_time)),
            ("rotor_heat", json_optional(motor.rotor_heat)),
        ]);
        (motor.name.as_str(), figures)
    }))
}

fn clutches(result: &RunResult) -> Value {
    named(result.clutches.iter().map(|clutch| {
        let figures = named([
            ("slips", Value::from(clutch.slips)),
            ("releases", Value::from(clutch.releases)),
            ("heat", json(clutch.heat)),
            ("state_at_end", Value::from(clutch.state_at_end.word())),
        ]);
        (clutch.name.as_str(), figures)
    }))
}

fn warnings(result: &RunResult) -> Value {
    let list = result.warnings.iter().map(|warning| {
        named([
            ("path", Value::from(warning.path.as_str())),
            ("text", Value::from(warning.text.as_str())),
        ])
    });
    Value::Array(list.collect())
}

fn solver(result: &RunResult) -> Value {
    named([
        ("method", Value::from(result.solver.method)),
        ("steps", Value::from(result.solver.steps)),
        ("rejected", Value::from(result.solver.rejected)),
        ("evaluations", Value::from(result.solver.evaluations)),
        ("events", Value::from(result.solver.events)),
    ])
}

/// JSON for files: small maps and lists on one line, the others indented; ends with a line break.
pub fn pretty(value: &Value) -> String {
    let mut text = String::new();
    write(value, 0, &mut text);
    text.push('\n');
    text
}

fn write(value: &Value, depth: usize, text: &mut String) {
    let compact = one_line(value);
    if depth > 0 && compact.len() <= ONE_LINE {
        text.push_str(&compact);
        return;
    }
    let indent = |text: &mut String, depth: usize| {
        let _ = write!(text, "\n{:width$}", "", width = 2 * depth);
    };
    match value {
        Value::Object(map) if !map.is_empty() => {
            text.push('{');
            for (index, (key, inside)) in map.iter().enumerate() {
                text.push_str(if index > 0 { "," } else { "" });
                indent(text, depth + 1);
                let _ = write!(text, "{}: ", Value::from(key.as_str()));
                write(inside, depth + 1, text);
            }
            indent(text, depth);
            text.push('}');
        }
        Value::Array(list) if !list.is_empty() => {
            text.push('[');
            for (index, inside) in list.iter().enumerate() {
                text.push_str(if index > 0 { "," } else { "" });
                indent(text, depth + 1);
                write(inside, depth + 1, text);
            }
            indent(text, depth);
            text.push(']');
        }
        _ => text.push_str(&compact),
    }
}

fn one_line(value: &Value) -> String {
    match value {
        Value::Object(map) if !map.is_empty() => {
            let inside: Vec<String> = map
                .iter()
                .map(|(key, value)| format!("{}: {}", Value::from(key.as_str()), one_line(value)))
                .collect();
            format!("{{ {} }}", inside.join(", "))
        }
        Value::Array(list) if !list.is_empty() => {
            let inside: Vec<String> = list.iter().map(one_line).collect();
            format!("[{}]", inside.join(", "))
        }
        other => other.to_string(),
    }
}
