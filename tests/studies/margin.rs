//! `margin` against the equal-area limit.

use super::helper::{Folder, LIMIT, Table, ask, train};

#[test]
fn a_step_of_torque_goes_up_to_the_equal_area_limit() {
    let (status, answer) = ask(&train(
        60.0,
        100.0,
        "  room: { margin: { vary: motors.drive.law.prescribed.torque, between: [50 N*m, 100 N*m], accuracy: 1e-6, at_least: 20 % } }\n",
    ));
    assert_eq!(status, Some(0), "{answer}");
    let value = answer["value"].as_f64().unwrap();
    // The tolerance of the integration stands behind the seventh digit.
    assert!((value / (100.0 * LIMIT) - 1.0).abs() < 1e-5, "{value}");
    assert_eq!(answer["reached"], true);
    assert_eq!(answer["first_to_fail"], "no_slip");
    assert_eq!(answer["unit"], "N*m");
    assert_eq!(answer["design"], 60.0);
    assert_eq!(answer["flips"].as_array().unwrap().len(), 0);
    let share = answer["margin_share"].as_f64().unwrap();
    assert!((share - (value - 60.0) / 60.0).abs() < 1e-12, "{share}");
    assert_eq!(answer["met"], true);
    let width = answer["first_bad"].as_f64().unwrap() - value;
    assert!(width > 0.0 && width <= 50e-6, "{width}");
    assert_eq!(answer["last_good_run"]["requirements"]["no_slip"]["value"], 0.0);
}

#[test]
fn the_usual_accuracy_is_a_two_thousandth_of_the_range() {
    let (_, answer) = ask(&train(
        60.0,
        100.0,
        "  room: { margin: { vary: motors.drive.law.prescribed.torque, between: [50 N*m, 100 N*m] } }\n",
    ));
    let value = answer["value"].as_f64().unwrap();
    let bad = answer["first_bad"].as_f64().unwrap();
    assert!((bad - value) <= 50.0 * 5e-4 * (1.0 + 1e-9), "{value} {bad}");
    assert!(value <= 100.0 * LIMIT && bad >= 100.0 * LIMIT * (1.0 - 1e-5), "{value} {bad}");
    assert!((value / (100.0 * LIMIT) - 1.0).abs() < 1e-3, "{value}");
    assert_eq!(answer["tenth_of_tolerance"]["held"], true);
}

#[test]
fn a_falling_scan_finds_the_smallest_pull_out() {
    let (status, answer) = ask(&train(
        60.0,
        100.0,
        "  room: { margin: { vary: magnetic_couplings.coupling.pull_out, between: [150 N*m, 70 N*m], accuracy: 0.01 N*m, at_least: 30 % } }\n",
    ));
    let value = answer["value"].as_f64().unwrap();
    assert!((value - 60.0 / LIMIT).abs() < 0.011, "{value}");
    let share = answer["margin_share"].as_f64().unwrap();
    assert!((share - (100.0 - value) / 100.0).abs() < 1e-12, "{share}");
    assert_eq!((status, &answer["met"]), (Some(1), &false.into()));
}

#[test]
fn a_preload_raises_the_limit_as_equal_areas_say() {
    // From steady 0.5 to T: T (pi - asin T - asin 0.5) = cos(asin 0.5) + sqrt(1 - T^2), whose
    // root is 0.86964716755.
    let scenario = train(
        50.0,
        100.0,
        "  room: { margin: { vary: signals.load.step.to, between: [60 N*m, 100 N*m], accuracy: 1e-6 } }\n",
    )
    .replace("torque: 50 N*m", "torque: load")
    .replace("studies:", "start: steady\nsignals:\n  load: { step: { at: 50 ms, from: 50 N*m, to: 70 N*m } }\nstudies:");
    let (_, answer) = ask(&scenario);
    let value = answer["value"].as_f64().unwrap();
    assert!((value / 86.964_716_755 - 1.0).abs() < 1e-5, "{value}");
}

#[test]
fn a_range_without_a_failure_is_a_lower_bound() {
    let study = |asked: &str| {
        ask(&train(
            50.0,
            100.0,
            &format!(
                "  room: {{ margin: {{ vary: motors.drive.law.prescribed.torque, between: [50 N*m, 70 N*m], points: 5, at_least: {asked} }} }}\n"
            ),
        ))
    };
    let (status, answer) = study("30 %");
    assert_eq!((status, &answer["met"]), (Some(0), &true.into()));
    assert_eq!(answer["reached"], false);
    assert_eq!(answer["value"], 70.0);
    assert_eq!(answer["runs"], 5);
    // More than the range can show is not met, but not refuted either.
    let (status, answer) = study("60 %");
    assert_eq!(status, Some(1));
    assert!(answer["met"].is_null());
}

