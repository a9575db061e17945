//! The study `rainflow` as typed.

use crate::component::channel::Known;
use crate::component::requirement::{channel_dimension, limit};
use crate::quantity::{self, Dimension};
use crate::tree::{Fields, Range, Shape};

/// Bins of the histogram when `bins` is absent.
const USUAL_BINS: i64 = 20;

/// The study as typed, values in the channel's SI unit.
#[derive(Clone, Debug, PartialEq)]
pub struct RainflowSpec {
    /// The channel.
    pub of: String,
    /// Slope of the life line.
    pub slope: f64,
    /// Equivalent cycles of the damage-equivalent range.
    pub equivalent_cycles: f64,
    /// Swings smaller than this are not counted.
    pub gate: f64,
    /// Start of the window, s.
    pub after: Option<f64>,
    /// End of the window, s.
    pub before: Option<f64>,
    /// Bins of histogram and table.
    pub bins: usize,
    /// Limit on the damage-equivalent range.
    pub at_most: Option<f64>,
}

impl RainflowSpec {
    /// Reads the inside of `rainflow:`.
    pub fn read(fields: &mut Fields<'_>, known: Known<'_>) -> Self {
        let of = fields.name("of", "The channel whose cycles are counted.");
        let dimension =
            if fields.describing() { None } else { channel_dimension(fields, &of, known) };
        let slope = fields.quantity(
            "slope",
            Dimension::One,
            Range::Between(1.0, 30.0),
            "Slope of the life line: damage goes with the range to this power.",
        );
        let equivalent_cycles = fields.quantity_or(
            "equivalent_cycles",
            Dimension::One,
            Range::Positive,
            1.0,
            "Cycles of the damage-equivalent range that do the same damage.",
        );
        let gate = fields.raw(
            "gate",
            Shape::OfChannel,
            false,
            "Swings smaller than this are not counted; by default only rounding is left out.",
        );
        let gate = match (gate, dimension) {
            (Some(node), Some(dimension)) => {
                let path = fields.path_of("gate");
                let value =
                    quantity::read(&path, node, dimension, &mut fields.faults().borrow_mut());
                if value < 0.0 {
                    fields.fault("gate", "`gate` must not be negative");
                }
                value
            }
            _ => 0.0,
        };
        let time = |fields: &mut Fields<'_>, key, doc| {
            fields.quantity_optional(key, Dimension::Time, Range::NotNegative, doc)
        };
        let after = time(fields, "after", "Start of the window; default 0.");
        let before = time(fields, "before", "End of the window; default the end of the run.");
        if let (Some(after), Some(before)) = (after, before)
            && before <= after
        {
            fields.fault("before", "`before` must lie after `after`");
        }
        let bins = fields.whole_optional(
            "bins",
            1,
            1000,
            "Bins of the histogram and the range-mean table; default 20.",
        );
        fields.note_default(USUAL_BINS as f64);
        let at_most = limit(
            fields,
            "at_most",
            dimension,
            false,
            "The damage-equivalent range is at most this; gives a verdict.",
        );
        Self {
            of,
            slope,
            equivalent_cycles,
            gate,
            after,
            before,
            bins: usize::try_from(bins.unwrap_or(USUAL_BINS)).unwrap_or(1),
            at_most,
        }
    }
}
