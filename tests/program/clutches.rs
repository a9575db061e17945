//! Overrunning clutches and torque limiters.
//!
//! Closed forms of rigid bodies under constant torques (laws of Newton and Coulomb), worked out
//! beside each check.

use super::helper::{check, head, near, run, run_through, run_well, same};

/// A motor whose torque follows `torque`, a clutch, and a wheel that rubs with 5 N*m.
pub fn driven(head: &str, clutch: &str, torque: &str) -> String {
    format!(
        "{head}bodies:\n  motor: {{ inertia: 2 kg*m2, speed: 100 rad/s }}\n  wheel: {{ inertia: 3 kg*m2 }}\n\
         {clutch}\n\
         motors:\n  drive: {{ body: motor, law: {{ prescribed: {{ torque: {torque} }} }} }}\n\
         loads:\n  rub: {{ body: wheel, law: {{ friction: {{ sliding: 5 N*m }} }} }}\n",
    )
}

/// An overrunning clutch from the motor to the wheel.
pub const FREEWHEEL: &str = "overrunning_clutches: { freewheel: { between: [motor, wheel] } }";

/// Drives, brakes and drives again.
pub const STOPS: &str =
    "{ points: [[0 s, 20 N*m], [1 s, 20 N*m], [1 s, -40 N*m], [3 s, -40 N*m], [3 s, 30 N*m]] }";

#[test]
fn the_wheel_runs_ahead_of_a_braked_motor_and_is_caught_up_again() {
    // Locked 0 to 1 s: (20 - 5)/5 = 3 rad/s2, so 103 rad/s and 3*3 + 5 = 14 N*m in the clutch.
    // The motor brakes at 20 rad/s2, the wheel coasts at 5/3; at 3 s 63 and 103 - 10/3 rad/s. Then
    // 15 rad/s2 against 5/3 close 110/3 rad/s in 2.2 s: locked again at 5.2 s and 96 rad/s, from
    // there (30 - 5)/5 = 5 rad/s2 and 3*5 + 5 = 20 N*m.
    let outcome = run_well(&driven(&head(6.0, 0.1, 1e-9), FREEWHEEL, STOPS));
    assert_eq!(outcome.times("sliding", "freewheel").len(), 1);
    near(outcome.times("sliding", "freewheel")[0], 1.0, 1e-12);
    near(outcome.times("stuck", "freewheel")[0], 5.2, 1e-9);
    let series = outcome.series();
    near(series.at("freewheel.torque", 0.5), 14.0, 1e-9);
    near(series.at("freewheel.torque", 2.0), 0.0, 1e-12);
    near(series.at("freewheel.torque", 5.5), 20.0, 1e-9);
    near(series.at("wheel.speed", 3.0), 103.0 - 10.0 / 3.0, 1e-8);
    near(series.at("freewheel.slip_speed", 3.0), 63.0 - 103.0 + 10.0 / 3.0, 1e-8);
    near(outcome.channel("wheel.speed", "final"), 100.0, 1e-8);
    near(outcome.number(&["clutches", "freewheel", "heat"]), 0.0, 1e-12);
    assert_eq!(outcome.at(&["clutches", "freewheel", "releases"]).as_u64(), Some(1));
    assert_eq!(outcome.at(&["clutches", "freewheel", "slips"]).as_u64(), Some(0));
    assert_eq!(outcome.at(&["clutches", "freewheel", "state_at_end"]), "locked");
    // What the rub turned to heat: 5 N*m over the wheel's way.
    let way =
        101.5 + 2.0 * (103.0 - 5.0 / 3.0) + 2.2 * (103.0 - 10.0 / 3.0 - 5.5 / 3.0) + 0.8 * 98.0;
    same(outcome.number(&["energy", "lost"]), 5.0 * way, 1e-9);
    assert!(outcome.number(&["energy", "residual_share"]) < 1e-9);
}

#[test]
fn it_opens_where_its_torque_passes_zero() {
    // Torque 20 - 10 t on the motor: the clutch carries 3 (T - 5)/5 + 5 = 0.6 T + 2, which is zero at
    // T = -10/3: at 7/3 s.
    let ramp = "{ ramp: { start: 0 s, end: 4 s, from: 20 N*m, to: -20 N*m } }";
    let outcome = run_well(&driven(&head(4.0, 0.1, 1e-9), FREEWHEEL, ramp));
    near(outcome.times("sliding", "freewheel")[0], 7.0 / 3.0, 1e-7);
    assert_eq!(outcome.at(&["clutches", "freewheel", "state_at_end"]), "free");
    assert!(outcome.channel("freewheel.torque", "min") > -1e-6, "it never pulls back");
}

