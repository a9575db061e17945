//! Whole trains against an independent model: `SciPy`, absolute angles of the bodies, laws
//! differentiated numerically, eigenvalues of the dense matrix.

use super::*;
use crate::analysis::testing::equations;

fn agree(yaml: &str, expected: &[[f64; 2]], decaying: &[f64]) {
    let found = run(&ModesSpec::default(), &equations(yaml)).unwrap();
    assert_eq!(found.modes.len(), expected.len());
    for (mode, [frequency, ratio]) in found.modes.iter().zip(expected) {
        assert!((mode.frequency_hz / frequency - 1.0).abs() < 1e-10, "{}", mode.frequency_hz);
        assert!((mode.damping_ratio / ratio - 1.0).abs() < 1e-8, "{}", mode.damping_ratio);
    }
    assert_eq!(found.overdamped.len(), decaying.len());
    for (root, expected) in found.overdamped.iter().zip(decaying) {
        assert!((root.rate / expected - 1.0).abs() < 1e-9, "{}", root.rate);
    }
}

// A planetary set, a rigid shaft, a magnetic gear with a third harmonic and hot magnets, an elastic
// shaft damped by its ratio, a gear pair, a closed free play, a motor by its plate, dry friction.
#[test]
fn a_mixed_train_with_hot_magnets() {
    agree(
        "bodies: { motor: { inertia: 0.03, speed: 1474 rpm }, sun: { inertia: 0.0004 }, carrier: { inertia: 0.02 }, inner: { inertia: 0.03 }, outer: { inertia: 0.4 }, pinion: { inertia: 0.3 }, drum: { inertia: 160 } }
shafts:
  loose: { between: [motor, sun], stiffness: 4 kN*m/rad, damping: 0.4, backlash: 1 deg }
  stub: { between: [carrier, inner], rigid: true }
  long: { between: [outer, pinion], stiffness: 90 kN*m/rad, damping_ratio: 1 % }
planetary_gears: { stage: { sun: sun, carrier: carrier, ring: ground, teeth: { sun: 24, ring: 72 } } }
magnetic_gears:
  gear: { inner: inner, modulator: ground, outer: outer, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 2800 }, damping: { at: outer, coefficient: 30, peak_at: 8 rad/s }, harmonics: [{ order: 3, amplitude: 4 % }], magnet_temperature: 90 degC, rated_temperature: 20 degC, remanence_coefficient: -0.11 %/K }
gear_pairs: { girth: { between: [pinion, drum], ratio: -4 } }
motors: { drive: { body: motor, law: { rating_plate: { power: 7.5 kW, speed: 1455 rpm, synchronous_speed: 1500 rpm, starting_torque: 220 %, pull_up_torque: 170 %, breakdown_torque: 280 % } } } }
loads: { charge: { body: drum, law: { friction: { sliding: 2600, breakaway: 3200 } } } }",
        &[
            [9.2605725599, 0.0694311857],
            [96.9986104528, 0.0667135490],
            [180.9736254045, 0.0788980338],
        ],
        &[-307.8323758449417],
    );
}

// A magnetic gear with all members turning: motor by its plate on the ring, speed loop with
// integral part and lag on the inner rotor, a load by points on the modulator.
#[test]
fn three_turning_members_with_a_speed_loop() {
    agree(
        "bodies: { line: { inertia: 0.9, speed: 985 rpm }, ring: { inertia: 0.5, speed: 985 rpm }, servo_rotor: { inertia: 0.015, speed: 0 rpm }, inner: { inertia: 0.02, speed: 0 rpm }, modulator: { inertia: 0.4 }, mill: { inertia: 8 } }
shafts:
  one: { between: [line, ring], stiffness: 150 kN*m/rad, damping_ratio: 1 % }
  two: { between: [servo_rotor, inner], stiffness: 25 kN*m/rad, damping_ratio: 1 % }
  three: { between: [modulator, mill], stiffness: 120 kN*m/rad, damping_ratio: 1 % }
magnetic_gears:
  gear: { inner: inner, modulator: modulator, outer: ring, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: modulator, torque: 700 }, damping: { at: modulator, coefficient: 4, peak_at: 12 rad/s } }
motors:
  drive: { body: line, law: { rating_plate: { power: 37 kW, speed: 985 rpm, synchronous_speed: 1000 rpm, starting_torque: 240 %, pull_up_torque: 190 %, breakdown_torque: 280 % } } }
  servo: { body: servo_rotor, law: { speed_loop: { speed: 0 rpm, torque_limit: 140, gain: 1.5, integral_time: 0.5, lag: 2 ms } } }
loads: { grinding: { body: mill, law: { curve: { points: [[0 rpm, 250], [600 rpm, 340], [1100 rpm, 430]] } } } }",
        &[
            [0.5375515782, 0.9006492235],
            [19.7098429593, 0.2891138306],
            [93.9567773723, 0.0205268439],
            [109.4919884174, 0.0674063355],
            [273.4097270913, 0.0118646546],
        ],
        &[-136.02129135646314, -450.0497685400555],
    );
}
