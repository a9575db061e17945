//! A rotor on a shaft to ground: the linear oscillator, exact in every figure.
//!
//! Closed forms of any textbook on vibration (from memory): damping ratio z, frequency w,
//! wd = w sqrt(1 - z^2); twist x for stiffness 4 N*m/rad, inertia 1 kg*m2: w = 2 rad/s.

use super::helper::{head, near, run_well, same};
use std::f64::consts::PI;

/// A rotor on a shaft with damping ratio 0.1 or none.
pub fn oscillator(duration: f64, start: &str, speed: f64, damping: f64, torque: &str) -> String {
    format!(
        "{}start: {start}\n\
         bodies:\n  rotor: {{ inertia: 1 kg*m2, speed: {speed} rad/s }}\n\
         shafts:\n  spring: {{ between: [rotor, ground], stiffness: 4 N*m/rad, damping: {damping} N*m*s/rad }}\n\
         motors:\n  push: {{ body: rotor, law: {{ prescribed: {{ torque: {torque} }} }} }}\n",
        head(duration, 0.5, 1e-11),
    )
}

#[test]
fn released_rotor_swings_down() {
    // exp(-z w t) (cos wd t + z w/wd sin wd t) at t = 3, held at 1 rad for the first second.
    let release = "{ step: { at: 1 s, from: 4 N*m, to: 0 N*m } }";
    let outcome = run_well(&oscillator(4.0, "steady", 0.0, 0.4, release));
    let series = outcome.series();
    near(series.at("spring.twist", 0.5), 1.0, 1e-9);
    same(series.at("spring.twist", 4.0), 0.50510555926627, 1e-7);
    same(outcome.channel("spring.twist", "final"), 0.50510555926627, 1e-7);
}

#[test]
fn struck_rotor_swings_from_rest() {
    // exp(-z w t) sin(wd t)/wd at t = 3.
    let outcome = run_well(&oscillator(3.0, "as_given", 1.0, 0.4, "0"));
    same(outcome.channel("spring.twist", "final"), -0.084987524716189, 1e-7);
    // Torque on the end b, which is ground: k*twist + c*speed.
    let speed = outcome.channel("rotor.speed", "final");
    near(outcome.channel("spring.torque", "final"), 4.0 * -0.084987524716189 + 0.4 * speed, 1e-7);
}

#[test]
fn stepped_rotor_overshoots() {
    // exp(-pi z/sqrt(1 - z^2)) at pi/wd.
    let outcome = run_well(&oscillator(10.0, "as_given", 0.0, 0.4, "4 N*m"));
    same(outcome.channel("spring.twist", "max"), 1.72924761428767, 1e-7);
    near(outcome.channel("spring.twist", "max_time"), 1.5787097084991, 1e-5);
}

#[test]
fn damping_ratio_is_that_of_the_mode() {
    let by_ratio = oscillator(10.0, "as_given", 0.0, 0.4, "4 N*m")
        .replace("damping: 0.4 N*m*s/rad", "damping_ratio: 10 %");
    assert!(by_ratio.contains("ratio"));
    let outcome = run_well(&by_ratio);
    same(outcome.channel("spring.twist", "max"), 1.72924761428767, 1e-7);
}

#[test]
fn ramped_torque_overshoots_by_the_length_of_the_ramp() {
    // 1 + |sin(w tr/2)/(w tr/2)|: a ramp of a whole period leaves no swing at all.
    let factors = [(PI, 1.6366197723676), (2.0 * PI, 1.0), (3.0 * PI, 1.2122065907892)];
    for (angle, factor) in factors {
        let end = 0.5 + angle / 2.0;
        let ramp = format!("{{ ramp: {{ start: 0.5 s, end: {end} s, from: 0 N*m, to: 4 N*m }} }}");
        let outcome = run_well(&oscillator(12.0, "as_given", 0.0, 0.0, &ramp));
        same(outcome.channel("spring.twist", "max"), factor, 1e-7);
    }
    let outcome = run_well(&oscillator(12.0, "as_given", 0.0, 0.0, "4 N*m"));
    same(outcome.channel("spring.twist", "max"), 2.0, 1e-7);
}

