//! Modes, rainflow and estimates through the whole program, against handbook values and closed forms.

use super::helper::{Folder, Table};
use serde_json::Value;
use std::f64::consts::TAU;

/// Runs the only study `it` of a train.
fn ask(train: &str, study: &str) -> (Option<i32>, Value) {
    let duration = if train.contains("duration:") { "" } else { "duration: 1 s\n" };
    let folder = Folder::new(&format!(
        "lodeshaft: 1\ntitle: a handbook case\n{duration}{train}\nstudies: {{ it: {study} }}\n"
    ));
    let (status, answers, stderr) = folder.study(&["--quiet"]);
    let answer = answers["studies"]["it"].clone();
    assert_eq!(answer["completed"], true, "{stderr}");
    (status, answer)
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("no number: {value}"))
}

#[track_caller]
fn close(found: &Value, expected: f64, relative: f64) {
    let found = number(found);
    assert!((found - expected).abs() <= relative * expected.abs(), "{found} against {expected}");
}

// Thomson, Theory of Vibration with Applications, the Holzer example (from memory): J = 5, 11, 22,
// k = 0.10e6, 0.20e6; roots 123.666 and 202.658 rad/s, with more digits from the closed form.
#[test]
fn three_discs_of_a_textbook() {
    let (status, answer) = ask(
        "bodies: { a: { inertia: 5 }, b: { inertia: 11 }, c: { inertia: 22 } }
shafts: { one: { between: [a, b], stiffness: 1e5 }, two: { between: [b, c], stiffness: 2e5 } }",
        "{ modes: {} }",
    );
    assert_eq!(status, Some(0));
    let modes = &answer["modes"];
    close(&modes[0]["frequency_hz"], 123.665800083 / TAU, 1e-10);
    close(&modes[1]["frequency_hz"], 202.65834859 / TAU, 1e-10);
    close(&modes[0]["shape"]["a"], 1.0, 1e-12);
    close(&modes[0]["shape"]["b"], 0.235338494489, 1e-10);
    close(&modes[0]["shape"]["c"], -0.344941974517, 1e-10);
    let shares = &modes[0]["elastic_share"];
    assert!((number(&shares["one"]) + number(&shares["two"]) - 1.0).abs() < 1e-12);
}

// The 5 MW reference turbine of Jonkman et al., NREL/TP-500-38060 (2009): free-free 2.2227 Hz and
// 5 % of critical damping between rotor and generator behind 97 : 1.
#[test]
fn reference_turbine_of_five_megawatts() {
    let (_, answer) = ask(
        "bodies: { rotor: { inertia: 38759227.5 }, generator: { inertia: 534.116 }, wheel: { inertia: 0 } }
shafts: { low: { between: [rotor, wheel], stiffness: 867637000, damping: 6215000 } }
gear_pairs: { box: { between: [generator, wheel], ratio: 97 } }",
        "{ modes: {} }",
    );
    let mode = &answer["modes"][0];
    close(&mode["frequency_hz"], 2.2226618, 3e-8);
    close(&mode["damped_hz"], 2.2198798, 3e-8);
    close(&mode["damping_ratio"], 0.05, 5e-4);
    assert_eq!(answer["free"].as_array().map(Vec::len), Some(1));
}

// Equal discs in a row: w_r = 2 sqrt(k/J) sin(r pi/2N), here N = 6, J = 2, k = 1e4 (closed form).
#[test]
fn six_equal_discs() {
    let (_, answer) = ask(
        "bodies: { a: { inertia: 2 }, b: { inertia: 2 }, c: { inertia: 2 }, d: { inertia: 2 }, e: { inertia: 2 }, f: { inertia: 2 } }
shafts: { ab: { between: [a, b], stiffness: 1e4 }, bc: { between: [b, c], stiffness: 1e4 }, cd: { between: [c, d], stiffness: 1e4 }, de: { between: [d, e], stiffness: 1e4 }, ef: { between: [e, f], stiffness: 1e4 } }",
        "{ modes: {} }",
    );
    let expected = [36.6025403784, 70.7106781187, 100.0, 122.474487139, 136.602540378];
    assert_eq!(answer["modes"].as_array().map(Vec::len), Some(5));
    for (mode, expected) in answer["modes"].as_array().unwrap().iter().zip(expected) {
        close(&mode["frequency_hz"], expected / TAU, 1e-10);
    }
}

