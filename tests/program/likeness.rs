//! Trains that must behave alike: mirrored, referred through a gear pair, swapped, shifted.
//!
//! Symmetry of the equations (closed form): with every speed, torque and angle reversed the
//! course is reversed; a body behind a rigid ratio acts like ratio^2 times its inertia.

use super::helper::{Outcome, head, near, run_through, same};

/// A start that slips: motor on the inner rotor, friction and fan on the outer; `sign` mirrors.
fn start(sign: f64) -> String {
    let reversed = if sign < 0.0 { ", reversed: true" } else { "" };
    format!(
        "{}bodies:\n  rotor: {{ inertia: 0.3 kg*m2, speed: {} rad/s }}\n  inner: {{ inertia: 0.02 kg*m2, speed: {} rad/s }}\n  \
         outer: {{ inertia: 4 kg*m2, speed: {} rad/s }}\n\
         shafts:\n  shaft: {{ between: [rotor, inner], stiffness: 5 kN*m/rad, damping: 1 N*m*s/rad, backlash: 0.5 deg }}\n\
         magnetic_gears:\n  gear:\n    inner: inner\n    modulator: ground\n    outer: outer\n    \
         pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 500 N*m }}\n    \
         damping: {{ at: outer, coefficient: 20 N*m*s/rad }}\n    initial_load_angle: {} deg\n\
         motors:\n  line: {{ body: rotor, law: {{ curve: {{ points: [[0 rpm, 120 N*m], [1200 rpm, 180 N*m], [1500 rpm, 0 N*m]], voltage: 1 }} }}{reversed} }}\n\
         loads:\n  fan: {{ body: outer, law: {{ power_law: {{ torque: 300 N*m, speed: 270 rpm, exponent: 1.7 }} }} }}\n  \
         rub: {{ body: outer, law: {{ friction: {{ sliding: 30 N*m, breakaway: 50 N*m }} }} }}\n  \
         gust: {{ body: outer, law: {{ prescribed: {{ torque: {{ pulse: {{ start: 0.8 s, end: 1 s, base: 0 N*m, peak: {} N*m }} }} }} }} }}\n",
        head(2.0, 0.02, 1e-9),
        sign * 5.0,
        sign * 5.0,
        sign * -5.0 / 5.5,
        sign * 20.0,
        sign * 400.0,
    )
}

#[test]
fn mirrored_train_runs_backwards() {
    let (forward, backward) = (run_through(&start(1.0)), run_through(&start(-1.0)));
    assert!(forward.slips("gear") > 0, "the case should slip");
    assert_eq!(forward.slips("gear"), backward.slips("gear"));
    let net = |outcome: &Outcome| outcome.at(&["gears", "gear", "net_slips"]).as_i64().unwrap();
    assert_eq!(net(&forward), -net(&backward));
    let (a, b) = (forward.series(), backward.series());
    for head in &a.heads[1..] {
        let name = head.split(" [").next().unwrap();
        let even = ["slips", "pull_out_share", "short_of_peak", "loss", "power"];
        let sign = if even.iter().any(|ending| name.ends_with(&format!(".{ending}"))) {
            1.0
        } else {
            -1.0
        };
        let scale = forward.channel(name, "max").abs().max(forward.channel(name, "min").abs());
        for (x, y) in a.column(name).iter().zip(b.column(name)) {
            near(*x, sign * y, 1e-6 * scale.max(1e-6));
        }
    }
}

/// A coupling between a driver and a wheel that stands behind a gear pair, or referred.
fn behind_a_pair(ratio: Option<f64>) -> String {
    let (wheel, pair, load) = match ratio {
        None => ("", String::new(), "middle: 12".to_owned()),
        Some(ratio) => (
            "  wheel: { inertia: 5 kg*m2 }\n",
            format!("gear_pairs:\n  pair: {{ between: [middle, wheel], ratio: {ratio} }}\n"),
            format!("wheel: {}", 12.0 * ratio),
        ),
    };
    let (body, torque) = load.split_once(": ").unwrap();
    let middle = match ratio {
        None => 1.0 + 5.0 / 9.0,
        Some(_) => 1.0,
    };
    format!(
        "{}bodies:\n  driver: {{ inertia: 0.7 kg*m2 }}\n  middle: {{ inertia: {middle} kg*m2 }}\n{wheel}{pair}\
         magnetic_couplings:\n  coupling: {{ between: [driver, middle], pole_pairs: 6, pull_out: 50 N*m, damping: 1 N*m*s/rad }}\n\
         motors:\n  push: {{ body: driver, law: {{ prescribed: {{ torque: {{ points: [[0 s, 0 N*m], [0.1 s, 60 N*m], [0.5 s, 60 N*m], [0.6 s, 10 N*m]] }} }} }} }}\n\
         loads:\n  work: {{ body: {body}, law: {{ prescribed: {{ torque: {{ step: {{ at: 0.3 s, from: 0 N*m, to: {torque} N*m }} }} }} }} }}\n",
        head(2.0, 0.02, 1e-10),
    )
}

