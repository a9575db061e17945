//! `PATH: { values: [...] }` or `PATH: { from, to, count }`: a number and the values it takes.

use super::context::Context;
use super::varied::Varied;
use crate::diagnostic::Spot;
use crate::tree::{Fields, Node, Shape};

/// So many of many even steps are tried before anything runs.
const MOST_TRIED: usize = 200;

/// A number of the file and the values it takes one after the other.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// The number.
    pub varied: Varied,
    /// Its values, SI.
    pub values: Vec<f64>,
}

impl Axis {
    /// Reads the map under a path; the map stands in the section at `section`.
    pub fn read(
        fields: &mut Fields<'_>,
        section: &str,
        context: Option<&Context<'_>>,
    ) -> Option<Self> {
        let values = fields.raw("values", Shape::Free, false, "The values one by one, as a list.");
        let from = fields.raw("from", Shape::Free, false, "First of `count` even steps.");
        let to = fields.raw("to", Shape::Free, false, "Last of `count` even steps.");
        let count = fields.whole_optional("count", 2, 1_000_000, "How many values, 2 or more.");
        let context = context?;
        if fields.is_no_map() {
            return None;
        }
        let name = path_in(fields, section);
        let varied = context.varied(fields.path(), Spot::Key, name)?;
        let axis = match (values, from, to, count) {
            (Some(list), None, None, None) if !fields.has("count") => {
                Self { values: read_list(fields, list, &varied, context)?, varied }
            }
            (None, Some(from), Some(to), Some(count)) => {
                let from = context.quantity(&fields.path_of("from"), from, &varied);
                let to = context.quantity(&fields.path_of("to"), to, &varied);
                let (from, to) = (from?, to?);
                if from == to {
                    let both = varied.shown(from);
                    fields.fault_here(format!("the range is empty: both ends are {both}"));
                    return None;
                }
                let count = usize::try_from(count).unwrap_or(2);
                Self { values: steps(from, to, count, &varied), varied }
            }
            _ => {
                if !fields.has("count") || count.is_some() {
                    fields.fault_here_hint(
                        "the values are not given",
                        "give either values: [...], or from, to and count",
                    );
                }
                return None;
            }
        };
        let apart = if values.is_some() { 1 } else { axis.values.len().div_ceil(MOST_TRIED) };
        let last = axis.values.len().saturating_sub(1);
        for (index, value) in axis.values.iter().enumerate() {
            if index % apart != 0 && index != last {
                continue;
            }
            let words = axis.varied.shown(*value);
            let changes = [(&axis.varied, *value)];
            let possible = if values.is_some() {
                let at = fields.path_of(&format!("values.{index}"));
                context.try_values(&at, Spot::Value, &words, &changes)
            } else {
                context.try_values(fields.path(), Spot::Key, &words, &changes)
            };
            // In even steps the next ones are mostly impossible for the same reason.
            if !possible && values.is_none() {
                break;
            }
        }
        Some(axis)
    }
}

/// The dotted path that a key of a section is.
pub fn path_in<'f>(fields: &'f Fields<'_>, section: &str) -> &'f str {
    fields.path().strip_prefix(section).map_or("", |rest| rest.trim_start_matches('.'))
}

/// `count` values in even steps, both ends included; whole numbers once each.
pub fn steps(from: f64, to: f64, count: usize, varied: &Varied) -> Vec<f64> {
    let last = count.saturating_sub(1).max(1);
    let mut values: Vec<f64> = (0..count)
        .map(|step| {
            // Multiplied first, so that round steps come out round.
            let value = from + (to - from) * step as f64 / last as f64;
            varied.allowed(if step == last { to } else { value })
        })
        .collect();
    values.dedup();
    values
}

fn read_list(
    fields: &Fields<'_>,
    node: &Node,
    varied: &Varied,
    context: &Context<'_>,
) -> Option<Vec<f64>> {
    let Node::List(items) = node else {
        fields.fault("values", format!("`values` must be a list, not {}", node.kind()));
        return None;
    };
    if items.is_empty() {
        fields.fault("values", "the list of values is empty");
        return None;
    }
    let mut values = Vec::with_capacity(items.len());
    let mut sound = true;
    for (index, item) in items.iter().enumerate() {
        let key = format!("values.{index}");
        match context.quantity(&fields.path_of(&key), item, varied) {
            Some(value) if values.contains(&value) => {
                sound = false;
                fields.fault(&key, format!("{} stands twice", varied.shown(value)));
            }
            Some(value) => values.push(value),
            None => sound = false,
        }
    }
    sound.then_some(values)
}
