//! One run of a study: a changed tree is read, built and run for what is asked.

use super::outcome::{Layout, Outcome};
use crate::analysis::transient;
use crate::component::channel::{ChannelKind, MagneticChannel};
use crate::diagnostic::Diagnostics;
use crate::scenario::{Method, Scenario, Tables, read_node};
use crate::solve::{RunOptions, Wanted};
use crate::tree::Node;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

/// What is asked of every run of a study.
#[derive(Clone, Copy, Debug)]
pub struct Asked<'a> {
    /// What goes into the table.
    pub layout: &'a Layout,
    /// Set from outside to end the study.
    pub interrupt: &'a AtomicBool,
}

/// Time that a run took.
#[derive(Clone, Copy, Debug, Default)]
pub struct Spent {
    /// Reading the changed file and building its equations.
    pub preparing: Duration,
    /// Integrating.
    pub integrating: Duration,
}

/// Runs a changed tree; `None` when it was interrupted.
///
/// `sharper` runs at a tenth of the tolerance (of the step with rk4). Whatever goes wrong
/// becomes a row with its reason: even a fault of this program costs one run, not the study.
pub fn run(
    tree: &Node,
    sharper: bool,
    tables: &mut Tables,
    asked: &Asked<'_>,
) -> Option<(Outcome, Spent)> {
    let attempt = catch_unwind(AssertUnwindSafe(|| attempt(tree, sharper, tables, asked)));
    attempt.unwrap_or_else(|_| {
        let reason = "the program failed in this run, which is a fault of the program".to_owned();
        Some((Outcome::failed(asked.layout, 0.0, reason), Spent::default()))
    })
}

fn attempt(
    tree: &Node,
    sharper: bool,
    tables: &mut Tables,
    asked: &Asked<'_>,
) -> Option<(Outcome, Spent)> {
    let start = Instant::now();
    let prepared = read_node(tree, tables).and_then(|(mut scenario, _)| {
        if sharper {
            sharpen(&mut scenario);
        }
        transient::prepare(&scenario)
    });
    let equations = match prepared {
        Ok(equations) => equations,
        Err(found) => {
            let reason = first_fault("the changed file is at fault", &found);
            let spent = Spent { preparing: start.elapsed(), ..Spent::default() };
            return Some((Outcome::failed(asked.layout, 0.0, reason), spent));
        }
    };
    let wanted = wanted(asked.layout, &equations.model.channels);
    let preparing = start.elapsed();
    let start = Instant::now();
    let options = RunOptions {
        wanted: Wanted::Asked(wanted),
        interrupt: Some(asked.interrupt),
        ..RunOptions::default()
    };
    let result = transient::run_prepared(&equations, options);
    let spent = Spent { preparing, integrating: start.elapsed() };
    match result {
        Ok(result) => {
            if !result.completed && asked.interrupt.load(Ordering::Relaxed) {
                return None;
            }
            Some((Outcome::of(asked.layout, &result), spent))
        }
        Err(found) => {
            let reason = first_fault("there is no steady start", &found);
            Some((Outcome::failed(asked.layout, 0.0, reason), spent))
        }
    }
}

/// A tenth of the tolerance, or of the fixed step.
fn sharpen(scenario: &mut Scenario) {
    match scenario.solver.method {
        Method::Rk4 => scenario.solver.step = scenario.solver.step.map(|step| step / 10.0),
        Method::Dopri5 | Method::Dop853 => scenario.solver.tolerance /= 10.0,
    }
}

/// Channels to follow: those of the table, and the load angles, whose peaks stand in it.
fn wanted(layout: &Layout, channels: &[crate::component::channel::Channel]) -> Vec<usize> {
    let is_angle = |kind| matches!(kind, ChannelKind::Magnetic(_, MagneticChannel::LoadAngle));
    channels
        .iter()
        .enumerate()
        .filter(|(_, channel)| {
            is_angle(channel.kind) || layout.channels.iter().any(|(name, _)| *name == channel.name)
        })
        .map(|(place, _)| place)
        .collect()
}

fn first_fault(what: &str, found: &Diagnostics) -> String {
    match found.iter().find(|entry| entry.severity.is_error()) {
        Some(fault) if fault.path.is_empty() || fault.path == "start" => {
            format!("{what}: {}", fault.message)
        }
        Some(fault) => format!("{what}: {} ({})", fault.message, fault.path),
        None => what.to_owned(),
    }
}
