//! Magnets that warm up by the losses of their gear or coupling: one thermal node, or two.
//!
//! ```text
//! C_k dT_k/dt = share_k * losses - (T_k - ambient)/R_k - (T_k - T_l)/R_between
//! ```
//! Lumped capacities and resistances (the usual thermal network; closed form). `losses` are all
//! of the gear's own: slip damping, drag and losses in iron and magnets. `share` is the part of
//! them that becomes heat in that node; the rest goes elsewhere, into pieces and housing. Where
//! the remanence follows the temperature the pull-out torque falls as the magnets warm up.
//!
//! Validity: changes slower than the magnets need to even out inside, and a constant ambient.

use super::magnet_temperature::WARM;
use crate::quantity::Dimension;
use crate::tree::{Fields, Range};

/// One node.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Node {
    /// Heat capacity, J/K.
    pub capacity: f64,
    /// Thermal resistance to the ambient, K/W.
    pub resistance: f64,
    /// Share of the losses that becomes heat in it.
    pub share: f64,
    /// Temperature at the start, degC; the ambient's when absent.
    pub initial: Option<f64>,
}

/// The thermal nodes of a gear or coupling.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Thermal {
    /// Temperature around, degC.
    pub ambient: f64,
    /// The node, or that of the first member's magnets.
    pub first: Node,
    /// The node of the second member's magnets, when they are two.
    pub second: Option<Node>,
    /// Thermal resistance between the two, K/W.
    pub between: Option<f64>,
}

impl Thermal {
    /// The nodes in order.
    pub fn nodes(&self) -> impl Iterator<Item = &Node> {
        std::iter::once(&self.first).chain(&self.second)
    }

    /// Temperature of each member's magnets at the start, degC.
    pub fn initial(&self) -> [f64; 2] {
        let second = self.second.unwrap_or(self.first);
        [self.first, second].map(|node| node.initial.unwrap_or(self.ambient))
    }

    /// Reads the nodes; `members` names the two members that carry magnets.
    pub fn read(fields: &mut Fields<'_>, members: [&'static str; 2]) -> Option<Self> {
        let ambient = fields.quantity(
            "ambient",
            Dimension::Temperature,
            WARM,
            "Temperature around, the same all along.",
        );
        let one = Read::keys(fields);
        let [first, second] = members.map(|member| {
            let doc = "The magnets of that member as a node of their own; both or none.";
            fields.group_optional(member, doc, |node| {
                let keys = Read::keys(node);
                keys.node(node, 0.5)
            })
        });
        let between = fields.quantity_optional(
            "between",
            Dimension::ThermalResistance,
            Range::Positive,
            "Thermal resistance between the two nodes; no heat passes when absent.",
        );
        let split = members.iter().filter(|member| fields.has(member)).count();
        let own = ["capacity", "resistance", "share", "initial_temperature"];
        let single = own.iter().any(|key| fields.has(key));
        if fields.is_no_map() || fields.describing() {
            return None;
        }
        if split == 1 || split == 2 && single || split == 0 && between.is_some() {
            fields.fault_here_hint(
                format!(
                    "`thermal` is either one node or one for `{}` and one for `{}`",
                    members[0], members[1]
                ),
                "one: { capacity, resistance, ambient }; two: { ambient, MEMBER: { capacity, resistance, share }, ... , between }",
            );
            return None;
        }
        if split == 0 {
            let node = one.node(fields, 1.0)?;
            return Some(Self { ambient, first: node, second: None, between: None });
        }
        let (first, second) = (first??, second??);
        if first.share + second.share > 1.0 + 1e-12 {
            fields.fault_here_hint(
                "the shares of the losses add up to more than 1",
                "what does not become heat in the magnets goes elsewhere; it cannot be more than all",
            );
        }
        Some(Self { ambient, first, second: Some(second), between })
    }
}

/// The keys of a node as they were typed.
struct Read {
    capacity: Option<f64>,
    resistance: Option<f64>,
    share: Option<f64>,
    initial: Option<f64>,
}

impl Read {
    fn keys(fields: &mut Fields<'_>) -> Self {
        Self {
            capacity: fields.quantity_optional(
                "capacity",
                Dimension::HeatCapacity,
                Range::Positive,
                "Heat capacity of the magnets and what is as warm as they are.",
            ),
            resistance: fields.quantity_optional(
                "resistance",
                Dimension::ThermalResistance,
                Range::Positive,
                "Thermal resistance to the ambient.",
            ),
            share: fields.quantity_optional(
                "share",
                Dimension::One,
                Range::Between(0.0, 1.0),
                "Share of the losses that becomes heat here; 1 for one node, 0.5 each for two.",
            ),
            initial: fields.quantity_optional(
                "initial_temperature",
                Dimension::Temperature,
                WARM,
                "Temperature at the start; the ambient's when absent.",
            ),
        }
    }

    /// The node; missing keys are told at `fields`.
    fn node(self, fields: &mut Fields<'_>, share: f64) -> Option<Node> {
        for (key, value) in [("capacity", self.capacity), ("resistance", self.resistance)] {
            if value.is_none() {
                fields.miss(key, "a node has a heat capacity and a resistance to the ambient");
            }
        }
        Some(Node {
            capacity: self.capacity?,
            resistance: self.resistance?,
            share: self.share.unwrap_or(share),
            initial: self.initial,
        })
    }
}
