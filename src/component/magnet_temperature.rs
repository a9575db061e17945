//! Temperature of the magnets: what it leaves of the pull-out torque, and what they stand.
//!
//! ```text
//! pull-out / rated pull-out = [1 + a_1 (T_1 - T_rated)] * [1 + a_2 (T_2 - T_rated)]
//! ```
//! `a` is the temperature coefficient of the remanence of the magnets on one member, `T` their
//! temperature. The torque is the product of the two fields, and each field follows the remanence
//! of its magnets while the iron is not saturated; with one material at one temperature it goes
//! with the remanence squared. Linear magnetics, closed form; coefficients from the makers' tables.
//!
//! Validity: reversible changes only. Above the rated limit of the magnets part of the remanence
//! may be lost for good, which no figure here says.

use super::magnet_thermal::Thermal;
use crate::quantity::{Dimension, format_number};
use crate::tree::{Fields, Node, Range};

/// Nothing is colder than this, and no magnet is hotter, degC.
pub(super) const WARM: Range = Range::Between(-273.15, 2000.0);

/// The three keys that go together.
const KEYS: [&str; 3] = ["magnet_temperature", "rated_temperature", "remanence_coefficient"];

/// The members that carry the magnets of a gear.
pub const ROTORS: [&str; 2] = ["inner", "outer"];

/// The members that carry the magnets of a coupling.
pub const HALVES: [&str; 2] = ["a", "b"];

/// Magnets of the two members: temperatures and what follows from them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MagnetTemperature {
    /// Temperature of the magnets of each member, degC.
    pub at: [f64; 2],
    /// Temperature for which the pull-out torque is stated, degC.
    pub rated: f64,
    /// Relative change of each member's remanence per kelvin.
    pub coefficient: [f64; 2],
}

impl MagnetTemperature {
    /// Remanence of one member's magnets over that at the rated temperature.
    pub fn remanence(&self, member: usize, temperature: f64) -> f64 {
        1.0 + self.coefficient.get(member).copied().unwrap_or(0.0) * (temperature - self.rated)
    }

    /// Pull-out torque over that at the rated temperature.
    pub fn factor(&self) -> f64 {
        self.remanence(0, self.at[0]) * self.remanence(1, self.at[1])
    }
}

/// What a file says of the magnets' temperature.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Warmth {
    /// Temperatures, when they are stated.
    pub temperature: Option<MagnetTemperature>,
    /// Highest temperature that the magnets of each member stand, degC.
    pub maximum: [Option<f64>; 2],
    /// Thermal nodes that the magnets warm up by, when they do.
    pub thermal: Option<Thermal>,
}

impl Warmth {
    /// Factor on the pull-out torque, 1 when no temperature is stated.
    pub fn factor(&self) -> f64 {
        self.temperature.map_or(1.0, |temperature| temperature.factor())
    }

    /// True when the temperature stays as it is.
    pub fn is_steady(&self) -> bool {
        self.thermal.is_none()
    }

