//! `monte_carlo: { draws, seed, slipping_at_most, spread, channels }` as typed.

use super::channels;
use super::context::Context;
use super::spread::Spread;
use crate::diagnostic::Spot;
use crate::quantity::Dimension;
use crate::tree::{Fields, Node, Range};

/// Draws beyond this are a mistake.
const MOST_DRAWS: i64 = 1_000_000;

/// Many runs with numbers of the file drawn at random.
#[derive(Clone, Debug, PartialEq)]
pub struct MonteCarlo {
    /// How many.
    pub draws: usize,
    /// Seed of the draws.
    pub seed: u64,
    /// Largest share of draws that may slip.
    pub slipping_at_most: Option<f64>,
    /// The numbers that scatter.
    pub spreads: Vec<Spread>,
    /// Channels whose extremes go into the table.
    pub channels: Vec<String>,
}

impl MonteCarlo {
    /// Reads the inside of `monte_carlo:`; `None` when it is at fault.
    pub fn read(fields: &mut Fields<'_>, context: Option<&Context<'_>>) -> Option<Self> {
        let draws = fields.whole("draws", 1, MOST_DRAWS, "How many runs.");
        let seed = fields
            .whole_optional(
                "seed",
                0,
                1 << 53,
                "Seed of the draws; default 1. The same seed gives the same draws.",
            )
            .unwrap_or(1);
        let slipping_at_most = fields.quantity_optional(
            "slipping_at_most",
            Dimension::One,
            Range::Between(0.0, 1.0),
            "Largest share of the draws in which a magnetic gear or coupling slips; gives a verdict.",
        );
        let section = fields.path_of("spread");
        let spreads = fields.paths(
            "spread",
            "Numbers of the file by their dotted paths, with the way they scatter.",
            |spread| Spread::read(spread, &section, context),
        );
        let channels = channels::read(fields, context);
        let _ = fields.source();
        let context = context?;
        if let Some(scenario) = context.scenario
            && slipping_at_most.is_some()
            && scenario.magnetic_gears.is_empty()
            && scenario.magnetic_couplings.is_empty()
        {
            fields.fault(
                "slipping_at_most",
                "the train has no magnetic gear or coupling that could slip",
            );
        }
        let typed = match fields.entries().iter().find(|(key, _)| key == "spread") {
            Some((_, Node::Map(entries))) => entries.len(),
            Some((_, Node::Null)) => 0,
            Some(_) => return None,
            None => {
                fields.miss(
                    "spread",
                    "for example spread: { bodies.rotor.inertia: { normal: { relative: 5 % } } }",
                );
                return None;
            }
        };
        if typed == 0 {
            fields.fault("spread", "nothing scatters: name at least one number");
            return None;
        }
        let spreads: Vec<Spread> = spreads.into_iter().flatten().collect();
        if spreads.len() < typed {
            return None;
        }
        try_all_together(&section, &spreads, context);
        Some(Self {
            draws: usize::try_from(draws).unwrap_or(1),
            seed: u64::try_from(seed).unwrap_or(1),
            slipping_at_most,
            spreads,
            channels,
        })
    }
}

/// Draws that are possible one by one may contradict each other.
fn try_all_together(section: &str, spreads: &[Spread], context: &Context<'_>) {
    if context.faults.borrow().has_error_under(section) || spreads.len() < 2 {
        return;
    }
    for (side, words) in [(0, "the smallest draws together"), (1, "the largest draws together")] {
        let changes: Vec<_> =
            spreads.iter().map(|spread| (&spread.varied, spread.ends()[side])).collect();
        if !context.try_values(section, Spot::Value, words, &changes) {
            return;
        }
    }
}
