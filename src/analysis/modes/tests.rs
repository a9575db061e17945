//! Modes against handbook values and closed forms; inputs stand as YAML, as a user types them.

#![expect(clippy::float_cmp, reason = "exact zeros and counts")]

use super::*;
use crate::analysis::testing::equations;

fn modes(yaml: &str) -> ModesResult {
    run(&ModesSpec::default(), &equations(yaml)).unwrap()
}

fn rad(result: &ModesResult, place: usize) -> f64 {
    TAU * result.modes[place].frequency_hz
}

#[track_caller]
fn close(found: f64, expected: f64, relative: f64) {
    assert!((found - expected).abs() <= relative * expected.abs(), "{found} against {expected}");
}

#[track_caller]
fn amplitude(result: &ModesResult, mode: usize, body: &str, expected: f64) {
    let shape = &result.modes[mode].shape.amplitude;
    let found = shape.iter().find(|(name, _)| name == body).unwrap().1;
    assert!((found - expected).abs() < 1e-10, "{body}: {found} against {expected}");
}

// Closed form: w = sqrt(k (1/J1 + 1/J2)), amplitudes as -J2 to J1.
#[test]
fn two_discs_swing_against_each_other() {
    let found = modes(
        "bodies: { a: { inertia: 10 }, b: { inertia: 40 } }
shafts: { s: { between: [a, b], stiffness: 2e5 } }",
    );
    assert_eq!(found.modes.len(), 1);
    close(rad(&found, 0), 158.113883008, 1e-11);
    amplitude(&found, 0, "a", 1.0);
    amplitude(&found, 0, "b", -0.25);
    assert_eq!(found.modes[0].damping_ratio, 0.0);
    assert_eq!(found.free.len(), 1);
    assert!(found.free[0].iter().all(|(_, speed)| (speed - 1.0).abs() < 1e-12));
    // Energies: kinetic as the inverse inertias, elastic all in the one shaft.
    close(found.modes[0].shape.kinetic[0].1, 0.8, 1e-11);
    close(found.modes[0].shape.elastic[0].1, 1.0, 1e-12);
    assert_eq!(found.modes[0].label, "a on s");
}

// Three discs of 0.3, 0.6 and 0.18 kg m2 on 1.5 m and 1 m of 70 mm shaft, G = 84 GPa: a textbook
// exercise on torsional vibration; roots of w^4 - w^2 (...) + k1 k2 (J1+J2+J3)/(J1 J2 J3) = 0.
#[test]
fn three_discs_of_a_textbook_exercise() {
    let found = modes(
        "bodies: { a: { inertia: 0.3 }, b: { inertia: 0.6 }, c: { inertia: 0.18 } }
shafts:
  one: { between: [a, b], stiffness: { diameter: 70 mm, length: 1.5 m, shear_modulus: 84 GPa } }
  two: { between: [b, c], stiffness: { diameter: 70 mm, length: 1 m, shear_modulus: 84 GPa } }",
    );
    close(found.modes[0].frequency_hz, 120.694439162, 1e-11);
    close(found.modes[1].frequency_hz, 195.892624988, 1e-11);
    amplitude(&found, 0, "b", -0.306999531835);
    amplitude(&found, 0, "c", -0.643334893882);
    amplitude(&found, 1, "a", 1.0 / 6.47666822722);
    amplitude(&found, 1, "c", 1.0);
    amplitude(&found, 1, "b", -2.44300046816 / 6.47666822722);
}

// Thomson, Theory of Vibration with Applications, the Holzer example with J = 5, 11, 22 and
// k = 0.10e6, 0.20e6 (from memory): printed roots 123.666 and 202.658 rad/s; the closed form
// of the same inputs gives more digits.
#[test]
fn thomson_holzer_example() {
    let found = modes(
        "bodies: { a: { inertia: 5 }, b: { inertia: 11 }, c: { inertia: 22 } }
shafts: { one: { between: [a, b], stiffness: 1e5 }, two: { between: [b, c], stiffness: 2e5 } }",
    );
    close(rad(&found, 0), 123.665800083, 1e-11);
    close(rad(&found, 1), 202.65834859, 1e-11);
    assert!((rad(&found, 0) - 123.666).abs() < 5e-4 && (rad(&found, 1) - 202.658).abs() < 5e-4);
    amplitude(&found, 0, "b", 0.235338494489);
    amplitude(&found, 0, "c", -0.344941974517);
    amplitude(&found, 1, "a", -1.0 / 1.05352031267);
}

