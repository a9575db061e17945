//! The summary of a run for people: verdicts first, then what happened and why.

use super::measured;
use super::shown::{self, Shown};
use super::story;
use super::table::{Table, wrap};
use crate::analysis::records::RecordComparison;
use crate::component::motor::MotorLaw;
use crate::results::{ClutchResult, RequirementResult, RunResult};
use crate::scenario::{Scenario, Start};
use std::fmt::Write as _;

/// Width of the summary in letters.
pub const WIDTH: usize = 100;

/// Shares of a channel's size below this are rounding and shown as 0.
const ROUNDING: f64 = 1e-9;

/// What the summary tells beside the results.
#[derive(Clone, Copy, Debug)]
pub struct Telling<'a> {
    /// The scenario file as the command named it.
    pub file: &'a str,
    /// The folder of the results.
    pub output_folder: &'a str,
    /// The files in it.
    pub files: &'a [String],
    /// Measured records against the run.
    pub records: &'a [RecordComparison],
}

/// The summary of a run.
pub fn summary(scenario: &Scenario, result: &RunResult, telling: &Telling<'_>) -> String {
    let shown = Shown::new(&scenario.display);
    let mut text = String::new();
    text.push_str(&wrap("", heading(result), WIDTH));
    let _ = writeln!(text, "{}, run to {}", telling.file, shown::time(result.end_time));
    if let Some(failure) = &result.failure {
        text.push('\n');
        text.push_str(&wrap("", &format!("NOT COMPLETED: {failure}"), WIDTH));
    }
    text.push_str(&verdicts(result, shown));
    text.push_str(&gears(result, shown));
    text.push_str(&utilisation(scenario, result, shown));
    text.push_str(&peaks(result, shown));
    text.push_str(&measured::text(telling.records, shown));
    text.push_str(&start_up(scenario, result));
    text.push_str(&clutches(result));
    text.push_str(&bookkeeping(result));
    let warnings = match result.warnings.len() {
        0 => String::new(),
        1 => "1 warning, see above. ".to_owned(),
        count => format!("{count} warnings, see above. "),
    };
    let files = telling.files.join(", ");
    let last = format!("{warnings}Results in {}: {files}", telling.output_folder);
    text.push('\n');
    text.push_str(&wrap("", &last, WIDTH));
    text
}

fn heading(result: &RunResult) -> &str {
    if result.title.trim().is_empty() { "A run without a title" } else { &result.title }
}

/// The table of verdicts, failures first.
fn verdicts(result: &RunResult, shown: Shown<'_>) -> String {
    let all = result.requirements.len();
    if all == 0 {
        return "\nNo requirements are stated.\n".to_owned();
    }
    let count = |met| result.requirements.iter().filter(|one| one.met == met).count();
    let (failed, open) = (count(Some(false)), count(None));
    let all_of_them =
        if all == 1 { "the requirement".to_owned() } else { format!("all {all} requirements") };
    let mut text = match (failed, open) {
        (0, 0) => format!("\nMET: {all_of_them}\n"),
        (0, open) => format!("\nNOT JUDGED: {open} of {all} requirements\n"),
        (failed, 0) => format!("\nNOT MET: {failed} of {all} requirements\n"),
        (failed, open) => {
            format!("\nNOT MET: {failed} of {all} requirements, and {open} not judged\n")
        }
    };
    let mut table = Table::new("<<<<");
    let mut order: Vec<&RequirementResult> = result.requirements.iter().collect();
    order.sort_by_key(|one| one.met == Some(true));
    for one in order {
        let verdict = match one.met {
            Some(true) => "met",
            Some(false) => "NOT MET",
            None => "not judged",
        };
        table.row([verdict, &one.name, &one.text, &found(one, shown)]);
    }
    text.push_str(&table.text(2));
    text
}

fn found(one: &RequirementResult, shown: Shown<'_>) -> String {
    match (one.value, one.time) {
        (Some(value), Some(time)) if one.unit != "s" && value != 0.0 => {
            format!("found {} at {}", shown.value(&one.of, one.unit, value), shown::time(time))
        }
        (Some(value), _) => format!("found {}", shown.value(&one.of, one.unit, value)),
        (None, _) if one.met.is_none() => "the run did not get that far".to_owned(),
        (None, _) => "never".to_owned(),
    }
}

fn gears(result: &RunResult, shown: Shown<'_>) -> String {
    let mut text = String::new();
    for gear in &result.gears {
        text.push('\n');
        text.push_str(&wrap("", &story::told(gear, shown), WIDTH));
        if let (Some(ratio), false) = (story::ratio(gear), gear.coupling) {
            text.push_str(&wrap("  ", &format!("{ratio}."), WIDTH));
        }
        let pull_out = format!("Pull-out torque {}.", story::pull_out(gear, shown));
        text.push_str(&wrap("  ", &pull_out, WIDTH));
    }
    text
}

/// Shafts with a rated or a peak torque, against what the run found.
fn utilisation(scenario: &Scenario, result: &RunResult, shown: Shown<'_>) -> String {
    let mut table = Table::new("<>>>");
    for shaft in &scenario.shafts {
        let name = format!("{}.torque", shaft.name);
        let Some(channel) = result.channels.iter().find(|one| one.name == name) else { continue };
        if shaft.rated_torque.is_none() && shaft.peak_torque.is_none() {
            continue;
        }
        let largest = channel.max.abs().max(channel.min.abs());
        let of = |limit: Option<f64>, what: &str| {
            limit.map_or_else(String::new, |limit| {
                format!("{} of {what} {}", shown::percent(largest / limit), shown.torque(limit))
            })
        };
        table.row([
            &shaft.name,
            &shown.torque(largest),
            &of(shaft.rated_torque, "rated"),
            &of(shaft.peak_torque, "peak"),
        ]);
    }
    if table.is_empty() {
        String::new()
    } else {
        format!("\nShafts, largest torque\n{}", table.text(2))
    }
}

