//! Shafts: elastic with damping and free play, or rigid.

use super::elastic_curve::ElasticCurve;
use super::points::read_pairs;
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
    /// Torsional stiffness (with points: at no twist), N*m/rad; ignored when rigid.
    pub stiffness: f64,
    /// Torque over twist, where the stiffness is given by points.
    pub curve: Option<ElasticCurve>,
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
            "Torsional stiffness, the dimensions of a round solid or hollow shaft, or points.",
            Stiffness::Linear,
            read_stiffness,
        );
        let (stiffness, curve) = match stiffness {
            Some(Stiffness::Linear(stiffness)) => (Some(stiffness), None),
            Some(Stiffness::Curve(curve)) => (Some(curve.stiffness()), Some(curve)),
            None => (None, None),
        };
        let solid = fields.group_optional(
            "solid",
            "The dimensions of a round solid or hollow shaft, instead of stiffness.",
            |fields| read_solid(fields, Beside::Nothing),
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
        let relative = fields.quantity_optional(
            "relative_damping",
            Dimension::One,
            Range::NotNegative,
            "Loss of energy in a cycle over the largest elastic energy, as makers of elastic couplings state it; instead of damping.",
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
            for key in
                ["stiffness", "solid", "damping", "damping_ratio", "relative_damping", "backlash"]
            {
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
        if relative.is_some() && (coefficient.is_some() || ratio.is_some()) {
            let other = if coefficient.is_some() { "damping" } else { "damping_ratio" };
            fields.fault(
                "relative_damping",
                format!("`{other}` and `relative_damping` exclude each other"),
            );
        }
        if curve.is_some() && backlash > 0.0 {
            fields.fault_hint(
                "backlash",
                "a stiffness by points takes no `backlash`",
                "put the play into a shaft of its own, with a small body between them",
            );
        }
        // Energy lost in a cycle at the own frequency w: pi c w a^2 over k a^2/2, with c = 2 D k/w.
        let ratio = ratio.or(relative.map(|share| share / (4.0 * PI)));
        Self {
            name: fields.own_name().to_owned(),
            between,
            stiffness: stiffness.or(solid).unwrap_or(f64::NAN),
            curve,
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

/// How a stiffness is given.
enum Stiffness {
    /// N*m/rad.
    Linear(f64),
    /// By points.
    Curve(ElasticCurve),
}

/// What else could stand beside the dimensions of a solid.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Beside {
    /// Nothing: the dimensions are needed.
    Nothing,
    /// Points stand in their place.
    Points,
    /// Points could, but do not.
    NoPoints,
}

fn read_stiffness(fields: &mut Fields<'_>) -> Stiffness {
    let points = read_pairs(
        fields,
        "points",
        [Dimension::Angle, Dimension::Torque],
        "twists",
        "Rows of twist and torque instead of a solid: from no twist (both sides alike), or from a negative one through it.",
    );
    let beside = if points.is_some() { Beside::Points } else { Beside::NoPoints };
    let stiffness = read_solid(fields, beside);
    match points {
        Some(points) => Stiffness::Curve(read_points(fields, points)),
        None => Stiffness::Linear(stiffness),
    }
}

/// The curve through points that begin at no twist (mirrored) or lie on both sides of it.
fn read_points(fields: &mut Fields<'_>, mut points: Vec<[f64; 2]>) -> ElasticCurve {
    for (index, pair) in points.windows(2).enumerate() {
        if pair[1][1] <= pair[0][1] {
            fields.fault_hint(
                &format!("points.{}.1", index + 1),
                "the torques of a shaft must rise from point to point",
                "free play is given by `backlash` of another shaft",
            );
            return ElasticCurve::new(&[]);
        }
    }
    let Some(middle) = points.iter().position(|point| point[0] == 0.0) else {
        if !points.is_empty() {
            fields.fault_hint(
                "points",
                "one of the points must lie at no twist",
                "for example points: [[0 deg, 0 N*m], [2 deg, 100 N*m], [4 deg, 400 N*m]]",
            );
        }
        return ElasticCurve::new(&[]);
    };
    if points[middle][1] != 0.0 {
        fields.fault(&format!("points.{middle}.1"), "the torque at no twist must be zero");
        return ElasticCurve::new(&[]);
    }
    if middle == 0 {
        let mirrored = points.iter().skip(1).rev().map(|[twist, torque]| [-twist, -torque]);
        points = mirrored.chain(points.iter().copied()).collect();
    } else if middle + 1 == points.len() {
        fields.fault("points", "points on the negative side alone leave the other side open");
        return ElasticCurve::new(&[]);
    }
    ElasticCurve::new(&points)
}

/// Stiffness of a round shaft in torsion, `G pi (D^4 - d^4) / (32 L)` (handbook of mechanics of materials).
fn read_solid(fields: &mut Fields<'_>, beside: Beside) -> f64 {
    let number = |fields: &mut Fields<'_>, key, dimension, doc| {
        if beside == Beside::Nothing {
            return fields.quantity(key, dimension, Range::Positive, doc);
        }
        let number = fields.quantity_optional(key, dimension, Range::Positive, doc);
        if beside == Beside::Points && fields.has(key) {
            fields.fault(key, format!("`{key}` and `points` exclude each other"));
        } else if beside == Beside::NoPoints && !fields.has(key) {
            fields.miss(key, "or give `points` of twist and torque");
        }
        number.unwrap_or(f64::NAN)
    };
    let length = |fields: &mut Fields<'_>, key, doc| number(fields, key, Dimension::Length, doc);
    let diameter = length(fields, "diameter", "Outer diameter.");
    let bore = fields.quantity_or(
        "bore",
        Dimension::Length,
        Range::NotNegative,
        0.0,
        "Diameter of the hole along the axis.",
    );
    let long = length(fields, "length", "Length that twists.");
    let shear_modulus = number(
        fields,
        "shear_modulus",
        Dimension::Pressure,
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
        let stiffness =
            Fields::read("s", &node, &faults, |fields| read_solid(fields, Beside::Nothing));
        assert!(faults.borrow().is_empty());
        assert!((stiffness / 127_234.5 - 1.0).abs() < 1e-6, "{stiffness}");
    }
}
