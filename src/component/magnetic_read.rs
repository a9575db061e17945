//! How magnetic gears and couplings are read.

use super::magnet_losses::Losses;
use super::magnet_temperature::{HALVES, ROTORS, Warmth};
use super::magnetic_gear::{
    Cogging, Drag, Field, GearDamping, Harmonic, MagneticCoupling, MagneticGear, Member,
};
use super::torque_table::TorqueTable;
use crate::quantity::Dimension;
use crate::tree::{Fields, Range};
use std::f64::consts::PI;

/// More pole pairs than any machine has.
const MOST_PAIRS: i64 = 10_000;

/// The highest order of a harmonic or a cogging torque.
const HIGHEST_ORDER: i64 = 1_000_000;

const MEMBERS: [&str; 3] = ["inner", "modulator", "outer"];

fn member(word: &str) -> Member {
    match word {
        "inner" => Member::Inner,
        "modulator" => Member::Modulator,
        _ => Member::Outer,
    }
}

impl MagneticGear {
    /// Reads a magnetic gear.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let inner = fields.name("inner", "Body at the inner rotor, or ground.");
        let modulator = fields.name("modulator", "Body at the modulator, or ground.");
        let outer = fields.name("outer", "Body at the outer rotor, or ground.");
        let pairs = fields.group("pole_pairs", "Pole pairs of the rotors.", |pairs| {
            let inner = pairs.whole("inner", 1, MOST_PAIRS, "Pole pairs of the inner rotor.");
            let outer = pairs.whole("outer", 1, MOST_PAIRS, "Pole pairs of the outer rotor.");
            (pairs.has("inner") && pairs.has("outer")).then_some((inner, outer))
        });
        let pieces = fields.whole_optional(
            "modulator_pieces",
            2,
            2 * MOST_PAIRS,
            "Pieces of the modulator; must be the sum of the pole pairs.",
        );
        if let (Some(pieces), Some(Some((inner, outer)))) = (pieces, pairs)
            && pieces != inner + outer
        {
            fields.fault_hint(
                "modulator_pieces",
                format!("{pieces} modulator pieces do not fit {inner} + {outer} pole pairs"),
                format!("the sum is {}; the key may also be left out", inner + outer),
            );
        }
        let (inner_pairs, outer_pairs) = pairs.flatten().unwrap_or((1, 1));
        let pull_out = fields.group("pull_out", "Pull-out torque.", |pull_out| {
            let at = pull_out.one_of("at", &MEMBERS, true, "Member at which it is stated.");
            let torque = pull_out.quantity(
                "torque",
                Dimension::Torque,
                Range::Positive,
                "Pull-out torque there, at the rated temperature.",
            );
            (member(at), torque)
        });
        let (pull_out_at, pull_out_torque) = pull_out.unwrap_or((Member::Outer, f64::NAN));
        Self {
            name: fields.own_name().to_owned(),
            inner,
            modulator,
            outer,
            inner_pole_pairs: inner_pairs as u32,
            outer_pole_pairs: outer_pairs as u32,
            pull_out_at,
            pull_out_torque,
            damping: fields.group_optional("damping", "Damping of the slip.", read_damping),
            field: Field::read(fields, &["electrical", "inner", "modulator", "outer"], ROTORS),
            cogging: fields.list("cogging", "Cogging torques against the modulator.", read_cogging),
            drag: fields.list("drag", "Drag torques.", read_drag),
            losses: fields.group_optional(
                "losses",
                "Losses at constant flux in pieces, magnets and yokes.",
                Losses::read,
            ),
            source: fields.source(),
        }
    }
}

impl MagneticCoupling {
    /// Reads a magnetic coupling.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let between = fields.pair("between", "The bodies a and b; one may be ground.");
        let pole_pairs = fields.whole("pole_pairs", 1, MOST_PAIRS, "Pole pairs of each half.");
        let pull_out =
            fields.quantity("pull_out", Dimension::Torque, Range::Positive, "Pull-out torque.");
        let damping = fields.quantity_or_group(
            "damping",
            (Dimension::Damping, Range::NotNegative),
            "Damping on the mechanical slip speed, plain or with its peak.",
            |coefficient| (coefficient, None),
            read_damping_with_peak,
        );
        fields.note_default(0.0);
        let (damping, damping_peak_at) = damping.unwrap_or((0.0, None));
        Self {
            name: fields.own_name().to_owned(),
            between,
            pole_pairs: pole_pairs as u32,
            pull_out,
            damping,
            damping_peak_at,
            field: Field::read(fields, &["electrical", "mechanical"], HALVES),
            source: fields.source(),
        }
    }
}