/// Extremes of the channels that an engineer looks at first.
fn peaks(result: &RunResult, shown: Shown<'_>) -> String {
    let mut table = Table::new("<>>>>>");
    table.row(["channel", "lowest", "at", "highest", "at", "at the end"]);
    let wanted = [".speed", ".torque", ".slip_speed", ".load_angle", ".flow"];
    for channel in &result.channels {
        let (_, what) = channel.name.split_at(channel.name.rfind('.').unwrap_or(0));
        let warm = what.starts_with(".magnet_temperature");
        if !(warm || wanted.contains(&what)) || channel.max < channel.min {
            continue;
        }
        let (_, unit) = shown.channel(&channel.name, channel.unit, channel.last);
        let size = channel.max.abs().max(channel.min.abs());
        let figure = |value: f64| {
            let value = if value.abs() < ROUNDING * size { 0.0 } else { value };
            shown.channel(&channel.name, channel.unit, value).0
        };
        let name = if unit.is_empty() {
            channel.name.clone()
        } else {
            format!("{}, {unit}", channel.name)
        };
        table.row([
            &name,
            &figure(channel.min),
            &moment(channel.min_time),
            &figure(channel.max),
            &moment(channel.max_time),
            &figure(channel.last),
        ]);
    }
    if table.len() < 2 { String::new() } else { format!("\n{}", table.text(2)) }
}

/// A time of a run; what is less than a microsecond after the start is the start.
fn moment(time: f64) -> String {
    shown::time(if time < 1e-6 { 0.0 } else { time })
}

fn start_up(scenario: &Scenario, result: &RunResult) -> String {
    let mut text = String::new();
    for motor in &result.motors {
        let reached = match motor.run_up_time {
            Some(at) => format!("95 % of synchronous speed at {}", shown::time(at)),
            None if began_at_speed(scenario, &motor.name) => {
                "at its speed from the start".to_owned()
            }
            None => "95 % of synchronous speed never reached".to_owned(),
        };
        let heat = motor
            .rotor_heat
            .map_or_else(String::new, |heat| format!(", rotor heat {}", shown::energy(heat)));
        let _ = writeln!(text, "  `{}`: {reached}{heat}", motor.name);
    }
    if text.is_empty() { text } else { format!("\nMotors\n{text}") }
}

fn clutches(result: &RunResult) -> String {
    let mut text = String::new();
    for clutch in &result.clutches {
        let _ = writeln!(text, "  `{}`: {}", clutch.name, clutch_words(clutch));
    }
    if text.is_empty() { text } else { format!("\nClutches\n{text}") }
}

/// What a clutch did, in words.
pub fn clutch_words(clutch: &ClutchResult) -> String {
    let count = |count: u32, what: &str| match count {
        0 => String::new(),
        1 => format!("{what} once, "),
        2 => format!("{what} twice, "),
        many => format!("{what} {many} times, "),
    };
    format!(
        "{}{}heat {}, {} at the end",
        count(clutch.slips, "began to slip"),
        count(clutch.releases, "ran free"),
        shown::energy(clutch.heat),
        clutch.state_at_end.word()
    )
}

/// Whether a motor starts at or above 95 % of its synchronous speed, as one in steady running does.
fn began_at_speed(scenario: &Scenario, motor: &str) -> bool {
    let Some(motor) = scenario.motors.iter().find(|one| one.name == motor) else { return false };
    let synchronous = match motor.law {
        MotorLaw::RatingPlate { synchronous_speed, .. }
        | MotorLaw::Induction { synchronous_speed, .. } => synchronous_speed,
        _ => return false,
    };
    let body = scenario.bodies.iter().find(|body| body.name == motor.body);
    let given = body.and_then(|body| body.speed).unwrap_or(0.0);
    scenario.start == Start::Steady || given.abs() >= 0.95 * synchronous.abs()
}

/// `1 event`, `2 events`.
fn counted(count: u64, what: &str) -> String {
    if count == 1 { format!("1 {what}") } else { format!("{count} {what}s") }
}

fn bookkeeping(result: &RunResult) -> String {
    let energy = &result.energy;
    let work = &result.solver;
    let turned_over = energy.supplied + energy.absorbed + energy.lost;
    let stored = energy.stored_change;
    let stored = if stored.abs() < ROUNDING * turned_over { 0.0 } else { stored };
    format!(
        "\nEnergy: supplied {}, absorbed {}, lost {}, stored {}; {} of it is unaccounted for.\n\
         Solver: {}, {}, {} rejected, {}, {}.\n",
        shown::energy(energy.supplied),
        shown::energy(energy.absorbed),
        shown::energy(energy.lost),
        shown::energy(stored),
        crate::quantity::format_number(energy.residual_share, 2),
        work.method,
        counted(work.steps, "step"),
        work.rejected,
        counted(work.evaluations, "evaluation"),
        counted(work.events, "event"),
    )
}
