//! Signals that leave their bounds once protections have taken them, or what they follow, over.
//!
//! Where the file itself shows a value out of bounds it is refused when it is read. What a
//! protection sets may reach further, through a named signal or a product. After an action all
//! signals are functions of time alone, so the first time out of bounds is known at once, and
//! the integration never has to look.

use crate::equations::Equations;
use crate::quantity::format_number;
use crate::scenario::signals::{Bounds, ROUNDING, bounded};
use crate::signal::course::{Overrides, SlotId};

/// The bounded places of a scenario.
#[derive(Clone, Debug)]
pub struct Limits {
    places: Vec<(String, SlotId, Bounds)>,
}

/// A time at which the run must end, and why.
#[derive(Clone, Debug, PartialEq)]
pub struct Breach {
    /// s.
    pub time: f64,
    /// The fault in words.
    pub text: String,
}

impl Limits {
    /// The bounded places of the equations' scenario.
    pub fn new(equations: &Equations) -> Self {
        let places = bounded(&equations.model.scenario)
            .into_iter()
            .filter_map(|(path, bounds)| {
                let slot = equations.bank.find(&path)?;
                Some((path, slot, bounds))
            })
            .collect();
        Self { places }
    }

    /// The first breach between two times with what protections have set so far.
    pub fn breach(
        &self,
        equations: &Equations,
        from: f64,
        to: f64,
        overrides: &Overrides,
    ) -> Option<Breach> {
        let mut first: Option<Breach> = None;
        for (path, slot, bounds) in &self.places {
            let [low, high] = bounds.limits();
            let room = [low - ROUNDING, high + ROUNDING];
            let Some((time, value)) =
                equations.bank.first_outside(*slot, [from, to], room, overrides)
            else {
                continue;
            };
            if first.as_ref().is_none_or(|breach| time < breach.time) {
                let text = format!(
                    "`{path}` reaches {} at {} s, after a protection has acted, but {}; look at what \
                     the protections set",
                    format_number(value, 6),
                    format_number(time, 9),
                    bounds.rule()
                );
                first = Some(Breach { time, text });
            }
        }
        first
    }
}
