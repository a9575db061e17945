//! The interference diagram: where excitations meet natural frequencies, and how far they keep apart.
//!
//! ```text
//! separation = |f_mode - f_excitation| / f_excitation      at the operating speed nearest to the crossing
//! ```
//! Excitations inside the operating range meet their mode there: separation 0. Modes whose
//! amplification `1/(2 zeta)` is below 2.5 count as critically damped and need no separation
//! (API practice, from memory).

use super::Mode;
use super::excitation::{self, Excitation};
use super::spec::{ModesSpec, SpeedRange};
use crate::analysis::linear_point::LinearPoint;
use crate::equations::{Equations, dot};
use crate::quantity::format_number;

/// Amplification below which a mode needs no separation.
const CRITICALLY_DAMPED: f64 = 2.5;

/// Fixed excitations further from every mode than this share are left out.
const FAR: f64 = 0.5;

/// The diagram.
#[derive(Clone, Debug, PartialEq)]
pub struct Interference {
    /// Body whose speed runs across.
    pub of: String,
    /// From and to, rad/s.
    pub speeds: [f64; 2],
    /// Speeds in long running, rad/s; `None` when the train stands at the point.
    pub operating: Option<[f64; 2]>,
    /// Excitations.
    pub excitations: Vec<Excitation>,
    /// Where they meet modes, or come near.
    pub crossings: Vec<Crossing>,
    /// What a reader must know.
    pub notes: Vec<String>,
}

/// An excitation against a mode.
#[derive(Clone, Debug, PartialEq)]
pub struct Crossing {
    /// The excitation.
    pub order: String,
    /// The mode by its place in the list of modes.
    pub mode: usize,
    /// The mode in words.
    pub label: String,
    /// Speed at which they meet, rad/s; `None` for an excitation that follows no speed.
    pub speed: Option<f64>,
    /// The same with all magnets unloaded: between the two they meet in truth, as the load has it.
    pub unloaded_speed: Option<f64>,
    /// Frequency of the mode, Hz.
    pub frequency_hz: f64,
    /// Distance at the operating speed as a share of the excitation's frequency; `None` at a standstill.
    pub separation: Option<f64>,
    /// Amplification `1/(2 zeta)`; `None` without damping.
    pub amplification: Option<f64>,
    /// Whether the crossing lies in the range across the diagram.
    pub in_range: bool,
}

impl Crossing {
    /// Whether this crossing needs separation at all.
    pub fn counts(&self) -> bool {
        self.amplification.is_none_or(|factor| factor >= CRITICALLY_DAMPED)
    }
}

impl Interference {
    /// The crossing that counts and comes nearest at the operating speeds, if there is one.
    pub fn nearest(&self) -> Option<&Crossing> {
        let counted = self.crossings.iter().filter(|crossing| crossing.counts());
        counted.filter(|crossing| crossing.separation.is_some()).min_by(|a, b| {
            let share = |crossing: &Crossing| crossing.separation.unwrap_or(f64::INFINITY);
            share(a).total_cmp(&share(b))
        })
    }

    /// That crossing in words.
    pub fn nearest_words(&self) -> Option<String> {
        let nearest = self.nearest()?;
        Some(format!(
            "nearest at the operating speed: {} stands {} % from {} at {} Hz",
            nearest.order,
            format_number(100.0 * nearest.separation?, 3),
            nearest.label,
            format_number(nearest.frequency_hz, 4)
        ))
    }

    /// Whether every crossing that counts keeps the separation; `None` when it cannot be told.
    pub fn verdict(&self, limit: f64) -> Option<bool> {
        self.operating?;
        let mut counted = self.crossings.iter().filter(|crossing| crossing.counts());
        Some(counted.all(|crossing| crossing.separation.is_none_or(|share| share >= limit)))
    }
}

