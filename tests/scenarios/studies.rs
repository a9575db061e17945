//! The studies that stand in the shipped scenarios.

use crate::runner::{Found, same, study};

/// Recorded answers are held to this, relative.
const RECORDED: f64 = 0.005;

#[track_caller]
fn answer(stem: &str, name: &str, status: i32) -> Found {
    let found = study(stem, name);
    assert_eq!(found.status, Some(status), "{stem} {name}");
    found
}

#[test]
fn pump_gear_may_be_an_eighth_weaker() {
    let found = answer("pump_start", "smallest_gear", 0);
    same(found.number("studies/smallest_gear/value"), 1320.3, RECORDED);
    assert_eq!(found.value("studies/smallest_gear/first_to_fail"), "gear_share");
}

#[test]
fn hot_magnets_alone_are_too_much_for_the_pump() {
    let found = answer("pump_start", "cases", 1);
    for (case, met) in
        [("hot_magnets", false), ("low_voltage", true), ("undamped", true), ("stiff_gland", true)]
    {
        assert_eq!(found.value(&format!("studies/cases/cases/{case}/met")), met, "{case}");
    }
}

#[test]
fn no_pump_of_the_tolerances_slips() {
    let found = answer("pump_start", "tolerances", 0);
    assert_eq!(found.value("studies/tolerances/slipped"), 0);
    assert_eq!(found.value("studies/tolerances/draws"), 500);
}

#[test]
fn trip_of_the_pump_may_be_delayed_by_a_quarter_of_a_second() {
    let found = answer("pump_start_trip", "latest_trip", 0);
    same(found.number("studies/latest_trip/value"), 0.28094, RECORDED);
    assert_eq!(found.value("studies/latest_trip/first_to_fail"), "few_slips");
}

#[test]
fn pump_is_estimated_and_linearised() {
    let found = answer("pump_start", "by_hand", 0);
    // Closed form: 1/J = 4^2/0.27 + 22^2/2.65 about K = 1500/22.
    let inverse: f64 = 16.0 / 0.27 + 484.0 / 2.65;
    let frequency = (1500.0 / 22.0 * inverse).sqrt() / std::f64::consts::TAU;
    let key = "studies/by_hand/gears/gear/natural_frequency_hz";
    same(found.number(key), frequency, 1e-9);
    let found = answer("pump_start", "torsional", 0);
    same(found.number("studies/torsional/modes/0/frequency_hz"), 14.151, RECORDED);
}

#[test]
fn conveyor_brake_must_not_close_faster_than_an_eighth_of_a_second() {
    let found = answer("conveyor_stop", "fastest_brake", 0);
    same(found.number("studies/fastest_brake/value"), 1.1254, 1e-3);
    assert!(!found.value("studies/fastest_brake/flips").as_array().unwrap().is_empty());
    let found = answer("conveyor_stop", "brake_and_load", 0);
    assert_eq!(found.value("studies/brake_and_load/rows"), 21);
    assert_eq!(found.value("studies/brake_and_load/met"), 18);
}

#[test]
fn hoist_brake_is_too_strong() {
    let found = answer("hoist_stop", "strongest_motor_brake", 0);
    same(found.number("studies/strongest_motor_brake/value"), 194.24, RECORDED);
    assert!(found.number("studies/strongest_motor_brake/margin_share") < 0.0);
    assert_eq!(found.value("studies/strongest_motor_brake/first_to_fail"), "no_slip");
}

#[test]
fn all_gusts_are_borne() {
    let found = answer("wind_gust", "gusts", 0);
    for case in ["light_wind", "hot_magnets", "no_torque_limit", "undamped"] {
        assert_eq!(found.value(&format!("studies/gusts/cases/{case}/met")), true, "{case}");
    }
}

#[test]
fn soft_starter_may_go_up_to_three_quarters_of_the_voltage() {
    let found = answer("fan_soft_start", "highest_voltage", 0);
    same(found.number("studies/highest_voltage/value"), 0.744, RECORDED);
}

#[test]
fn waves_tire_the_tidal_shaft() {
    let found = answer("tidal_waves", "fatigue", 0);
    same(found.number("studies/fatigue/damage_equivalent"), 158_651.0, RECORDED);
}

#[test]
fn mill_points_follow_the_pole_pairs() {
    let found = answer("three_ports", "operating_points", 0);
    for point in 0..7 {
        let speed = |body: &str| {
            found.number(&format!("studies/operating_points/points/{point}/bodies/{body}/speed"))
        };
        // Closed form: 26*modulator = 4*inner + 22*outer.
        let mill = (4.0 * speed("inner_rotor") + 22.0 * speed("outer_ring")) / 26.0;
        same(speed("mill"), mill, 1e-12);
    }
}
