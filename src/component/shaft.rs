//! Shafts: elastic with damping and free play, or rigid.

use crate::quantity::Dimension;
use crate::tree::{Fields, Range};
use std::f64::consts::PI;

/// A shaft as typed; `stiffness` and `damping` are worked out from dimensions and ratio where those are given.
#[derive(Clone, Debug, PartialEq)]
pub struct Shaft {
    /// Its name.
    pub name: String,
    /// The bodies a and b (or `ground`).
    pub between: [String; 2],
    /// Torsional stiffness, N*m/rad; ignored when rigid.
    pub stiffness: f64,
    /// Damping.
    pub damping: ShaftDamping,
    /// Total free play, rad; 0 for none.
    pub backlash: f64,
    /// The two bodies turn as one.
    pub rigid: bool,
    /// Torque for utilisation in long running, N*m.
    pub rated_torque: Option<f64>,
    /// Torque for utilisation at peaks, N*m.
    pub peak_torque: Option<f64>,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// How a shaft's damping is given.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ShaftDamping {
    /// N*m*s/rad.
    Coefficient(f64),
    /// Share of critical damping of the shaft's own two-body mode.
    Ratio(f64),
}

impl Shaft {
    /// Reads a shaft.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let between = fields.pair("between", "The bodies a and b, or ground.");
        let rigid = fields.flag(
            "rigid",
            false,
            "The two bodies turn as one; instead of stiffness, damping and backlash.",
        );
        let stiffness = fields.quantity_or_group(
            "stiffness",
            (Dimension::Stiffness, Range::Positive),
            "Torsional stiffness, or the dimensions of a round solid or hollow shaft.",
            |stiffness| stiffness,
            read_solid,
        );
        let solid = fields.group_optional(
            "solid",
            "The dimensions of a round solid or hollow shaft, instead of stiffness.",
            read_solid,
        );
        let coefficient = fields.quantity_optional(
            "damping",
            Dimension::Damping,
            Range::NotNegative,
            "Damping on the twist rate; 0 when neither it nor damping_ratio is given.",
        );
        fields.note_default(0.0);
        let ratio = fields.quantity_optional(
            "damping_ratio",
            Dimension::One,
            Range::NotNegative,
            "Share of critical damping of the shaft's own two-body mode, instead of damping.",
        );
        let backlash = fields.quantity_or(
            "backlash",
            Dimension::Angle,
            Range::NotNegative,
            0.0,
            "Total free play; the twist starts in the middle of it.",
        );
        let torque = |fields: &mut Fields<'_>, key, doc| {
            fields.quantity_optional(key, Dimension::Torque, Range::Positive, doc)
        };
        let rated_torque =
            torque(fields, "rated_torque", "Torque for utilisation in long running.");
        let peak_torque = torque(fields, "peak_torque", "Torque for utilisation at peaks.");
        if rigid {
            for key in ["stiffness", "solid", "damping", "damping_ratio", "backlash"] {
                if fields.has(key) {
                    fields.fault(key, format!("a rigid shaft takes no `{key}`"));
                }
            }
        } else if fields.has("stiffness") && fields.has("solid") {
            fields.fault("solid", "`stiffness` and `solid` exclude each other");
        } else if !fields.has("stiffness") && !fields.has("solid") {
            fields.miss(
                "stiffness",
                "give stiffness, or `solid` with its dimensions, or `rigid: true` for two bodies that turn as one",
            );
        }
        if coefficient.is_some() && ratio.is_some() {
            fields.fault("damping_ratio", "`damping` and `damping_ratio` exclude each other");
        }
        Self {
            name: fields.own_name().to_owned(),
            between,
            stiffness: stiffness.or(solid).unwrap_or(f64::NAN),
            damping: match (ratio, coefficient) {
                (Some(ratio), _) => ShaftDamping::Ratio(ratio),
                (None, coefficient) => ShaftDamping::Coefficient(coefficient.unwrap_or(0.0)),
            },
            backlash,
            rigid,
            rated_torque,
            peak_torque,
            source: fields.source(),
        }
    }
}

/// Stiffness of a round shaft in torsion, `G pi (D^4 - d^4) / (32 L)` (handbook of mechanics of materials).
fn read_solid(fields: &mut Fields<'_>) -> f64 {
    let length = |fields: &mut Fields<'_>, key, doc| {
        fields.quantity(key, Dimension::Length, Range::Positive, doc)
    };
    let diameter = length(fields, "diameter", "Outer diameter.");
    let bore = fields.quantity_or(
        "bore",
        Dimension::Length,
        Range::NotNegative,
        0.0,
        "Diameter of the hole along the axis.",
    );
    let long = length(fields, "length", "Length that twists.");
    let shear_modulus = fields.quantity(
        "shear_modulus",
        Dimension::Pressure,
        Range::Positive,
        "Shear modulus of the material; steel about 80 GPa.",
    );
    if bore >= diameter {
        fields.fault("bore", "`bore` must be smaller than `diameter`");
    }
    shear_modulus * PI * (diameter.powi(4) - bore.powi(4)) / (32.0 * long)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::diagnostic::Diagnostics;
    use crate::tree::Node;
    use std::cell::RefCell;

    /// Round bar in torsion: `k = G J / L` with `J = pi D^4 / 32`. For 60 mm, 0.8 m and 80 `GPa`
    /// `J = 1.272345e-6 m4`, worked by hand, so `k = 127.2345 kN*m/rad`.
    #[test]
    fn a_round_bar_has_the_stiffness_of_the_handbook() {
        let text = |value: &str| Node::Text(value.to_owned());
        let node = Node::Map(vec![
            ("diameter".into(), text("60 mm")),
            ("length".into(), text("0.8 m")),
            ("shear_modulus".into(), text("80 GPa")),
        ]);
        let faults = RefCell::new(Diagnostics::new());
        let stiffness = Fields::read("s", &node, &faults, read_solid);
        assert!(faults.borrow().is_empty());
        assert!((stiffness / 127_234.5 - 1.0).abs() < 1e-6, "{stiffness}");
    }
}
