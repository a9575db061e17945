//! `sweep: { vary: { PATH: ..., PATH: ... }, channels }` as typed.

use super::axis::Axis;
use super::channels;
use super::context::Context;
use crate::diagnostic::Spot;
use crate::tree::{Fields, Node};

/// Runs beyond this are a mistake.
const MOST_RUNS: usize = 1_000_000;

/// Runs over all values of one or two numbers.
#[derive(Clone, Debug, PartialEq)]
pub struct Sweep {
    /// One or two numbers with their values; the second runs faster.
    pub axes: Vec<Axis>,
    /// Channels whose extremes go into the table.
    pub channels: Vec<String>,
}

impl Sweep {
    /// Reads the inside of `sweep:`; `None` when it is at fault.
    pub fn read(fields: &mut Fields<'_>, context: Option<&Context<'_>>) -> Option<Self> {
        let section = fields.path_of("vary");
        let axes = fields.paths(
            "vary",
            "One or two numbers of the file by their dotted paths, with the values they take.",
            |axis| Axis::read(axis, &section, context),
        );
        let channels = channels::read(fields, context);
        let _ = fields.source();
        let context = context?;
        let typed = match fields.entries().iter().find(|(key, _)| key == "vary") {
            Some((_, Node::Map(entries))) => entries.len(),
            Some((_, Node::Null)) => 0,
            Some(_) => return None,
            None => {
                fields.miss("vary", "for example vary: { bodies.rotor.inertia: { from: 1 kg*m2, to: 4 kg*m2, count: 12 } }");
                return None;
            }
        };
        if typed == 0 || typed > 2 {
            fields.fault("vary", format!("one or two numbers can be varied, not {typed}"));
            return None;
        }
        let axes: Vec<Axis> = axes.into_iter().flatten().collect();
        if axes.len() < typed {
            return None;
        }
        let runs = axes.iter().fold(1_usize, |runs, axis| runs.saturating_mul(axis.values.len()));
        if runs > MOST_RUNS {
            fields.fault(
                "vary",
                format!("this makes {runs} runs; more than {MOST_RUNS} are a mistake"),
            );
            return None;
        }
        if let [first, second] = axes.as_slice() {
            try_corners(&section, first, second, context);
        }
        Some(Self { axes, channels })
    }
}

/// Values that are possible one by one may contradict each other.
fn try_corners(section: &str, first: &Axis, second: &Axis, context: &Context<'_>) {
    if context.faults.borrow().has_error_under(section) {
        return;
    }
    let ends = |axis: &Axis| [axis.values.first().copied(), axis.values.last().copied()];
    for a in ends(first).into_iter().flatten() {
        for b in ends(second).into_iter().flatten() {
            let words = format!("{} with {}", first.varied.shown(a), second.varied.shown(b));
            let changes = [(&first.varied, a), (&second.varied, b)];
            if !context.try_values(section, Spot::Value, &words, &changes) {
                return;
            }
        }
    }
}