#[test]
fn drag_and_slipping_torque_turn_to_heat() {
    // With 2 N*m of drag the motor brakes at (40 - 2)/2 = 19 rad/s2 and the wheel at 7/3: after 2 s
    // they are 100/3 rad/s apart and 2*(100/3) rad/s*s of way has made 2*100/3 J of heat.
    let drags = "overrunning_clutches: { freewheel: { between: [motor, wheel], drag: 2 N*m } }";
    let outcome = run_well(&driven(&head(3.0, 0.1, 1e-9), drags, STOPS));
    near(outcome.times("sliding", "freewheel")[0], 1.0, 1e-12);
    near(outcome.channel("freewheel.slip_speed", "final"), -100.0 / 3.0, 1e-8);
    near(outcome.channel("freewheel.torque", "final"), -2.0, 1e-12);
    same(outcome.number(&["clutches", "freewheel", "heat"]), 200.0 / 3.0, 1e-9);
    // A clutch that slips at 10 N*m under 20: the motor gains (20 - 10)/2 = 5 rad/s2 and the wheel
    // 5/3; after 1 s they are 10/3 apart, heat 10*(10/3)/2.
    let slips =
        "overrunning_clutches: { freewheel: { between: [motor, wheel], slipping_torque: 10 N*m } }";
    let outcome = run_well(&driven(&head(1.0, 0.1, 1e-9), slips, "20 N*m"));
    near(outcome.channel("freewheel.slip_speed", "final"), 10.0 / 3.0, 1e-8);
    near(outcome.channel("freewheel.torque", "final"), 10.0, 1e-12);
    same(outcome.number(&["clutches", "freewheel", "heat"]), 50.0 / 3.0, 1e-9);
    assert_eq!(outcome.at(&["clutches", "freewheel", "state_at_end"]), "slipping");
}

#[test]
fn mirrored_trains_do_the_same_backwards() {
    let forward = driven(&head(6.0, 0.1, 1e-9), FREEWHEEL, STOPS);
    let backward = forward
        .replace("speed: 100 rad/s", "speed: -100 rad/s")
        .replace("[motor, wheel]", "[motor, wheel], reversed: true")
        .replace("drive: { body: motor,", "drive: { body: motor, reversed: true,");
    let (forward, backward) = (run_well(&forward), run_well(&backward));
    near(backward.times("stuck", "freewheel")[0], 5.2, 1e-9);
    for channel in ["wheel.speed", "motor.speed", "freewheel.torque", "freewheel.slip_speed"] {
        let (one, other) = (forward.channel(channel, "final"), backward.channel(channel, "final"));
        near(one, -other, 1e-9);
    }
}

#[test]
fn a_backstop_holds_a_load_that_would_run_back() {
    // A clutch between ground and the drum locks when the drum would turn backwards. Driven with
    // 50 N*m against a weight of 30 N*m for 1 s the drum (10 kg*m2) reaches 2 rad/s; the weight stops
    // it at 1 s + 2/3 s, and from there the backstop carries the 30 N*m.
    let outcome = run_well(&format!(
        "{}bodies:\n  drum: {{ inertia: 10 kg*m2 }}\n\
         overrunning_clutches: {{ backstop: {{ between: [ground, drum] }} }}\n\
         motors: {{ drive: {{ body: drum, law: {{ prescribed: {{ torque: {{ step: {{ at: 1 s, from: 50 N*m, to: 0 N*m }} }} }} }} }} }}\n\
         loads: {{ weight: {{ body: drum, law: {{ prescribed: {{ torque: -30 N*m }} }} }} }}\n",
        head(3.0, 0.1, 1e-9),
    ));
    near(outcome.times("stuck", "backstop")[0], 5.0 / 3.0, 1e-9);
    near(outcome.channel("backstop.torque", "final"), 30.0, 1e-9);
    near(outcome.channel("drum.speed", "final"), 0.0, 1e-12);
    near(outcome.channel("drum.angle", "final"), 1.0 + 2.0 / 3.0, 1e-8);
}

#[test]
fn two_drives_on_one_wheel_share_by_their_clutches() {
    // The faster motor drives alone, the other idles behind its clutch until the first gives up at
    // 1 s: then the second, at 90 rad/s and 10 rad/s2, meets the wheel that coasts from 100 rad/s at
    // 5/3 rad/s2 after 10/(35/3) = 6/7 s.
    let outcome = run_well(&format!(
        "{}bodies:\n  first: {{ inertia: 2, speed: 100 rad/s }}\n  second: {{ inertia: 2, speed: 90 rad/s }}\n  wheel: {{ inertia: 3, speed: 100 rad/s }}\n\
         overrunning_clutches:\n  one: {{ between: [first, wheel] }}\n  two: {{ between: [second, wheel] }}\n\
         motors:\n  main: {{ body: first, law: {{ prescribed: {{ torque: {{ step: {{ at: 1 s, from: 5 N*m, to: -20 N*m }} }} }} }} }}\n  \
         standby: {{ body: second, law: {{ prescribed: {{ torque: {{ step: {{ at: 1 s, from: 0 N*m, to: 20 N*m }} }} }} }} }}\n\
         loads:\n  rub: {{ body: wheel, law: {{ friction: {{ sliding: 5 N*m }} }} }}\n",
        head(3.0, 0.1, 1e-9),
    ));
    near(outcome.times("sliding", "one")[0], 1.0, 1e-12);
    near(outcome.times("stuck", "two")[0], 1.0 + 6.0 / 7.0, 1e-9);
    near(outcome.channel("two.torque", "final"), 5.0 + 3.0 * 15.0 / 5.0, 1e-9);
}

