//! The rating-plate law against the plate's own figures and Kloss's formula.

use super::*;

fn plate() -> Plate {
    Plate {
        power: 22e3,
        speed: 1465.0 * std::f64::consts::PI / 30.0,
        synchronous_speed: 50.0 * std::f64::consts::PI,
        starting: 2.2,
        pull_up: 1.8,
        breakdown: 2.9,
    }
}

fn at(law: &RatingPlate, speed: f64) -> f64 {
    law.value(speed, law.boundaries().partition_point(|bound| *bound <= speed))
}

// The plate states these torques itself; rated torque = power/speed.
#[test]
fn the_curve_passes_through_every_figure_of_the_plate() {
    let plate = plate();
    let law = RatingPlate::new(&plate);
    let rated = 22e3 / plate.speed;
    let speed_at = |slip: f64| plate.synchronous_speed * (1.0 - slip);
    assert!((at(&law, plate.speed) / rated - 1.0).abs() < 1e-12);
    assert!((at(&law, 0.0) / rated - 2.2).abs() < 1e-12);
    assert!((at(&law, -20.0) / rated - 2.2).abs() < 1e-12, "plugging: the starting torque holds");
    assert!((at(&law, speed_at(0.8)) / rated - 1.8).abs() < 1e-12);
    let breakdown_slip = (35.0 / 1500.0) * (2.9 + (2.9_f64 * 2.9 - 1.0).sqrt());
    assert!((at(&law, speed_at(breakdown_slip)) / rated - 2.9).abs() < 1e-12);
    assert!(at(&law, plate.synchronous_speed).abs() < 1e-9);
}

// The pieces are monotone, so breakdown and pull-up are the extremes between rest and synchronism.
#[test]
fn nothing_exceeds_breakdown_and_nothing_falls_below_pull_up_on_the_way() {
    let plate = plate();
    let law = RatingPlate::new(&plate);
    let rated = plate.rated_torque();
    for step in 0..=1000 {
        let share = at(&law, plate.synchronous_speed * f64::from(step) / 1000.0) / rated;
        assert!(share <= 2.9 + 1e-12, "{share}");
        if f64::from(step) < 860.0 {
            assert!(share >= 1.8 - 1e-12, "{share} at {step}");
        }
    }
}

#[test]
fn slopes_vanish_at_breakdown_and_pull_up_and_follow_the_secant_at_rest() {
    let plate = plate();
    let law = RatingPlate::new(&plate);
    let bounds = law.boundaries().to_vec();
    let scale = plate.rated_torque() / plate.synchronous_speed;
    for (boundary, below, above) in [(1, 1, 2), (2, 2, 3), (3, 3, 4), (4, 4, 5)] {
        assert!(law.slope(bounds[boundary], below).abs() < 1e-9 * scale);
        assert!(law.slope(bounds[boundary], above).abs() < 1e-9 * scale);
    }
    let secant = (1.8 - 2.2) * plate.rated_torque() / (0.2 * plate.synchronous_speed);
    assert!((law.slope(0.0, 1) / secant - 1.0).abs() < 1e-9);
}

#[test]
fn generating_mirrors_motoring_about_synchronous_speed() {
    let plate = plate();
    let law = RatingPlate::new(&plate);
    for step in 0..400 {
        let away = 1.0 * f64::from(step);
        let (below, above) =
            (at(&law, plate.synchronous_speed - away), at(&law, plate.synchronous_speed + away));
        assert!((below + above).abs() < 1e-9 * plate.rated_torque(), "{away}: {below} {above}");
    }
}

#[test]
fn a_plate_that_turns_backward_is_the_mirror_of_one_that_turns_forward() {
    let forward = plate();
    let backward =
        Plate { speed: -forward.speed, synchronous_speed: -forward.synchronous_speed, ..forward };
    let (forward, backward) = (RatingPlate::new(&forward), RatingPlate::new(&backward));
    for step in -400..400 {
        let speed = f64::from(step) + 0.5;
        assert!((at(&forward, speed) + at(&backward, -speed)).abs() < 1e-9);
    }
}

#[test]
fn a_late_breakdown_moves_the_pull_up_point_halfway_to_standstill() {
    // m = 3 and sN = 12 % give sb = 0.12 (3 + sqrt 8) = 0.6994112549695.
    let plate = Plate { speed: 88.0, synchronous_speed: 100.0, breakdown: 3.0, ..plate() };
    let law = RatingPlate::new(&plate);
    let breakdown_slip = 0.12 * (3.0 + 8.0_f64.sqrt());
    let pull_up_speed = 100.0 * (1.0 - 0.5 * (1.0 + breakdown_slip));
    assert!((at(&law, pull_up_speed) / plate.rated_torque() - 1.8).abs() < 1e-9);
    assert!((law.boundaries()[1] - pull_up_speed).abs() < 1e-9);
}
