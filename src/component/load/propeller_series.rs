//! Torque coefficient of the Wageningen B series of propellers.
//!
//! ```text
//! KQ = sum C J^s (P/D)^t (AE/A0)^u Z^v          Reynolds number 2e6
//! ```
//!
//! Oosterveld and van Oossanen, Further computer-analyzed data of the Wageningen B-screw series,
//! International Shipbuilding Progress 22 (1975) 251-262. The 47 rows are from memory and agree
//! with a published copy; other copies in circulation differ in a few rows, so check a design
//! against the maker's diagram. Range: 2 to 7 blades, pitch ratio 0.5 to 1.4, area ratio 0.3 to
//! 1.05.

use super::propeller::TorqueCoefficient;

/// The series ends here at the latest.
const LAST_RATIO: f64 = 1.6;

/// Coefficient and the powers s, t, u, v.
const ROWS: [(f64, [i32; 4]); 47] = [
    (0.00379368, [0, 0, 0, 0]),
    (0.00886523, [2, 0, 0, 0]),
    (-0.032241, [1, 1, 0, 0]),
    (0.00344778, [0, 2, 0, 0]),
    (-0.0408811, [0, 1, 1, 0]),
    (-0.108009, [1, 1, 1, 0]),
    (-0.0885381, [2, 1, 1, 0]),
    (0.188561, [0, 2, 1, 0]),
    (-0.00370871, [1, 0, 0, 1]),
    (0.00513696, [0, 1, 0, 1]),
    (0.0209449, [1, 1, 0, 1]),
    (0.00474319, [2, 1, 0, 1]),
    (-0.00723408, [2, 0, 1, 1]),
    (0.00438388, [1, 1, 1, 1]),
    (-0.0269403, [0, 2, 1, 1]),
    (0.0558082, [3, 0, 1, 0]),
    (0.0161886, [0, 3, 1, 0]),
    (0.00318086, [1, 3, 1, 0]),
    (0.015896, [0, 0, 2, 0]),
    (0.0471729, [1, 0, 2, 0]),
    (0.0196283, [3, 0, 2, 0]),
    (-0.0502782, [0, 1, 2, 0]),
    (-0.030055, [3, 1, 2, 0]),
    (0.0417122, [2, 2, 2, 0]),
    (-0.0397722, [0, 3, 2, 0]),
    (-0.00350024, [0, 6, 2, 0]),
    (-0.0106854, [3, 0, 0, 1]),
    (0.00110903, [3, 3, 0, 1]),
    (-0.000313912, [0, 6, 0, 1]),
    (0.0035985, [3, 0, 1, 1]),
    (-0.00142121, [0, 6, 1, 1]),
    (-0.00383637, [1, 0, 2, 1]),
    (0.0126803, [0, 2, 2, 1]),
    (-0.00318278, [2, 3, 2, 1]),
    (0.00334268, [0, 6, 2, 1]),
    (-0.00183491, [1, 1, 0, 2]),
    (0.000112451, [3, 2, 0, 2]),
    (-2.97228e-5, [3, 6, 0, 2]),
    (0.000269551, [1, 0, 1, 2]),
    (0.00083265, [2, 0, 1, 2]),
    (0.00155334, [0, 2, 1, 2]),
    (0.000302683, [0, 6, 1, 2]),
    (-0.0001843, [0, 0, 2, 2]),
    (-0.000425399, [0, 3, 2, 2]),
    (8.69243e-5, [3, 3, 2, 2]),
    (-0.0004659, [0, 6, 2, 2]),
    (5.54194e-5, [1, 6, 2, 2]),
];

/// The torque coefficient of a propeller of the series, with open water ahead from J = 0 to where
/// it vanishes.
pub fn torque_coefficient(blades: u32, pitch_ratio: f64, area_ratio: f64) -> TorqueCoefficient {
    let mut cubic = [0.0; 4];
    for (coefficient, [s, t, u, v]) in ROWS {
        let share =
            coefficient * pitch_ratio.powi(t) * area_ratio.powi(u) * f64::from(blades).powi(v);
        if let Some(slot) = usize::try_from(s).ok().and_then(|power| cubic.get_mut(power)) {
            *slot += share;
        }
    }
    TorqueCoefficient::cubic(cubic, LAST_RATIO)
}

#[cfg(test)]
mod tests {
    use super::*;

    // The published polynomial evaluated apart from this program (from its table of coefficients).
    #[test]
    fn the_series_has_its_published_values() {
        let b4_70 = torque_coefficient(4, 1.0, 0.7);
        for (ratio, expected) in [
            (0.0, 0.06753840264),
            (0.4, 0.049210131252),
            (0.7, 0.0307678303014),
            (1.0, 0.009692083648),
        ] {
            assert!((b4_70.at(ratio) - expected).abs() < 1e-12, "{ratio}: {}", b4_70.at(ratio));
        }
        let b4_55 = torque_coefficient(4, 0.8, 0.55);
        assert!((b4_55.at(0.5) - 0.0237352536701).abs() < 1e-12);
        let [first, last] = b4_70.range().unwrap();
        assert!(first.abs() < 1e-300 && (1.0..1.3).contains(&last), "{last}");
        assert!(b4_70.at(last + 0.1).abs() < 1e-10, "no torque beyond");
    }
}
