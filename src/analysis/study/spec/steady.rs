//! `steady: { vary: { PATH: ... } }` as typed.

use super::axis::Axis;
use super::context::Context;
use crate::tree::{Fields, Node};

/// The operating point, over a range of one number if asked.
#[derive(Clone, Debug, PartialEq)]
pub struct Steady {
    /// The number with its values; `None`: the file as it is.
    pub axis: Option<Axis>,
}

impl Steady {
    /// Reads the inside of `steady:`; `None` when it is at fault.
    pub fn read(fields: &mut Fields<'_>, context: Option<&Context<'_>>) -> Option<Self> {
        let section = fields.path_of("vary");
        let axes = fields.paths(
            "vary",
            "One number of the file by its dotted path, with the values it takes.",
            |axis| Axis::read(axis, &section, context),
        );
        let _ = fields.source();
        context?;
        let typed = match fields.entries().iter().find(|(key, _)| key == "vary") {
            Some((_, Node::Map(entries))) => entries.len(),
            Some((_, Node::Null)) | None => 0,
            Some(_) => return None,
        };
        if typed > 1 {
            fields.fault("vary", format!("one number can be varied, not {typed}"));
            return None;
        }
        let axis = axes.into_iter().flatten().next();
        (typed == 0 || axis.is_some()).then_some(Self { axis })
    }
}