    /// Reads the keys; `members` names the two that carry magnets.
    pub fn read(fields: &mut Fields<'_>, members: [&'static str; 2]) -> Self {
        let doc = "Temperature of the magnets in this case, one for all or one a member.";
        let temperature = pair(fields, KEYS[0], (Dimension::Temperature, WARM), members, doc);
        let rated = fields.quantity_optional(
            KEYS[1],
            Dimension::Temperature,
            WARM,
            "Temperature for which the pull-out torque is stated.",
        );
        let doc = "Relative change of the remanence per kelvin, for example -0.11 %/K, one for all or one a member.";
        let coefficient = pair(fields, KEYS[2], (Dimension::PerKelvin, Range::Any), members, doc);
        let doc = "Highest temperature that the magnets stand; a run above it is warned.";
        let limit =
            pair(fields, "maximum_temperature", (Dimension::Temperature, WARM), members, doc);
        let doc =
            "Thermal nodes: the magnets warm up by the losses, instead of a given temperature.";
        let thermal = fields
            .group_optional("thermal", doc, |inside| Thermal::read(inside, members))
            .flatten();
        let warms = fields.has("thermal");
        let temperature = match thermal {
            Some(nodes) => Some(nodes.initial()),
            None => temperature,
        };
        if warms && fields.has(KEYS[0]) {
            fields.fault_hint(
                KEYS[0],
                "with `thermal` the temperature of the magnets is worked out, not given",
                "`initial_temperature` of a node says where it starts",
            );
        }
        let given = KEYS.iter().filter(|key| fields.has(key)).count();
        if warms && fields.has(KEYS[1]) != fields.has(KEYS[2]) {
            fields.fault_here_hint(
                "`rated_temperature` and `remanence_coefficient` go together",
                "without both the pull-out torque does not follow the temperature",
            );
        }
        if !warms && given != 0 && given != KEYS.len() {
            let missing: Vec<_> =
                KEYS.iter().filter(|key| !fields.has(key)).map(|key| format!("`{key}`")).collect();
            fields.fault_here_hint(
                format!("{} missing for the magnets' temperature", told(&missing)),
                "magnet_temperature, rated_temperature and remanence_coefficient go together",
            );
        }
        let mut warmth = Self { temperature: None, maximum: [None; 2], thermal };
        if let Some(limit) = limit {
            warmth.maximum = limit.map(Some);
        }
        if let (Some(at), Some(rated), Some(coefficient)) = (temperature, rated, coefficient) {
            let magnets = MagnetTemperature { at, rated, coefficient };
            warmth.temperature = Some(magnets);
            let key = if warms { "thermal" } else { KEYS[0] };
            for place in demagnetised(&magnets) {
                fields.fault_hint(
                    &key_of(fields, key, members[place]),
                    format!("at {} degC nothing is left of the remanence", at[place]),
                    "the coefficient is a small negative share per kelvin, for example -0.11 %/K",
                );
            }
            // Those with thermal nodes are watched during the run.
            if !warms {
                warmth.warn_of_limits(fields, members, &magnets);
            }
        } else if limit.is_some() && !warms {
            fields.warn(
                "maximum_temperature",
                "`maximum_temperature` is compared with nothing: neither `magnet_temperature` nor `thermal` is stated",
            );
        }
        warmth
    }

    fn warn_of_limits(
        &self,
        fields: &Fields<'_>,
        members: [&'static str; 2],
        magnets: &MagnetTemperature,
    ) {
        let split = magnets.at[0] != magnets.at[1] || self.maximum[0] != self.maximum[1];
        for place in 0..if split { 2 } else { 1 } {
            let (at, Some(limit)) = (magnets.at[place], self.maximum[place]) else { continue };
            if at > limit {
                let whose = if split {
                    format!("the magnets of `{}`", members[place])
                } else {
                    "the magnets".to_owned()
                };
                fields.warn(
                    &key_of(fields, KEYS[0], members[place]),
                    format!(
                        "{whose} stand at {} degC, {} K above their maximum_temperature: part of the remanence \
                         may be lost for good, and the pull-out torque with it",
                        format_number(at, 6),
                        format_number(at - limit, 6),
                    ),
                );
            }
        }
    }
}

/// Members of which nothing of the remanence is left; one where both are stated as one.
fn demagnetised(magnets: &MagnetTemperature) -> Vec<usize> {
    let lost: Vec<usize> =
        (0..2).filter(|place| magnets.remanence(*place, magnets.at[*place]) <= 0.0).collect();
    let alike = magnets.at[0] == magnets.at[1] && magnets.coefficient[0] == magnets.coefficient[1];
    if alike { lost.into_iter().take(1).collect() } else { lost }
}

/// A value for both members, or a map with one for each.
pub(super) fn pair(
    fields: &mut Fields<'_>,
    key: &'static str,
    (dimension, range): (Dimension, Range),
    members: [&'static str; 2],
    doc: &'static str,
) -> Option<[f64; 2]> {
    fields.quantity_or_group(
        key,
        (dimension, range),
        doc,
        |value| [value; 2],
        |inside| members.map(|member| inside.quantity(member, dimension, range, "Of that member.")),
    )
}

/// The key, with the member behind it where the file states something for each.
fn key_of(fields: &Fields<'_>, key: &str, member: &str) -> String {
    let found = fields.entries().iter().find(|(name, _)| name == key).map(|(_, node)| node);
    match found {
        Some(Node::Map(entries)) if entries.iter().any(|(name, _)| name == member) => {
            format!("{key}.{member}")
        }
        _ => key.to_owned(),
    }
}

fn told(missing: &[String]) -> String {
    match missing {
        [only] => format!("{only} is"),
        list => format!("{} are", list.join(" and ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// N42 by the maker's table: -0.12 %/K; the square of 0.928 by hand.
    #[test]
    fn one_material_goes_with_the_remanence_squared() {
        let magnets = MagnetTemperature { at: [80.0; 2], rated: 20.0, coefficient: [-0.0012; 2] };
        assert!((magnets.factor() - 0.861184).abs() < 1e-15);
    }

    #[test]
    fn two_materials_at_two_temperatures_multiply() {
        let magnets =
            MagnetTemperature { at: [100.0, 40.0], rated: 20.0, coefficient: [-0.0012, -0.00035] };
        assert!((magnets.factor() - 0.904 * 0.993).abs() < 1e-15);
    }
}