// Closed form for N equal discs in a row: w_r = 2 sqrt(k/J) sin(r pi/2N).
#[test]
fn equal_discs_in_a_row() {
    for count in [6_usize, 40] {
        let bodies: Vec<String> =
            (0..count).map(|place| format!("d{place}: {{ inertia: 2 }}")).collect();
        let shafts: Vec<String> = (1..count)
            .map(|place| {
                format!("s{place}: {{ between: [d{}, d{place}], stiffness: 1e4 }}", place - 1)
            })
            .collect();
        let yaml =
            format!("bodies: {{ {} }}\nshafts: {{ {} }}", bodies.join(", "), shafts.join(", "));
        let found = modes(&yaml);
        assert_eq!(found.modes.len(), count - 1);
        for place in 0..count - 1 {
            let angle = (place + 1) as f64 * std::f64::consts::PI / (2 * count) as f64;
            close(rad(&found, place), 2.0 * 5e3_f64.sqrt() * angle.sin(), 1e-10);
        }
    }
}

// Geared shafts by referring inertia and stiffness with the square of the speed ratio (any
// vibration handbook): J1 = 2, k1 = 5e4, n = 3, k2 = 2e4, J2 = 0.5, wheels massless and with inertia.
#[test]
fn geared_shafts() {
    let train = |wheel: f64, pinion: f64| {
        modes(&format!(
            "bodies: {{ one: {{ inertia: 2 }}, wheel: {{ inertia: {wheel} }}, pinion: {{ inertia: {pinion} }}, two: {{ inertia: 0.5 }} }}
shafts: {{ s1: {{ between: [one, wheel], stiffness: 5e4 }}, s2: {{ between: [pinion, two], stiffness: 2e4 }} }}
gear_pairs: {{ pair: {{ between: [pinion, wheel], ratio: 3 }} }}"
        ))
    };
    let light = train(1e-9, 1e-9);
    close(rad(&light, 0), 168.109695036, 1e-8);
    let heavy = train(0.3, 0.02);
    close(rad(&heavy, 0), 167.876093959, 1e-11);
    close(rad(&heavy, 1), 718.32046034, 1e-11);
}

// Closed form: zeta = c/(2 sqrt(k Je)), damped frequency w sqrt(1 - zeta^2).
#[test]
fn damping_of_two_discs() {
    let found = modes(
        "bodies: { a: { inertia: 10 }, b: { inertia: 40 } }
shafts: { s: { between: [a, b], stiffness: 2e5, damping: 120 } }",
    );
    close(found.modes[0].damping_ratio, 0.0474341649025, 1e-11);
    close(TAU * found.modes[0].damped_hz, 157.935904721, 1e-11);
    assert_eq!(found.modes[0].shape.damping, [("s".to_owned(), 1.0)]);
    let strong = modes(
        "bodies: { a: { inertia: 10 }, b: { inertia: 40 } }
shafts: { s: { between: [a, b], stiffness: 2e5, damping: 4000 } }",
    );
    // Over-damped: roots of Je x^2 + c x + k with Je = 8.
    assert!(strong.modes.is_empty());
    let root = (4000.0_f64.powi(2) - 4.0 * 8.0 * 2e5).sqrt();
    close(strong.overdamped[0].rate, -(4000.0 - root) / 16.0, 1e-10);
    close(strong.overdamped[1].rate, -(4000.0 + root) / 16.0, 1e-12);
}

// The 5 MW reference turbine of Jonkman et al. (NREL/TP-500-38060, 2009): rotor 38 759 227.5,
// generator 534.116 kg m2 behind 97:1, shaft 867 637 000 N m/rad and 6 215 000 N m s/rad; its
// report states 5 % of critical damping.
#[test]
fn five_megawatt_reference_turbine() {
    let found = modes(
        "bodies: { rotor: { inertia: 38759227.5 }, gearbox: { inertia: 0 }, generator: { inertia: 534.116 } }
shafts: { low: { between: [rotor, gearbox], stiffness: 867637000, damping: 6215000 } }
gear_pairs: { box: { between: [generator, gearbox], ratio: 97 } }",
    );
    let inertia = 1.0 / (1.0 / 38759227.5 + 1.0 / (534.116 * 97.0 * 97.0));
    let frequency = (867637000.0_f64 / inertia).sqrt();
    close(rad(&found, 0), frequency, 1e-12);
    close(found.modes[0].damping_ratio, 6215000.0 / (2.0 * inertia * frequency), 1e-11);
    // The same figures to the digits in which the inputs are known.
    close(found.modes[0].frequency_hz, 2.2226618, 3e-8);
    close(found.modes[0].damped_hz, 2.2198798, 3e-8);
    assert!((found.modes[0].damping_ratio - 0.05).abs() < 5e-5);
    amplitude(&found, 0, "generator", 1.0);
}