/// Frequency, damped frequency (Hz), damping ratio, frequency without load (Hz) of each mode.
const PUMP: [[f64; 4]; 3] = [
    [14.115056773099, 13.819596478480, 0.203534753915, 14.777830641580],
    [115.813375959653, 114.992627547249, 0.118841973392, 118.358219805012],
    [168.861384323228, 168.269783887507, 0.083634092736, 169.711086540516],
];

// The pump start of the documentation at its steady point, by SciPy: absolute angles of four
// bodies, Kloss's formula and the pump's square law differentiated numerically.
#[test]
fn the_pump_of_the_documentation_agrees_with_an_independent_model() {
    let file = include_str!("../accepted/contract.yaml");
    let (before, _) = file.rsplit_once("studies:").unwrap();
    let folder = Folder::new(&format!("{before}studies: {{ it: {{ modes: {{}} }} }}\n"));
    let (_, answers, stderr) = folder.study(&["--quiet"]);
    let answer = &answers["studies"]["it"];
    let expected = PUMP;
    assert_eq!(answer["modes"].as_array().map(Vec::len), Some(expected.len()), "{stderr}");
    for (mode, [frequency, damped, ratio, unloaded]) in
        answer["modes"].as_array().unwrap().iter().zip(expected)
    {
        close(&mode["frequency_hz"], frequency, 1e-9);
        close(&mode["damped_hz"], damped, 1e-9);
        close(&mode["damping_ratio"], ratio, 1e-8);
        close(&mode["unloaded_hz"], unloaded, 1e-9);
    }
    let table = Table::read(&folder.study_file("out", "it.csv"));
    assert_eq!(table.rows.len(), expected.len());
}

// The separation of a mode is judged, and decides the exit status: 44.514 Hz against 50 Hz.
#[test]
fn a_mode_too_near_to_the_line_is_not_met() {
    let train = "bodies: { fast: { inertia: 0.05, speed: 1500 rpm }, slow: { inertia: 20 } }
magnetic_gears:
  gear: { inner: fast, modulator: ground, outer: slow, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 5000 } }";
    for (separation, status, met) in [(10, 0, true), (12, 1, false)] {
        let (found, answer) = ask(
            train,
            &format!(
                "{{ modes: {{ separation: {separation} %, speed_range: [0 rpm, 3000 rpm], of: fast, excitations: {{ line: {{ frequency: 50 Hz }} }} }} }}"
            ),
        );
        assert_eq!((found, &answer["met"]), (Some(status), &Value::from(met)));
        close(&answer["modes"][0]["frequency_hz"], 44.514266999, 1e-10);
        let crossings = answer["crossings"].as_array().unwrap();
        let line = crossings.iter().find(|one| one["order"] == "line").unwrap();
        close(&line["separation"], 1.0 - 44.514266999 / 50.0, 1e-9);
    }
}

// ASTM E1049-85, example of figure 6: counts in order, and (sum n S^4)^(1/4) = 8449^(1/4).
#[test]
fn the_rainflow_example_of_the_standard() {
    let train = "bodies: { a: { inertia: 1 } }
duration: 8 s
loads: { history: { body: a, law: { prescribed: { torque: { points: [[0, -2], [1, 1], [2, -3], [3, 5], [4, -1], [5, 3], [6, -4], [7, 4], [8, -2]] } } } } }";
    let (status, answer) = ask(train, "{ rainflow: { of: history.torque, slope: 4 } }");
    assert_eq!(status, Some(0));
    let cycles: Vec<[f64; 3]> = answer["cycles"]
        .as_array()
        .unwrap()
        .iter()
        .map(|cycle| ["range", "mean", "count"].map(|key| number(&cycle[key])))
        .collect();
    assert_eq!(
        cycles,
        [
            [3.0, -0.5, 0.5],
            [4.0, -1.0, 0.5],
            [4.0, 1.0, 1.0],
            [8.0, 1.0, 0.5],
            [9.0, 0.5, 0.5],
            [8.0, 0.0, 0.5],
            [6.0, 1.0, 0.5]
        ]
    );
    close(&answer["damage_equivalent"], 9.58741060508, 1e-11);
    let (status, answer) =
        ask(train, "{ rainflow: { of: history.torque, slope: 4, at_most: 9.5 N*m } }");
    assert_eq!((status, &answer["met"]), (Some(1), &Value::from(false)));
}