#[test]
fn inertia_and_torque_are_referred_through_a_gear_pair() {
    // speed_middle = ratio * speed_wheel with ratio +-3: 5 kg*m2 act like 5/9, a torque like a third.
    let referred = run_through(&behind_a_pair(None));
    let plain = referred.series();
    for ratio in [3.0, -3.0] {
        let series = run_through(&behind_a_pair(Some(ratio))).series();
        for channel in ["driver.speed", "middle.speed", "coupling.phase", "coupling.torque_b"] {
            for (x, y) in plain.column(channel).iter().zip(series.column(channel)) {
                near(*x, y, 1e-6);
            }
        }
        for (x, y) in series.column("middle.speed").iter().zip(series.column("wheel.speed")) {
            near(*x, ratio * y, 1e-9 * x.abs().max(1.0));
        }
        // An ideal pair turns torque by its ratio and loses nothing.
        for (a, b) in series.column("pair.torque_a").iter().zip(series.column("pair.torque_b")) {
            near(b, -ratio * a, 1e-8);
        }
    }
}

#[test]
fn planetary_set_obeys_its_teeth() {
    // z_s w_s + z_r w_r = (z_s + z_r) w_c; torques as z_s : z_r : -(z_s + z_r). The ring is held:
    // the sun turns 99/21 times as fast as the carrier.
    let scenario = format!(
        "{}bodies:\n  sun: {{ inertia: 0.02 kg*m2 }}\n  carrier: {{ inertia: 3 kg*m2 }}\n\
         planetary_gears:\n  stage: {{ sun: sun, carrier: carrier, ring: ground, teeth: {{ sun: 21, ring: 78 }} }}\n\
         motors:\n  push: {{ body: sun, law: {{ prescribed: {{ torque: 10 N*m }} }} }}\n",
        head(1.0, 0.1, 1e-10),
    );
    let outcome = run_through(&scenario);
    let ratio = 99.0 / 21.0;
    let speed = 10.0 / (0.02 + 3.0 / (ratio * ratio));
    same(outcome.channel("sun.speed", "final"), speed, 1e-9);
    same(outcome.channel("carrier.speed", "final"), speed / ratio, 1e-9);
    let (sun, carrier, ring) = (
        outcome.channel("stage.torque_sun", "final"),
        outcome.channel("stage.torque_carrier", "final"),
        outcome.channel("stage.torque_ring", "final"),
    );
    same(carrier, 3.0 * speed / ratio, 1e-9);
    near(sun + carrier + ring, 0.0, 1e-9);
    same(ring * 21.0, sun * 78.0, 1e-9);
}

#[test]
fn rigid_shaft_is_the_limit_of_a_stiff_one() {
    let scenario = |shaft: &str| {
        start(1.0).replace("stiffness: 5 kN*m/rad, damping: 1 N*m*s/rad, backlash: 0.5 deg", shaft)
    };
    let rigid = run_through(&scenario("rigid: true"));
    let stiff = run_through(&scenario("stiffness: 2 MN*m/rad, damping: 100 N*m*s/rad"));
    assert_eq!(rigid.slips("gear"), stiff.slips("gear"));
    let (a, b) = (rigid.series(), stiff.series());
    for (x, y) in a.column("rotor.speed").iter().zip(b.column("rotor.speed")) {
        near(*x, y, 2e-2);
    }
}

#[test]
fn members_of_a_coupling_may_be_swapped() {
    let scenario = behind_a_pair(None);
    let swapped =
        scenario.replace("between: [driver, middle], pole", "between: [middle, driver], pole");
    let (a, b) = (run_through(&scenario).series(), run_through(&swapped).series());
    for (x, y) in a.column("coupling.phase").iter().zip(b.column("coupling.phase")) {
        near(*x, -y, 1e-7);
    }
    for (x, y) in a.column("coupling.torque_a").iter().zip(b.column("coupling.torque_b")) {
        near(*x, y, 1e-6);
    }
}