#[test]
fn a_range_that_begins_beyond_the_limit_has_no_value() {
    let (status, answer) = ask(&train(
        60.0,
        100.0,
        "  room: { margin: { vary: motors.drive.law.prescribed.torque, between: [80 N*m, 100 N*m], points: 3, at_least: 0 } }\n",
    ));
    assert_eq!(status, Some(1));
    assert!(answer["value"].is_null() && answer["margin_share"].is_null(), "{answer}");
    assert_eq!(answer["met"], false);
    assert_eq!(answer["design_met"], true);
    assert_eq!(answer["first_to_fail"], "no_slip");
}

#[test]
fn a_design_that_fails_has_a_negative_margin() {
    let (_, answer) = ask(&train(
        80.0,
        100.0,
        "  room: { margin: { vary: motors.drive.law.prescribed.torque, between: [50 N*m, 100 N*m] } }\n",
    ));
    assert_eq!(answer["design_met"], false);
    let share = answer["margin_share"].as_f64().unwrap();
    assert!((share - (100.0 * LIMIT - 80.0) / 80.0).abs() < 1e-3, "{share}");
}

#[test]
fn islands_are_seen_and_told() {
    // The rotor's speed at 0.8 s swings with the torque, so that a limit on it is met again.
    let scenario = train(
        20.0,
        100.0,
        "  room: { margin: { vary: bodies.rotor.inertia, between: [0.01 kg*m2, 0.2 kg*m2], points: 60 } }\n",
    )
    .replace("no_slip: { of: coupling.slips, at_most: 0 }", "slow: { of: rotor.speed, at_most: 4 rad/s, after: 0.799 s }");
    let (_, answer) = ask(&scenario);
    let flips = answer["flips"].as_array().unwrap();
    assert!(flips.len() > 2, "{answer}");
    // Small swings of half-amplitude a = T/(p K) about T: w = sqrt(p K/J) up to the swing's
    // size; the last good value lies before every flip.
    let value = answer["value"].as_f64();
    for flip in flips {
        assert!(value.is_none_or(|value| flip.as_f64().unwrap() > value));
    }
}

#[test]
fn whole_numbers_are_varied_in_whole_steps() {
    // The limit of the torque does not depend on pole pairs; the natural frequency does. A run
    // must reach a speed that 3 pairs reach and 4 do not. Energy: at the largest
    // speed J w^2/2 = (T phi - K (1 - cos phi))/p with sin phi = T/K.
    let speed = |pairs: f64| {
        let phi = 0.6_f64.asin();
        (2.0 * (60.0 * phi - 100.0 * (1.0 - phi.cos())) / (pairs * 0.05)).sqrt()
    };
    let limit = 0.5 * (speed(3.0) + speed(4.0));
    let scenario = train(
        60.0,
        100.0,
        "  room: { margin: { vary: magnetic_couplings.coupling.pole_pairs, between: [1, 9], points: 3 } }\n",
    )
    .replace(
        "no_slip: { of: coupling.slips, at_most: 0 }",
        &format!("fast: {{ of: rotor.speed, reaches: {limit} rad/s }}"),
    );
    let folder = Folder::new(&scenario);
    let (_, answers, stderr) = folder.study(&["room"]);
    let answer = &answers["studies"]["room"];
    assert_eq!((&answer["value"], &answer["first_bad"]), (&3.0.into(), &4.0.into()), "{stderr}");
    let table = Table::read(&folder.study_file("out", "room.csv"));
    let pairs = table.numbers("magnetic_couplings.coupling.pole_pairs [1]");
    assert!(pairs.iter().all(|pairs| pairs.fract() == 0.0), "{pairs:?}");
    assert_eq!(answer["runs"].as_u64(), Some(table.rows.len() as u64));
}

#[test]
fn a_fixed_step_is_shortened_for_the_second_look() {
    // A step of a fifth of the swing's time is coarse: the limit found with it is off by far more
    // than the bracket, and a tenth of the step comes back to the equal-area limit.
    let scenario = train(
        60.0,
        100.0,
        "  room: { margin: { vary: motors.drive.law.prescribed.torque, between: [50 N*m, 100 N*m], accuracy: 1e-5 } }\n",
    )
    .replace("duration: 0.8 s", "duration: 0.8 s\nsolver: { method: rk4, step: 10 ms }");
    let (_, answer) = ask(&scenario);
    let off = |value: &serde_json::Value| (value.as_f64().unwrap() / (100.0 * LIMIT) - 1.0).abs();
    let second = &answer["tenth_of_tolerance"];
    assert_eq!(second["held"], false, "{answer}");
    assert!(off(&answer["value"]) > 1e-4, "{answer}");
    assert!(off(&second["value"]) < 1e-5, "{answer}");
}