const GEAR: &str = "
bodies: { fast: { inertia: 0.05 }, slow: { inertia: 20 } }
magnetic_gears:
  gear: { inner: fast, modulator: ground, outer: slow, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 5000 } }";

// Closed form: f = f0 (1 - (T/Tmax)^2)^(1/4), f0 = sqrt(K/Je)/2 pi, with K = 5000/22 and
// 1/Je = 16/0.05 + 484/20; half load: 41.4251931687 Hz against 44.514266999 Hz without load.
#[test]
fn the_magnetic_gear_softens_with_load() {
    let loaded = |share: f64| {
        modes(&format!(
            "{GEAR}
motors: {{ drive: {{ body: fast, law: {{ prescribed: {{ torque: {} }} }} }} }}
loads: {{ work: {{ body: slow, law: {{ prescribed: {{ torque: {} }} }} }} }}",
            share * 5000.0 * 4.0 / 22.0,
            share * 5000.0,
        ))
    };
    close(loaded(0.0).modes[0].frequency_hz, 44.514266999, 1e-11);
    for (share, factor) in [(0.5, 0.930604859102), (0.8, 0.774596669241)] {
        let found = loaded(share);
        close(found.modes[0].frequency_hz, 44.514266999 * factor, 1e-10);
        close(found.modes[0].unloaded_hz.unwrap(), 44.514266999, 1e-11);
        close(found.softening[0].frequency_factor, factor, 1e-10);
        close(found.softening[0].load_share.abs(), share, 1e-12);
    }
    let half = loaded(0.5);
    close(half.modes[0].frequency_hz, 41.4251931687, 1e-10);
    // Stiffness on a member with the others held: count^2 K cos(d0), here without load.
    let free = loaded(0.0);
    close(free.softening[0].member_stiffness[1].1, 110000.0, 1e-12);
    close(free.softening[0].member_stiffness[0].1, 3636.36363636, 1e-11);
}

// Closed forms for one gear of 4 and 22 pole pairs, 16 N m at the outer rotor, held and free:
// 18.0472 Hz with the modulator held, 13.3538 Hz with inner and modulator held, 21.9401 Hz with
// all three free, 12.1399 Hz with outer and modulator held.
#[test]
fn held_members_change_the_frequency_of_a_gear() {
    let members = [("inner", 0.002, 4.0), ("modulator", 0.08, 26.0), ("outer", 0.05, 22.0)];
    for (free, printed) in [
        (["inner", "outer"].as_slice(), 18.0472),
        (&["outer"], 13.3538),
        (&["inner", "modulator", "outer"], 21.9401),
        (&["inner"], 12.1399),
    ] {
        let turning: Vec<_> = members.iter().filter(|(name, ..)| free.contains(name)).collect();
        let bodies: Vec<String> = turning
            .iter()
            .map(|(name, inertia, _)| format!("r_{name}: {{ inertia: {inertia} }}"))
            .collect();
        let at = |name: &str| {
            if free.contains(&name) { format!("r_{name}") } else { "ground".to_owned() }
        };
        let found = modes(&format!(
            "bodies: {{ {} }}
magnetic_gears:
  gear: {{ inner: {}, modulator: {}, outer: {}, pole_pairs: {{ inner: 4, outer: 22 }}, pull_out: {{ at: outer, torque: 16 }} }}",
            bodies.join(", "),
            at("inner"),
            at("modulator"),
            at("outer"),
        ));
        let compliance: f64 =
            turning.iter().map(|(_, inertia, count)| count * count / inertia).sum();
        close(rad(&found, 0), (16.0 / 22.0 * compliance).sqrt(), 1e-12);
        assert!((found.modes[0].frequency_hz - printed).abs() < 5e-5, "{printed}");
        assert_eq!(found.free.len(), free.len() - 1);
    }
}

