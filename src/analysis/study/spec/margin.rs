//! `margin: { vary, between, at_least, points, accuracy }` as typed.

use super::channels;
use super::context::Context;
use super::varied::Varied;
use crate::diagnostic::Spot;
use crate::quantity::{self, Dimension};
use crate::tree::{Fields, Node, Range, Shape};

/// Runs of the coarse scan when `points` is absent.
const USUAL_POINTS: i64 = 25;

/// Width of the last bracket as a share of the range when `accuracy` is absent.
const USUAL_ACCURACY: f64 = 5e-4;

/// How far a number of the file can go before a requirement fails.
#[derive(Clone, Debug, PartialEq)]
pub struct Margin {
    /// The number.
    pub varied: Varied,
    /// Where the scan begins, SI.
    pub from: f64,
    /// Where it ends, SI.
    pub to: f64,
    /// Runs of the coarse scan.
    pub points: usize,
    /// Width of the last bracket, SI.
    pub accuracy: f64,
    /// Least margin asked for, as a share of the design value.
    pub at_least: Option<f64>,
    /// Channels whose extremes go into the table.
    pub channels: Vec<String>,
}

impl Margin {
    /// Reads the inside of `margin:`; `None` when it is at fault.
    pub fn read(fields: &mut Fields<'_>, context: Option<&Context<'_>>) -> Option<Self> {
        let vary = fields.name("vary", "Dotted path of the number that is varied.");
        let between = fields.raw(
            "between",
            Shape::Free,
            true,
            "The range as a list of two values, scanned from the first to the second.",
        );
        let at_least = fields.quantity_optional(
            "at_least",
            Dimension::One,
            Range::Any,
            "Least margin as a share of the design value; gives a verdict.",
        );
        let points = fields
            .whole_optional("points", 2, 1_000_000, "Runs of the coarse scan; default 25.")
            .unwrap_or(USUAL_POINTS);
        let accuracy = fields.raw(
            "accuracy",
            Shape::Free,
            false,
            "Width of the last bracket: a share of the range (default 0.05 %), or in the unit of the value.",
        );
        let channels = channels::read(fields, context);
        let _ = fields.source();
        let context = context?;
        if let Some(scenario) = context.scenario
            && scenario.requirements.is_empty()
        {
            fields.fault_here_hint(
                "a margin needs a requirement that can fail",
                "for example requirements: { no_slip: { of: gear.slips, at_most: 0 } }",
            );
        }
        let varied = context.varied(&fields.path_of("vary"), Spot::Value, &vary)?;
        let [from, to] = read_range(fields, between?, &varied, context)?;
        let width = (to - from).abs();
        let accuracy = match accuracy {
            None => USUAL_ACCURACY * width,
            Some(node) => read_accuracy(fields, node, &varied, width, context)?,
        };
        for (entry, value) in [(0, from), (1, to)] {
            let at = fields.path_of(&format!("between.{entry}"));
            context.try_values(&at, Spot::Value, &varied.shown(value), &[(&varied, value)]);
        }
        let margin = Self {
            varied,
            from,
            to,
            points: usize::try_from(points).unwrap_or(2),
            accuracy: accuracy.max(1e-14 * width),
            at_least,
            channels,
        };
        margin.warn_of_short_range(fields);
        Some(margin)
    }

    /// A range that ends before the margin asked for can never prove it.
    fn warn_of_short_range(&self, fields: &Fields<'_>) {
        let (Some(asked), Some(largest)) = (self.at_least, self.share(self.to)) else { return };
        if asked > largest {
            fields.warn(
                "at_least",
                format!(
                    "the range ends at a margin of {} %, so that {} % can never be shown",
                    quantity::format_number(100.0 * largest, 3),
                    quantity::format_number(100.0 * asked, 3)
                ),
            );
        }
    }

    /// Distance from the design value to a value over the design value, positive in the
    /// direction of the scan; `None` without a design value or when it is zero.
    pub fn share(&self, value: f64) -> Option<f64> {
        let design = self.varied.design.filter(|design| *design != 0.0)?;
        Some((value - design) * (self.to - self.from).signum() / design.abs())
    }
}

fn read_range(
    fields: &Fields<'_>,
    node: &Node,
    varied: &Varied,
    context: &Context<'_>,
) -> Option<[f64; 2]> {
    let Node::List(items) = node else {
        fields.fault_hint(
            "between",
            format!("`between` must be a list of two values, not {}", node.kind()),
            "for example between: [600 N*m, 1500 N*m]",
        );
        return None;
    };
    let [first, second] = items.as_slice() else {
        let message = format!("`between` must be a list of two values, not {}", items.len());
        fields.fault("between", message);
        return None;
    };
    let from = context.quantity(&fields.path_of("between.0"), first, varied);
    let to = context.quantity(&fields.path_of("between.1"), second, varied);
    let (from, to) = (from?, to?);
    if from == to {
        let message = format!("the range is empty: both ends are {}", varied.shown(from));
        fields.fault("between", message);
        return None;
    }
    Some([from, to])
}

/// A share of the range, or a width in the dimension of the number.
fn read_accuracy(
    fields: &Fields<'_>,
    node: &Node,
    varied: &Varied,
    width: f64,
    context: &Context<'_>,
) -> Option<f64> {
    let at = fields.path_of("accuracy");
    let is_share = match node {
        Node::Number(_) => true,
        Node::Text(text) => {
            matches!(quantity::parse_any(text), Ok((_, None | Some(Dimension::One))))
        }
        _ => false,
    };
    let accuracy = if is_share {
        let share = quantity::read(&at, node, Dimension::One, &mut context.faults.borrow_mut());
        share * width
    } else {
        quantity::read(&at, node, varied.dimension, &mut context.faults.borrow_mut())
    };
    if accuracy.is_nan() {
        return None;
    }
    if accuracy <= 0.0 || accuracy > width {
        fields.fault("accuracy", "`accuracy` must lie above zero and within the range");
        return None;
    }
    Some(accuracy)
}