impl Field {
    /// Reads what gears and couplings have in common.
    fn read(fields: &mut Fields<'_>, angles: &[&'static str], members: [&'static str; 2]) -> Self {
        let initial_load_angle = fields.quantity_optional(
            "initial_load_angle",
            Dimension::Angle,
            Range::Any,
            "Load angle at the start, electrical, in (-180, 180] degrees.",
        );
        fields.note_default(0.0);
        if let Some(angle) = initial_load_angle
            // 180 deg may come out a rounding above pi.
            && (angle <= -PI || angle > PI * (1.0 + 1e-14))
        {
            fields.fault_hint(
                "initial_load_angle",
                "`initial_load_angle` must lie above -180 deg and not above 180 deg",
                "the electrical angle counts; a whole electrical turn is the same state",
            );
        }
        let harmonics = fields.list("harmonics", "Harmonics of the torque law.", |harmonic| {
            let order =
                harmonic.whole("order", 2, HIGHEST_ORDER, "Multiple of the electrical angle.");
            let amplitude = harmonic.quantity(
                "amplitude",
                Dimension::One,
                Range::Between(-1.0, 1.0),
                "Amplitude relative to the fundamental.",
            );
            Harmonic { order: order as u32, amplitude, phase: read_phase(harmonic) }
        });
        let torque_table = fields.group_optional(
            "torque_table",
            "Torque over load angle from a file, in place of `harmonics`; its shape counts.",
            |table| TorqueTable::read(table, angles),
        );
        if torque_table.is_some() && fields.has("harmonics") {
            fields
                .fault("torque_table", "either `harmonics` or `torque_table` is stated, not both");
        }
        Self {
            torque_table,
            initial_load_angle: initial_load_angle.map(|angle| angle.min(PI)),
            harmonics,
            warmth: Warmth::read(fields, members),
            slip_time_limit: fields.quantity_optional(
                "slip_time_limit",
                Dimension::Time,
                Range::NotNegative,
                "Longest time at a stretch that it may slip; a run that slips longer is warned.",
            ),
        }
    }
}

fn read_phase(fields: &mut Fields<'_>) -> f64 {
    fields.quantity_or("phase", Dimension::Angle, Range::Any, 0.0, "Phase.")
}

fn read_damping_with_peak(fields: &mut Fields<'_>) -> (f64, Option<f64>) {
    let coefficient = fields.quantity(
        "coefficient",
        Dimension::Damping,
        Range::NotNegative,
        "On the mechanical slip speed seen at that member.",
    );
    let peak_at = fields.quantity_optional(
        "peak_at",
        Dimension::Speed,
        Range::Positive,
        "Slip speed at which the damper's torque is largest; a straight line when absent.",
    );
    (coefficient, peak_at)
}

fn read_damping(fields: &mut Fields<'_>) -> GearDamping {
    let at = fields.one_of("at", &MEMBERS, true, "Member at which it is stated.");
    let (coefficient, peak_at) = read_damping_with_peak(fields);
    GearDamping { at: member(at), coefficient, peak_at }
}

fn read_cogging(fields: &mut Fields<'_>) -> Cogging {
    let at = fields.one_of("at", &["inner", "outer"], true, "The rotor that cogs.");
    let order = fields.whole("order", 1, HIGHEST_ORDER, "Periods per relative turn.");
    let torque = fields.quantity("torque", Dimension::Torque, Range::NotNegative, "Amplitude.");
    Cogging { at: member(at), order: order as u32, torque, phase: read_phase(fields) }
}

fn read_drag(fields: &mut Fields<'_>) -> Drag {
    let at = member(fields.one_of("at", &MEMBERS, true, "The member it brakes."));
    let against =
        fields.one_of("against", &["modulator", "ground"], false, "Whose speed counts as rest.");
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
        "Part in proportion to the relative speed.",
    );
    let against_modulator = against == "modulator";
    if at == Member::Modulator && against_modulator && fields.has("at") {
        fields
            .fault_here_hint("the modulator cannot drag against itself", "write `against: ground`");
    }
    Drag { at, against_modulator, constant, per_speed }
}
