//! Every kind of study in one file, with the keys that machines rely on.

use super::helper::{Folder, ask, train};

const STUDIES: &str = "studies:
  start_margin: { margin: { vary: loads.pump.law.power_law.torque, between: [600 N*m, 1500 N*m], at_least: 25 % } }
  map:          { sweep: { vary: { bodies.impeller.inertia: { from: 0.5 kg*m2, to: 4 kg*m2, count: 3 }, motors.line_motor.law.rating_plate.voltage: { values: [0.8, 0.9, 1.0] } } } }
  tolerance:    { monte_carlo: { draws: 40, seed: 11, slipping_at_most: 10 %, spread: { magnetic_gears.gear.pull_out.torque: { normal: { relative: 4 % } }, bodies.impeller.inertia: { uniform: { relative: 10 % } } } } }
  torsional:    { modes: { point: steady, separation: 10 %, excitations: { ripple: { body: inner_rotor, order: 104 } }, speed_range: [0 rpm, 1500 rpm], of: motor_rotor } }
  counts:       { rainflow: { of: pump_shaft.torque, slope: 4 } }
  by_hand:      { estimates: {} }
  point:        { steady: {} }
  cases:        { load_cases: { cases: { hot: { changes: { magnetic_gears.gear.pull_out.torque: 1290 N*m }, requirements: { gear_share: { of: gear.pull_out_share, at_most: 95 % } } } } } }
";

/// The pump start of the documentation, with its studies.
fn pump() -> String {
    let file = include_str!("../accepted/contract.yaml");
    let (before, _) = file.rsplit_once("studies:").unwrap();
    format!("{before}{STUDIES}")
}

#[test]
fn every_kind_of_study_has_its_keys() {
    let folder = Folder::new(&pump());
    let (status, answers, stderr) = folder.study(&["--quiet"]);
    assert!(matches!(status, Some(0 | 1)), "{status:?}\n{stderr}");
    let studies = answers["studies"].as_object().unwrap();
    let expected: [(&str, &[&str]); 8] = [
        (
            "start_margin",
            &[
                "value",
                "unit",
                "design",
                "margin_share",
                "reached",
                "flips",
                "first_to_fail",
                "runs",
            ],
        ),
        ("map", &["rows", "met", "file"]),
        (
            "tolerance",
            &["draws", "slipped", "share", "interval", "not_met", "quantiles", "sensitivity"],
        ),
        ("torsional", &["modes", "overdamped", "crossings"]),
        ("counts", &["cycles", "damage_equivalent"]),
        ("by_hand", &["gears"]),
        ("point", &["points"]),
        ("cases", &["cases"]),
    ];
    assert_eq!(studies.keys().collect::<Vec<_>>(), expected.map(|(name, _)| name));
    for (name, keys) in expected {
        for key in keys {
            assert!(studies[name].get(key).is_some(), "{name} has no {key}\n{stderr}");
        }
        assert_eq!(studies[name]["completed"], true, "{name}");
        let file = folder.study_file("out", &format!("{name}.json"));
        assert_eq!(serde_json::from_str::<serde_json::Value>(&file).unwrap(), studies[name]);
    }
    let mode = &studies["torsional"]["modes"][0];
    for key in ["frequency_hz", "damped_hz", "damping_ratio", "shape"] {
        assert!(mode.get(key).is_some(), "{key}");
    }
    let gear = &studies["by_hand"]["gears"]["gear"];
    for key in [
        "natural_frequency_hz",
        "damping_ratio",
        "critical_step_share",
        "jam_speed",
        "resynchronisation_share",
        "acceleration_share",
    ] {
        assert!(gear.get(key).is_some(), "{key}");
    }
    let hot = &studies["cases"]["cases"]["hot"];
    for key in ["met", "requirements", "gears"] {
        assert!(hot.get(key).is_some(), "{key}");
    }
    assert_eq!(studies["map"]["rows"], 9);
}

#[test]
fn the_text_tells_every_study() {
    let folder = Folder::new(&pump());
    let output = folder.call(&["study", "case.yaml", "torsional", "counts", "by_hand", "point"]);
    let text = String::from_utf8(output.stdout).unwrap();
    for head in ["torsional (modes)", "counts (rainflow)", "by_hand (estimates)", "point (steady)"]
    {
        assert!(text.lines().any(|line| line == head), "{head} in\n{text}");
    }
    assert!(!text.contains("NaN") && !text.contains(" inf"), "{text}");
    // Without --out the results stand in a folder named after the file.
    assert!(folder.has("output/case/studies/counts.csv"));
}

#[test]
fn a_steady_coupling_stands_at_the_arc_sine_of_its_load() {
    let (status, answer) = ask(&train(
        60.0,
        100.0,
        "  point: { steady: { vary: { motors.drive.law.prescribed.torque: { values: [10 N*m, 60 N*m, 99 N*m, 101 N*m] } } } }\n",
    ));
    assert_eq!(status, Some(0));
    let points = answer["points"].as_array().unwrap();
    for (point, torque) in points.iter().zip([10.0, 60.0, 99.0_f64]) {
        let coupling = &point["gears"]["coupling"];
        let angle = coupling["load_angle"].as_f64().unwrap();
        assert!((angle - (torque / 100.0).asin()).abs() < 1e-9, "{angle}");
        let share = coupling["pull_out_share"].as_f64().unwrap();
        assert!((share - torque / 100.0).abs() < 1e-9, "{share}");
    }
    assert!(points[3]["failure"].as_str().unwrap().contains("101 %"), "{}", points[3]);
    assert_eq!(points.len(), 4);
}

#[test]
fn a_study_without_an_answer_does_not_stop_the_next() {
    // Beyond the pull-out torque there is no steady point to linearise at.
    let folder = Folder::new(&train(
        120.0,
        100.0,
        "  torsional: { modes: { point: steady } }
  cases: { load_cases: { cases: { as_built: {} } } }\n",
    ));
    let (status, answers, stderr) = folder.study(&[]);
    assert_eq!(status, Some(2), "{stderr}");
    assert!(stderr.contains("error: `torsional` has no answer: "), "{stderr}");
    assert_eq!(answers["studies"]["torsional"]["completed"], false);
    assert_eq!(answers["studies"]["cases"]["completed"], true);
}
