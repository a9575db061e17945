//! Events of everyday machines, said with the parts there are: a jam, a belt that runs back, a mixer
//! whose level changes.
//!
//! Closed forms of rigid bodies under constant torques and of a first-order lag.

use super::helper::{head, near, run_well};

#[test]
fn a_jam_that_grips_at_a_time_is_a_brake_whose_pressure_steps() {
    // 2 kg*m2 at 10 rad/s, gripped by 40 N*m from 1 s on: at rest after 2*10/40 = 0.5 s, and held
    // against a motor of 30 N*m, which the feed took up to 1 s; let go at 3 s it runs up again at 15 rad/s2.
    let outcome = run_well(&format!(
        "{}bodies: {{ rotor: {{ inertia: 2, speed: 10 rad/s }} }}\n\
         motors: {{ drive: {{ body: rotor, law: {{ prescribed: {{ torque: {{ points: [[0 s, 0], [1.6 s, 0], [1.6 s, 30 N*m]] }} }} }} }} }}\n\
         brakes: {{ jam: {{ body: rotor, torque: 40 N*m, applied: {{ pulse: {{ start: 1 s, end: 3 s, base: 0, peak: 1 }} }} }} }}\n",
        head(4.0, 0.1, 1e-9),
    ));
    near(outcome.times("stuck", "jam")[0], 1.5, 1e-9);
    near(outcome.series().at("jam.torque", 2.0), -30.0, 1e-9);
    near(outcome.channel("rotor.speed", "final"), 15.0, 1e-8);
}

#[test]
fn a_loaded_slope_that_runs_back_is_a_weight_and_a_friction() {
    // Drive 50, weight 30, friction 10 N*m (breakaway 12) on 10 kg*m2: 1 rad/s2 up to 1 s; without the
    // drive -4 rad/s2, at rest at 1.25 s; the weight overcomes the friction: back at -2 rad/s2.
    let belt = |drive: u32, friction: &str| {
        run_well(&format!(
            "{}bodies: {{ pulley: {{ inertia: 10 }} }}\n\
             motors: {{ drive: {{ body: pulley, law: {{ prescribed: {{ torque: {{ step: {{ at: 1 s, from: {drive} N*m, to: 0 N*m }} }} }} }} }} }}\n\
             loads:\n  slope: {{ body: pulley, law: {{ prescribed: {{ torque: -30 N*m }} }} }}\n  \
             idlers: {{ body: pulley, law: {{ friction: {{ {friction} }} }} }}\n",
            head(3.0, 0.1, 1e-9),
        ))
    };
    let outcome = belt(50, "sliding: 10 N*m, breakaway: 12 N*m");
    near(outcome.channel("pulley.speed", "max"), 1.0, 1e-9);
    near(outcome.channel("pulley.speed", "final"), -2.0 * 1.75, 1e-8);
    near(outcome.channel("pulley.angle", "max"), 0.5 + 0.125, 1e-8);
    // Idlers that hold 35 N*m are broken away by 70 N*m and keep the belt where it stops: 3 rad/s at
    // 1 s, at rest at 1.75 s.
    let outcome = belt(70, "sliding: 10 N*m, breakaway: 35 N*m");
    near(outcome.times("stuck", "idlers").last().copied().unwrap(), 1.75, 1e-8);
    near(outcome.channel("pulley.speed", "final"), 0.0, 1e-12);
}

#[test]
fn a_mixer_whose_level_steps_is_a_load_whose_scale_steps() {
    // 20 N*m on 0.1 kg*m2 against 1 N*m*s/rad: 20 rad/s; twice the level: 10 + 10 exp(-20 (t - 2 s)).
    let outcome = run_well(&format!(
        "{}bodies: {{ mixer: {{ inertia: 0.1, speed: 20 rad/s }} }}\n\
         motors: {{ drive: {{ body: mixer, law: {{ prescribed: {{ torque: 20 N*m }} }} }} }}\n\
         loads: {{ paste: {{ body: mixer, law: {{ viscous: {{ coefficient: 1 N*m*s/rad }} }}, scale: {{ points: [[0 s, 1], [2 s, 1], [2 s, 2]] }} }} }}\n",
        head(3.0, 0.1, 1e-10),
    ));
    let series = outcome.series();
    near(series.at("mixer.speed", 2.0), 20.0, 1e-8);
    near(series.at("mixer.speed", 2.1), 10.0 + 10.0 * (-2.0_f64).exp(), 1e-7);
    near(outcome.channel("mixer.speed", "final"), 10.0 + 10.0 * (-20.0_f64).exp(), 1e-8);
}
