//! Extreme operating gust and extreme coherent gust of IEC 61400-1 (edition 3 and later).
//!
//! ```text
//! Vref     = 50, 42.5, 37.5 m/s for turbine class I, II, III; Ve1 = 0.8*1.4*Vref at hub height
//! sigma    = Iref (0.75 Vhub + 5.6 m/s), Iref = 0.18, 0.16, 0.14, 0.12 for A+, A, B, C
//! Lambda   = 0.7 z for z <= 60 m, else 42 m                  turbulence scale at hub height z
//! Vgust    = min(1.35 (Ve1 - Vhub), 3.3 sigma/(1 + 0.1 D/Lambda))
//! V(t)     = Vhub - 0.37 Vgust sin(3 pi t/T)(1 - cos(2 pi t/T)), 0 <= t <= T = 10.5 s
//!
//! coherent: V(t) = Vhub + 0.5 Vcg (1 - cos(pi t/T)), 0 <= t <= T = 10 s, Vhub + Vcg after it, Vcg = 15 m/s
//! ```
//!
//! The formulas of the standard are from memory and agree with the published class values;
//! the second edition (1999) used other factors.

use std::f64::consts::PI;

/// Duration of the gust, s.
pub const DURATION: f64 = 10.5;

/// Reference wind speed of a turbine class, m/s.
pub fn reference_speed(turbine_class: &str) -> f64 {
    match turbine_class {
        "I" => 50.0,
        "II" => 42.5,
        _ => 37.5,
    }
}

/// Reference turbulence intensity of a turbulence class.
pub fn reference_intensity(turbulence_class: &str) -> f64 {
    match turbulence_class {
        "A+" => 0.18,
        "A" => 0.16,
        "B" => 0.14,
        _ => 0.12,
    }
}

/// The 1-year extreme wind at hub height, m/s.
pub fn extreme_one_year(turbine_class: &str) -> f64 {
    0.8 * 1.4 * reference_speed(turbine_class)
}

/// Standard deviation of the wind by the normal turbulence model, m/s.
pub fn standard_deviation(turbulence_class: &str, hub_wind: f64) -> f64 {
    reference_intensity(turbulence_class) * (0.75 * hub_wind + 5.6)
}

/// The turbulence scale parameter at a height in m.
pub fn turbulence_scale(height: f64) -> f64 {
    if height <= 60.0 { 0.7 * height } else { 42.0 }
}

/// The gust magnitude, m/s; not above zero when the wind is no longer below the 1-year extreme.
pub fn magnitude(
    hub_wind: f64,
    rotor_diameter: f64,
    hub_height: f64,
    turbine_class: &str,
    turbulence_class: &str,
) -> f64 {
    let by_extreme = 1.35 * (extreme_one_year(turbine_class) - hub_wind);
    let by_turbulence = 3.3 * standard_deviation(turbulence_class, hub_wind)
        / (1.0 + 0.1 * rotor_diameter / turbulence_scale(hub_height));
    by_extreme.min(by_turbulence)
}

/// Rise of the extreme coherent gust, m/s.
pub const COHERENT_RISE: f64 = 15.0;

/// Time in which the extreme coherent gust rises, s.
pub const COHERENT_TIME: f64 = 10.0;

/// Share of a coherent gust's rise at a share of its time, and the derivative of one by the other.
#[inline]
pub fn coherent(share: f64) -> (f64, f64) {
    let turn = PI * share;
    (0.5 * (1.0 - turn.cos()), 0.5 * PI * turn.sin())
}

/// The change of the wind at `time` after the gust's start, per metre a second of magnitude.
#[inline]
pub fn shape(time: f64) -> f64 {
    let turn = PI * time / DURATION;
    -0.37 * (3.0 * turn).sin() * (1.0 - (2.0 * turn).cos())
}

/// Derivative of [`shape`] with respect to time, 1/s.
#[inline]
pub fn shape_slope(time: f64) -> f64 {
    let turn = PI * time / DURATION;
    let inner = 3.0 * (3.0 * turn).cos() * (1.0 - (2.0 * turn).cos())
        + 2.0 * (3.0 * turn).sin() * (2.0 * turn).sin();
    -0.37 * PI / DURATION * inner
}

#[cfg(test)]
mod tests {
    use super::*;

    // IEC 61400-1, table 1: Ve1 at hub height 56, 47.6, 42 m/s; sigma at 10, 12, 14, 25 m/s.
    #[test]
    fn classes_have_the_values_of_the_standard() {
        for (class, expected) in [("I", 56.0), ("II", 47.6), ("III", 42.0)] {
            assert!((extreme_one_year(class) - expected).abs() < 1e-12);
        }
        for (class, expected) in [
            ("A", [2.096, 2.336, 2.576, 3.896]),
            ("B", [1.834, 2.044, 2.254, 3.409]),
            ("C", [1.572, 1.752, 1.932, 2.922]),
        ] {
            for (wind, sigma) in [10.0, 12.0, 14.0, 25.0].into_iter().zip(expected) {
                assert!((standard_deviation(class, wind) - sigma).abs() < 1e-12);
            }
        }
    }

    // The gust magnitude by the standard's formula, worked by hand; the last is the other branch.
    #[test]
    fn magnitudes_are_those_of_the_formula() {
        for (turbine, turbulence, wind, expected) in [
            ("I", "A", 12.0, 6.475392),
            ("II", "A", 10.0, 5.810112),
            ("II", "A", 14.0, 7.140672),
            ("II", "A", 25.0, 10.799712),
            ("II", "B", 12.0, 5.665968),
            ("III", "C", 12.0, 4.856544),
        ] {
            let found = magnitude(wind, 80.0, 80.0, turbine, turbulence);
            assert!((found - expected).abs() < 1e-9, "{turbine} {turbulence} {wind}: {found}");
        }
        assert!((magnitude(40.0, 30.0, 40.0, "III", "A") - 2.7).abs() < 1e-12);
    }

    // Closed form: the peak is 0.74 Vgust at mid-gust, the dips -0.268059829143 Vgust at
    // T acos(sqrt 0.55)/pi = 2.45760752775 s, the mean 0.37*8/(15 pi) Vgust.
    #[test]
    fn the_course_has_its_closed_form_peaks_and_mean() {
        assert!((shape(5.25) - 0.74).abs() < 1e-15);
        assert!((shape(2.45760752775) + 0.268059829143).abs() < 1e-12);
        assert!(shape_slope(2.45760752775).abs() < 1e-11);
        for (time, wind) in [
            (2.0, 10.5175477305),
            (3.0, 10.7291407124),
            (4.0, 13.8015765669),
            (6.0, 15.5608685948),
            (8.0, 10.2667972069),
        ] {
            assert!((12.0 + 6.475392 * shape(time) - wind).abs() < 1e-9, "{time}");
        }
        let mean: f64 = (0..1000).map(|i| shape(10.5 * (f64::from(i) + 0.5) / 1000.0)).sum::<f64>();
        assert!((mean / 1000.0 - 0.37 * 8.0 / (15.0 * PI)).abs() < 1e-6);
        let h = 1e-5;
        for step in 0..100 {
            let t = 0.105 * f64::from(step);
            assert!((shape_slope(t) - (shape(t + h) - shape(t - h)) / (2.0 * h)).abs() < 1e-9);
        }
    }
}
