//! The magnetic law against closed forms of the sine and of a sine with a third harmonic.

use super::*;

fn with(order: u32, amplitude: f64, phase: f64) -> MagnetLaw {
    MagnetLaw::new(75.0, &[Harmonic { order, amplitude, phase }]).unwrap()
}

// Closed form: the pendulum. At half load the stable angle is 30 degrees, the unstable 150.
#[test]
fn a_plain_field_is_a_pendulum() {
    let law = MagnetLaw::new(75.0, &[]).unwrap();
    assert!((law.value(0.3) - 75.0 * 0.3_f64.sin()).abs() < 1e-13);
    assert!((law.stable_angle_for(0.5).unwrap() - PI / 6.0).abs() < 1e-15);
    assert!((law.unstable_angle_for(0.5).unwrap() - 5.0 * PI / 6.0).abs() < 1e-15);
    assert!((law.unstable_angle_for(-0.5).unwrap() + 5.0 * PI / 6.0).abs() < 1e-15);
    assert_eq!(law.stable_angle_for(1.01), None);
    assert_eq!(law.unstable_angle_for(-1.01), None);
    assert!((law.energy(PI) - 150.0).abs() < 1e-12);
    assert!(law.energy(0.0).abs() < 1e-300);
}

// Closed form: sin x + a sin 3x has its peak at 90 degrees with the value 1 - a (a <= 1/9),
// the slope 1 + 3a at zero, and the integral (1 - cos x) + a(1 - cos 3x)/3.
#[test]
fn a_third_harmonic_in_phase_has_its_closed_form() {
    let a = 0.04;
    let law = with(3, a, 0.0);
    let peaks = law.peaks();
    assert!((peaks[1] - FRAC_PI_2).abs() < 1e-14 && (peaks[0] + FRAC_PI_2).abs() < 1e-14);
    assert!((law.value(FRAC_PI_2) - 75.0).abs() < 1e-12, "the peak is the pull-out torque");
    assert!((law.slope(0.0) - 75.0 * (1.0 + 3.0 * a) / (1.0 - a)).abs() < 1e-11);
    assert!((law.steepest() - (1.0 + 3.0 * a) / (1.0 - a)).abs() < 1e-13);
    let expected = 75.0 / (1.0 - a) * ((1.0 - 0.7_f64.cos()) + a * (1.0 - 2.1_f64.cos()) / 3.0);
    assert!((law.energy(0.7) - expected).abs() < 1e-12);
    assert!(!law.split_peaks());
}

// Closed form: the energy's derivative is the torque; Simpson's rule is the other computation.
#[test]
fn the_energy_is_the_integral_of_the_torque_for_any_harmonics() {
    let harmonics = [
        Harmonic { order: 2, amplitude: 0.05, phase: 0.7 },
        Harmonic { order: 3, amplitude: -0.03, phase: 0.2 },
        Harmonic { order: 5, amplitude: 0.01, phase: 2.0 },
    ];
    let law = MagnetLaw::new(75.0, &harmonics).unwrap();
    let (from, to, count) = (law.stable_point(), 2.5, 2000);
    let h = (to - from) / f64::from(count);
    let simpson: f64 = (0..count)
        .map(|i| {
            let x = from + h * f64::from(i);
            h / 6.0 * (law.value(x) + 4.0 * law.value(x + 0.5 * h) + law.value(x + h))
        })
        .sum();
    assert!((law.energy(to) - simpson).abs() < 1e-10);
    assert!(law.value(law.stable_point()).abs() < 1e-12);
    assert!(law.slope(law.stable_point()) > 0.0);
}

#[test]
fn the_lower_peak_is_one_the_slope_vanishes_there_and_the_inverse_returns() {
    for (order, amplitude, phase) in
        [(2, 0.08, 0.5), (3, 0.05, 1.0), (4, -0.03, 2.0), (7, 0.01, 0.3)]
    {
        let law = with(order, amplitude, phase);
        let [low, high] = law.peak_values();
        assert!((low.abs().min(high) - 1.0).abs() < 1e-14);
        assert!(law.peaks().iter().all(|x| law.slope(*x).abs() < 1e-11));
        for share in [-0.99, -0.3, 0.0, 0.4, 0.95] {
            let stable = law.stable_angle_for(share).unwrap();
            let unstable = law.unstable_angle_for(share).unwrap();
            assert!((law.share(stable) - share).abs() < 1e-13);
            assert!((law.share(unstable) - share).abs() < 1e-13);
            assert!(law.slope(stable) > 0.0 && law.slope(unstable) < 0.0);
            assert!((stable - law.stable_point()).abs() < PI);
            assert_eq!(unstable > stable, share >= 0.0, "the load pulls towards it");
        }
    }
}

// Closed form: sin x + a sin 3x with a > 1/9 has a dip at 90 degrees; its maxima lie where
// sin^2 x = (1 + 3a)/(12 a).
#[test]
fn a_split_peak_counts_at_its_nearer_half() {
    let a = 0.2_f64;
    let law = with(3, a, 0.0);
    let peak = ((1.0 + 3.0 * a) / (12.0 * a)).sqrt().asin();
    assert!(law.split_peaks());
    assert!((law.peaks()[1] - peak).abs() < 1e-13);
}

#[test]
fn a_field_with_several_stable_points_is_refused() {
    let strong = [Harmonic { order: 3, amplitude: 2.0, phase: 0.0 }];
    let message = MagnetLaw::new(75.0, &strong).unwrap_err();
    assert!(message.contains("3 stable points"), "{message}");
}