// A hundred unit sines from zero end in two half cycles of range 1: (15.93)^(1/4), not 2.
#[test]
fn a_hundred_sines() {
    let (_, answer) = ask(
        "bodies: { a: { inertia: 1 } }
duration: 100 s
loads: { history: { body: a, law: { prescribed: { torque: { sine: { mean: 0, amplitude: 1, frequency: 1 Hz, phase: 0 deg } } } } } }",
        "{ rainflow: { of: history.torque, slope: 4, equivalent_cycles: 100 } }",
    );
    close(&answer["damage_equivalent"], 15.93_f64.powf(0.25), 1e-11);
}

// 22 pole pairs, 5000 N m, 20 kg m2 against 0.05 behind 5.5, damping 60 N m s/rad: wp 279.691388368
// rad/s, beta 0.15255893911 (homoclinic torque by SciPy: 965.627415 N m); jam of the slow side
// 1287.62688891 rpm without load (equal energies).
#[test]
fn estimates_of_a_gear_of_five_kilonewton_metres() {
    let (status, answer) = ask(
        "bodies: { fast: { inertia: 0.05 }, slow: { inertia: 20 } }
start: steady
magnetic_gears:
  gear: { inner: fast, modulator: ground, outer: slow, pole_pairs: { inner: 4, outer: 22 }, pull_out: { at: outer, torque: 5000 }, damping: { at: outer, coefficient: 60 } }
motors: { drive: { body: fast, law: { prescribed: { torque: 454.5454545454545 } } } }
loads: { work: { body: slow, law: { prescribed: { torque: 2500 } } } }",
        "{ estimates: {} }",
    );
    assert_eq!(status, Some(0));
    let gear = &answer["gears"]["gear"];
    close(&gear["natural_frequency_hz"], 44.514266999, 1e-10);
    close(&gear["damping_ratio"], 0.15255893911 / 2.0, 1e-10);
    close(&gear["resynchronisation_share"], 965.627415 / 5000.0, 1e-9);
    close(&gear["jam_speed"], 1287.62688891 * TAU / 60.0, 1e-10);
    close(&gear["static_service_factor"], 2.0, 1e-8);
    close(&gear["acceleration_share"], 20.0 / (20.0 + 0.05 * 5.5 * 5.5), 1e-12);
    let zero = &gear["with_damping"]["zero"];
    close(&zero["critical_step_share"], 0.724611353777, 1e-10);
    close(&zero["critical_step_share_from_preload"], 0.86964716755, 1e-8);
    close(&gear["members"]["inner"]["jam_speed_at_preload"], 753.483596378 * TAU / 60.0, 1e-8);
}

#[test]
fn a_slipping_gear_is_not_linearised() {
    let folder = Folder::new(
        "lodeshaft: 1
title: overloaded coupling
duration: 1 s
bodies: { a: { inertia: 1 } }
magnetic_couplings: { coupling: { between: [a, ground], pole_pairs: 4, pull_out: 10 } }
motors: { drive: { body: a, law: { prescribed: { torque: 12 } } } }
studies: { it: { modes: { point: { time: 0.9 s } } } }
",
    );
    let (_, answers, stderr) = folder.study(&["--quiet"]);
    assert_eq!(answers["studies"]["it"]["completed"], false);
    assert!(stderr.contains("`coupling` is slipping at 0.9 s"), "{stderr}");
}