#[test]
fn a_limiter_slips_and_grips_again() {
    // 100 N*m on 1 kg*m2 would ask 80 N*m of the limiter for 4 kg*m2: beyond its 40, so it slips at 30.
    // After 1 s 70 and 7.5 rad/s; then -30 and +7.5 rad/s2 meet after 62.5/37.5 s at (100 N*m s)/5 =
    // 20 rad/s. Heat 30*(62.5/2)*(1 + 5/3) = 2500 J.
    let outcome = run_well(&format!(
        "{}bodies:\n  motor: {{ inertia: 1 }}\n  wheel: {{ inertia: 4 }}\n\
         torque_limiters: {{ limiter: {{ between: [motor, wheel], torque: 30 N*m, breakaway: 40 N*m }} }}\n\
         motors: {{ drive: {{ body: motor, law: {{ prescribed: {{ torque: {{ step: {{ at: 1 s, from: 100 N*m, to: 0 N*m }} }} }} }} }} }}\n\
         requirements: {{ heat: {{ of: limiter.loss, at_most: 1875.001 W }} }}\n",
        head(4.0, 0.1, 1e-9),
    ));
    near(outcome.times("stuck", "limiter")[0], 1.0 + 62.5 / 37.5, 1e-9);
    near(outcome.channel("wheel.speed", "final"), 20.0, 1e-8);
    near(outcome.channel("limiter.torque", "max"), 30.0, 1e-12);
    near(outcome.channel("limiter.loss", "max"), 30.0 * 62.5, 1e-5);
    same(outcome.number(&["clutches", "limiter", "heat"]), 2500.0, 1e-9);
    same(outcome.number(&["energy", "lost"]), 2500.0, 1e-9);
    assert_eq!(outcome.at(&["clutches", "limiter", "state_at_end"]), "locked");
}

#[test]
fn a_limiter_holds_to_its_breakaway() {
    // A torque that rises by 10 N*m each second; the limiter carries 4/5 of it and gives way at 40.
    let outcome = run_through(&format!(
        "{}bodies:\n  motor: {{ inertia: 1 }}\n  wheel: {{ inertia: 4 }}\n\
         torque_limiters: {{ limiter: {{ between: [motor, wheel], torque: 30 N*m, breakaway: 40 N*m }} }}\n\
         motors: {{ drive: {{ body: motor, law: {{ prescribed: {{ torque: {{ ramp: {{ start: 0 s, end: 20 s, from: 0 N*m, to: 200 N*m }} }} }} }} }} }}\n",
        head(6.0, 0.1, 1e-9),
    ));
    near(outcome.times("sliding", "limiter")[0], 5.0, 1e-8);
    assert_eq!(outcome.at(&["clutches", "limiter", "slips"]).as_u64(), Some(1));
}

#[test]
fn a_steady_start_passes_the_load_through_a_locked_clutch() {
    // Speed loop at 100 rad/s against 5 N*m: the clutch carries 5 N*m from the first instant.
    let scenario = driven(&head(1.0, 0.1, 1e-9), FREEWHEEL, "0 N*m").replace(
        "law: { prescribed: { torque: 0 N*m } }",
        "law: { speed_loop: { speed: 100 rad/s, torque_limit: 50 N*m, gain: 4, integral_time: 1 s } }",
    );
    let outcome = run_well(&scenario.replace("duration", "start: steady\nduration"));
    near(outcome.channel("freewheel.torque", "min"), 5.0, 1e-7);
    near(outcome.channel("freewheel.torque", "max"), 5.0, 1e-7);
    near(outcome.channel("wheel.speed", "final"), 100.0, 1e-7);
}

#[test]
fn a_clutch_cannot_begin_with_an_impact() {
    let scenario = driven(&head(1.0, 0.1, 1e-9), FREEWHEEL, "0 N*m")
        .replace("wheel: { inertia: 3 kg*m2 }", "wheel: { inertia: 3 kg*m2, speed: 90 rad/s }");
    let outcome = check(&scenario);
    assert_eq!(outcome.status, Some(2));
    assert!(outcome.stderr.contains("`motor` starts faster than `wheel`"), "{}", outcome.stderr);
    assert!(outcome.stderr.contains("slipping_torque"), "{}", outcome.stderr);
    let slips = scenario.replace("[motor, wheel]", "[motor, wheel], slipping_torque: 60 N*m");
    assert_eq!(run(&slips).status, Some(0));
}
