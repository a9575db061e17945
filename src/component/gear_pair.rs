//! Rigid gear pairs: `speed_a = ratio * speed_b`.
//!
//! ```text
//! drag at a member: torque = -(constant*sign(w) + per_speed*w)     against its own motion, to ground
//! ```
//! Drag stands for what a gear loses without load: seals, churning and bearings, in N*m and
//! N*m*s/rad; its constant part sticks and slips like any friction. Losses in proportion to the
//! torque passed on are not in it: their torque hangs on the constraint torque itself and on the
//! direction in which power flows, and so on the accelerations.

use crate::quantity::Dimension;
use crate::tree::{Fields, Range};

/// A gear pair as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct GearPair {
    /// Its name.
    pub name: String,
    /// The bodies a and b.
    pub between: [String; 2],
    /// Speed of a over speed of b, negative when they turn against each other.
    pub ratio: f64,
    /// Drag torques against ground.
    pub drag: Vec<GearDrag>,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// A drag torque of a gear pair.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GearDrag {
    /// The member it brakes: 0 for a, 1 for b.
    pub member: usize,
    /// N*m; sticks and slips.
    pub constant: f64,
    /// N*m*s/rad.
    pub per_speed: f64,
}

impl GearPair {
    /// Reads a gear pair.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        Self {
            name: fields.own_name().to_owned(),
            between: fields.pair("between", "The bodies a and b."),
            ratio: fields.quantity(
                "ratio",
                Dimension::One,
                Range::NotZero,
                "Speed of a over speed of b; negative when they turn against each other.",
            ),
            drag: fields.list("drag", "Drag torques without load, against ground.", read_drag),
            source: fields.source(),
        }
    }
}

fn read_drag(fields: &mut Fields<'_>) -> GearDrag {
    let at = fields.one_of("at", &["a", "b"], true, "The member it brakes.");
    let constant = fields.quantity_or(
        "constant",
        Dimension::Torque,
        Range::NotNegative,
        0.0,
        "Constant part; it sticks and slips.",
    );
    let per_speed = fields.quantity_or(
        "per_speed",
        Dimension::Damping,
        Range::NotNegative,
        0.0,
        "Part in proportion to the speed.",
    );
    GearDrag { member: usize::from(at == "b"), constant, per_speed }
}
