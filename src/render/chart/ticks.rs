//! Ticks at 1, 2 or 5 times a power of ten, and axis ranges that end at them.

/// Ticks of one axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Ticks {
    /// Distance of two ticks.
    pub step: f64,
    /// Where they stand, rising.
    pub values: Vec<f64>,
}

/// The smallest step of the series 1, 2, 5, 10 that is not below `rough`.
pub fn nice_step(rough: f64) -> f64 {
    if !(rough.is_finite() && rough > 0.0) {
        return 1.0;
    }
    let power = 10_f64.powf(rough.log10().floor());
    // The tolerance keeps 0.2 from becoming 0.5 by rounding.
    for factor in [1.0, 2.0, 5.0] {
        if factor * power >= rough * (1.0 - 1e-9) {
            return factor * power;
        }
    }
    10.0 * power
}

/// Ticks within `low..=high`, at most about `most` of them.
pub fn within(low: f64, high: f64, most: usize) -> Ticks {
    let span = high - low;
    if !(span.is_finite() && span > 0.0) {
        return Ticks { step: 1.0, values: vec![low] };
    }
    at_step(low, high, nice_step(span / most.max(1) as f64))
}

/// Multiples of `step` within `low..=high`.
pub fn at_step(low: f64, high: f64, step: f64) -> Ticks {
    let first = (low / step - 1e-6).ceil();
    let last = (high / step + 1e-6).floor();
    let count = (last - first).clamp(-1.0, 200.0) as i64;
    let values = (0..=count).map(|place| (first + place as f64) * step + 0.0).collect();
    Ticks { step, values }
}

/// A range widened outwards to ticks, with at most `most` intervals, and its ticks.
///
/// A flat or empty range becomes one round its value, so that a constant is seen as a line in
/// mid-panel.
pub fn outward(low: f64, high: f64, most: usize) -> (f64, f64, Ticks) {
    let (mut low, mut high) =
        if low.is_finite() && high.is_finite() && low <= high { (low, high) } else { (0.0, 1.0) };
    let size = low.abs().max(high.abs());
    if high - low <= 1e-9 * size || size == 0.0 {
        let half = if size > 0.0 { 0.1 * size } else { 1.0 };
        low -= half;
        high += half;
    }
    let mut step = nice_step((high - low) / most.max(1) as f64);
    for _ in 0..4 {
        let bottom = (low / step + 1e-6).floor() * step;
        let top = (high / step - 1e-6).ceil() * step;
        if ((top - bottom) / step).round() as usize <= most.max(1) {
            return (bottom, top, at_step(bottom, top, step));
        }
        step = nice_step(step * 1.5);
    }
    (low, high, at_step(low, high, step))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn steps_are_one_two_five() {
        for (rough, step) in
            [(0.9, 1.0), (1.1, 2.0), (2.1, 5.0), (5.1, 10.0), (0.2, 0.2), (370.0, 500.0)]
        {
            assert!((nice_step(rough) - step).abs() < 1e-12 * step, "{rough}");
        }
    }

    #[test]
    fn a_range_ends_at_ticks_outside_the_data() {
        let (low, high, ticks) = outward(-370.0, 1290.0, 5);
        assert!((low + 500.0).abs() < 1e-9 && (high - 1500.0).abs() < 1e-9);
        assert_eq!(ticks.values.len(), 5);
        let (low, high, _) = outward(0.0, 500.0, 5);
        assert!(low.abs() < 1e-9 && (high - 500.0).abs() < 1e-9, "no tick is added at a bound");
    }

    #[test]
    fn a_constant_gets_room_on_both_sides() {
        let (low, high, ticks) = outward(50.0, 50.0, 4);
        assert!(low < 50.0 && high > 50.0 && ticks.values.len() >= 3);
        let (low, high, _) = outward(f64::NAN, 1.0, 4);
        assert!(low < high);
    }

    #[test]
    fn zero_is_never_negative() {
        assert!(within(-1.0, 1.0, 4).values.iter().all(|value| value.to_string() != "-0"));
    }
}
