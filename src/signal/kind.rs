//! What a signal measures: asked for by its place, or told by its own units.

use crate::diagnostic::Diagnostics;
use crate::quantity::{self, Dimension};
use crate::tree::Node;
use std::cell::RefCell;

/// What a signal must measure, or has turned out to measure.
pub(super) struct Kind {
    /// The dimension of the place; `None` where the signal's own units tell it.
    pub(super) wanted: Option<Dimension>,
    /// The dimension of the units met so far.
    pub(super) found: Option<Dimension>,
}

impl Kind {
    /// Reads one value of the signal; NaN stands in for a faulty one.
    pub(super) fn value(&mut self, path: &str, node: &Node, faults: &RefCell<Diagnostics>) -> f64 {
        let faults = &mut faults.borrow_mut();
        if let Some(dimension) = self.wanted {
            let value = quantity::read(path, node, dimension, faults);
            if let Node::Text(text) = node
                && value.is_finite()
                && quantity::parse_any(text).is_ok_and(|found| found.1.is_some())
            {
                self.found = Some(dimension);
            }
            return value;
        }
        let (value, dimension) = quantity::read_any(path, node, faults);
        self.meet(path, dimension, faults);
        value
    }

    /// Notes the dimension of a unit; one that differs from the place's or an earlier one is a fault.
    pub(super) fn meet(
        &mut self,
        path: &str,
        dimension: Option<Dimension>,
        faults: &mut Diagnostics,
    ) {
        let Some(dimension) = dimension else { return };
        if let Some(wanted) = self.wanted.filter(|wanted| *wanted != dimension) {
            faults.error(
                path,
                format!(
                    "this is {}, but {} is needed here",
                    dimension.with_article(),
                    wanted.with_article()
                ),
            );
            return;
        }
        match self.found {
            Some(earlier) if earlier != dimension => faults.error(
                path,
                format!(
                    "this is {}, but the signal's values before it are {}",
                    dimension.with_article(),
                    earlier.with_article()
                ),
            ),
            _ => self.found = Some(dimension),
        }
    }
}