/// Draws up the diagram of a train at a point.
///
/// # Errors
/// In words, when speeds do not follow the body across.
pub fn draw(
    equations: &Equations,
    point: &LinearPoint,
    spec: &ModesSpec,
    range: &SpeedRange,
    modes: &[Mode],
) -> Result<Interference, String> {
    let of = equations
        .model
        .body(&range.of)
        .ok_or_else(|| format!("no body is named `{}`", range.of))?;
    let (excitations, mut notes) = excitation::list(equations, point, spec, of)?;
    let own = dot(&equations.speed_row(&[(of, 1.0)]), &point.state);
    let size = range.speeds[0].abs().max(range.speeds[1].abs());
    let operating = range.operating.or_else(|| (own.abs() > 1e-6 * size).then_some([own, own]));
    if operating.is_none() {
        notes.push(format!(
            "`{}` stands still at the point: no separation can be told; `operating` gives the speeds of long running",
            range.of
        ));
    }
    let limit = spec.separation.unwrap_or(0.0);
    let mut crossings = Vec::new();
    for excitation in &excitations {
        for (place, mode) in modes.iter().enumerate() {
            let crossing = meet(excitation, place, mode, range, operating);
            let near = crossing.separation.is_some_and(|share| share < limit.max(1e-9));
            let fixed_near = crossing.speed.is_none()
                && crossing.separation.is_some_and(|share| share <= FAR.max(limit));
            if crossing.in_range || near || fixed_near {
                crossings.push(crossing);
            }
        }
    }
    crossings.sort_by(|a, b| {
        let key = |crossing: &Crossing| crossing.speed.map_or(f64::INFINITY, f64::abs);
        key(a).total_cmp(&key(b)).then(a.frequency_hz.total_cmp(&b.frequency_hz))
    });
    Ok(Interference {
        of: range.of.clone(),
        speeds: range.speeds,
        operating,
        excitations,
        crossings,
        notes,
    })
}

fn meet(
    excitation: &Excitation,
    place: usize,
    mode: &Mode,
    range: &SpeedRange,
    operating: Option<[f64; 2]>,
) -> Crossing {
    let [from, to] = range.speeds;
    // Frequencies do not ask for the sense of rotation: a range of negative speeds is met there.
    let meets = |frequency: f64| {
        (excitation.per_speed > 0.0)
            .then(|| (frequency - excitation.fixed) / excitation.per_speed)
            .filter(|speed| *speed >= 0.0)
            .map(|speed| if from.abs() > to.abs() { -speed } else { speed })
    };
    let speed = meets(mode.frequency_hz);
    Crossing {
        order: excitation.label.clone(),
        mode: place,
        label: mode.label.clone(),
        speed,
        unloaded_speed: mode.unloaded_hz.and_then(meets),
        frequency_hz: mode.frequency_hz,
        separation: separation(excitation, mode.frequency_hz, operating),
        amplification: (mode.damping_ratio > 0.0).then(|| 0.5 / mode.damping_ratio),
        in_range: speed.is_some_and(|speed| (from..=to).contains(&speed)),
    }
}

/// Distance of a mode from an excitation over the operating speeds, as a share of the latter.
fn separation(excitation: &Excitation, mode: f64, operating: Option<[f64; 2]>) -> Option<f64> {
    if excitation.per_speed == 0.0 {
        return (excitation.fixed > 0.0)
            .then(|| (mode - excitation.fixed).abs() / excitation.fixed);
    }
    let [low, high] = operating?;
    let (mut slow, mut fast) = (excitation.at(low), excitation.at(high));
    if low < 0.0 && high > 0.0 {
        (slow, fast) = (excitation.fixed, slow.max(fast));
    }
    let (lowest, highest) = (slow.min(fast), slow.max(fast));
    let nearest = mode.clamp(lowest, highest);
    (nearest > 0.0).then(|| (mode - nearest).abs() / nearest)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn separation_is_a_share_of_the_excitation() {
        // Worked margin of torsional practice: a mode at 22.3 Hz against 25.0 Hz stands 10.8 % apart.
        let excitation =
            Excitation { label: String::new(), per_speed: 0.5 / std::f64::consts::PI, fixed: 0.0 };
        let speed = 50.0 * std::f64::consts::PI;
        let found = separation(&excitation, 22.3, Some([speed, speed])).unwrap();
        assert!((found - 0.108).abs() < 1e-12);
        let inside = separation(&excitation, 22.3, Some([0.5 * speed, speed])).unwrap();
        assert!(inside.abs() < 1e-15);
    }
}