#[test]
fn harmonic_torque_gives_the_known_amplitude() {
    // Two discs 10 and 40 kg*m2 on 2e5 N*m/rad and 120 N*m*s/rad, 1000 N*m at 100 rad/s on the
    // first: amplitude of the shaft torque |H| 1000 N*m with H = (k + i w c)/J1 over
    // (k + i w c)(1/J1 + 1/J2) - w^2 (complex algebra): 1329.10219745 N*m. The transient decays
    // with 7.5/s and is gone after 4 s.
    let scenario = format!(
        "{}bodies:\n  first: {{ inertia: 10 kg*m2 }}\n  second: {{ inertia: 40 kg*m2 }}\n\
         shafts:\n  middle: {{ between: [first, second], stiffness: 200 kN*m/rad, damping: 120 N*m*s/rad }}\n\
         motors:\n  shaker: {{ body: first, law: {{ prescribed: {{ torque: {{ sine: {{ mean: 0 N*m, \
         amplitude: 1 kN*m, frequency: {} Hz, phase: 0 deg }} }} }} }} }}\n\
         requirements:\n  late: {{ of: middle.torque, at_most: 2 kN*m, after: 4 s }}\n",
        head(4.5, 0.01, 1e-11),
        100.0 / (2.0 * PI),
    );
    let outcome = run_well(&scenario);
    same(outcome.found("late").unwrap(), 1329.10219745, 1e-7);
}

#[test]
fn solid_shafts_have_the_stiffness_of_their_section() {
    // k = pi G (d^4 - bore^4)/(32 length) (Saint-Venant, any handbook): twist under a torque.
    for (solid, stiffness) in [
        ("diameter: 70 mm, length: 1.5 m, shear_modulus: 84 GPa", 132001.86932221),
        ("diameter: 100 mm, length: 1 m, shear_modulus: 80 GPa", 785398.16339745),
        ("diameter: 100 mm, bore: 60 mm, length: 1 m, shear_modulus: 80 GPa", 683610.56142114),
    ] {
        let scenario = oscillator(0.1, "steady", 0.0, 0.0, "1 kN*m")
            .replace("4 N*m/rad, damping: 0 N*m*s/rad", &format!("{{ {solid} }}"))
            .replace("output_step: 0.5 s", "output_step: 0.05 s");
        let outcome = run_well(&scenario);
        same(outcome.series().at("spring.twist", 0.0), 1000.0 / stiffness, 1e-9);
        same(outcome.channel("spring.torque", "final"), 1000.0, 1e-9);
    }
}

#[test]
fn play_is_crossed_freely() {
    // A rotor at 1 rad/s in the middle of 0.2 rad of play: it meets the flank after 0.1 s, is
    // thrown back by half a period of the spring, pi/w, and meets the other flank after
    // another 0.2 s. Without damping nothing is lost.
    let scenario = oscillator(3.0, "as_given", 1.0, 0.0, "0")
        .replace("damping: 0 N*m*s/rad", "backlash: 0.2 rad");
    let outcome = run_well(&scenario);
    let half = PI / 2.0;
    let contacts = outcome.times("contact", "spring");
    let gaps = outcome.times("gap", "spring");
    near(contacts[0], 0.1, 1e-8);
    near(gaps[0], 0.1 + half, 1e-8);
    near(contacts[1], 0.3 + half, 1e-8);
    same(outcome.channel("spring.twist", "max"), 0.1 + 0.5, 1e-8);
    same(outcome.channel("spring.torque", "max"), 4.0 * 0.5, 1e-8);
    assert!(outcome.number(&["energy", "residual_share"]) < 1e-6);
}