// A PI speed loop on two inertias by the double-pole design of the drives literature
// (Zhang and Furusho, IEEE Trans. Industrial Electronics 47(3), 2000, from memory):
// Ki = JM wa^2, Kp = 4 zeta JM wa, zeta = sqrt(R)/2 gives both pole pairs at wa with that zeta.
#[test]
fn a_speed_loop_damps_the_gear_as_designed() {
    let (load, motor, stiffness) = (0.2, 1.0, 500.0_f64);
    let frequency = (stiffness / load).sqrt();
    let zeta = 0.5 * (load / motor).sqrt();
    let gain = 4.0 * zeta * motor * frequency;
    let found = modes(&format!(
        "bodies: {{ motor: {{ inertia: {motor}, speed: 10 rad/s }}, load: {{ inertia: {load} }} }}
shafts: {{ s: {{ between: [motor, load], stiffness: {stiffness} }} }}
motors: {{ drive: {{ body: motor, law: {{ speed_loop: {{ speed: 10 rad/s, torque_limit: 1000, gain: {gain}, integral_time: {} }} }} }} }}",
        gain / (motor * frequency * frequency),
    ));
    assert_eq!(found.modes.len(), 2);
    for mode in &found.modes {
        // A double root is known to the root of the rounding only.
        close(TAU * mode.frequency_hz, frequency, 1e-6);
        close(mode.damping_ratio, zeta, 1e-5);
    }
    assert!(found.free.is_empty());
}

// A gland at rest holds its member: the other disc swings against ground, w = sqrt(k/J).
#[test]
fn friction_at_rest_holds_its_member() {
    let found = modes(
        "bodies: { a: { inertia: 2 }, b: { inertia: 3 } }
shafts: { s: { between: [a, b], stiffness: 800 } }
loads: { gland: { body: b, law: { friction: { sliding: 5 } } } }",
    );
    assert_eq!(found.modes.len(), 1);
    close(rad(&found, 0), 20.0, 1e-12);
    amplitude(&found, 0, "b", 0.0);
    assert!(found.free.is_empty() && found.overdamped.is_empty());
}

// Two equal branches on one hub: w = sqrt(k/J) for the branches against each other, and
// sqrt(k (1/J + 2/H)) for both against the hub (closed form); a magnet in parallel with a shaft.
#[test]
fn equal_branches_have_independent_shapes() {
    let found = modes(
        "bodies: { hub: { inertia: 4 }, a: { inertia: 1 }, b: { inertia: 1 }, c: { inertia: 1 } }
shafts: { sa: { between: [hub, a], stiffness: 900 }, sb: { between: [hub, b], stiffness: 900 }, sc: { between: [hub, c], stiffness: 900 } }",
    );
    close(rad(&found, 0), 30.0, 1e-12);
    close(rad(&found, 1), 30.0, 1e-12);
    close(rad(&found, 2), (900.0_f64 * (1.0 + 3.0 / 4.0)).sqrt(), 1e-12);
    for mode in 0..2 {
        amplitude(&found, mode, "hub", 0.0);
    }
    let parallel = modes(
        "bodies: { a: { inertia: 1 }, b: { inertia: 1 } }
shafts: { s: { between: [a, b], stiffness: 100 } }
magnetic_couplings: { coupling: { between: [a, b], pole_pairs: 5, pull_out: 60 } }",
    );
    assert_eq!(parallel.modes.len(), 1);
    close(rad(&parallel, 0), (2.0 * (100.0 + 5.0 * 60.0_f64)).sqrt(), 1e-12);
    close(parallel.modes[0].shape.elastic[1].1, 0.75, 1e-12);
}

#[test]
fn a_point_of_the_run_is_linearised_where_it_stands_and_refused_while_slipping() {
    let yaml = format!(
        "{GEAR}
motors: {{ drive: {{ body: fast, law: {{ prescribed: {{ torque: {{ pulse: {{ start: 0.1, end: 1.5, base: 0, peak: 1800 }} }} }} }} }} }}"
    );
    let equations = equations(&yaml);
    let at = |time: f64| {
        let spec = ModesSpec { point: linear_point::Point::Time(time), ..ModesSpec::default() };
        run(&spec, &equations)
    };
    close(at(0.05).unwrap().modes[0].frequency_hz, 44.514266999, 1e-9);
    let refused = at(1.0).unwrap_err();
    assert!(refused.contains("`gear` is slipping at 1 s"), "{refused}");
    assert!(at(5.0).unwrap_err().contains("beyond the run"));
}

// A load by points that sticks at standstill has a slope while it turns: 5 N m s/rad on one body of
// 2 kg m2 gives the root -5/2 (closed form); dry friction beside it adds nothing.
#[test]
fn a_load_by_points_damps_with_its_slope() {
    let found = modes(
        "bodies: { a: { inertia: 2, speed: 10 rad/s } }
motors: { drive: { body: a, law: { prescribed: { torque: 107 } } } }
loads: { mill: { body: a, law: { curve: { points: [[0 rad/s, 50], [20 rad/s, 150]] } } }, gland: { body: a, law: { friction: { sliding: 7 } } } }",
    );
    assert_eq!(found.overdamped.len(), 1);
    close(found.overdamped[0].rate, -2.5, 1e-12);
    assert!(found.free.is_empty());
}
