//! `measured`: records over the computed curves, and what is told when they do not fit.

use super::bench::{Bench, Told, json, names};
use std::f64::consts::PI;

/// A body of 0.1 kg*m2 pushed by 2 N*m: w = 20 rad/s2 times t (closed form).
const PUSHED: &str = "\
lodeshaft: 1
title: A pushed body
duration: 1 s
output_step: 5 ms
bodies:
  hub: { inertia: 0.1 kg*m2 }
motors:
  push: { body: hub, law: { prescribed: { torque: 2 N*m } } }
requirements:
  fast: { of: hub.speed, reaches: 15 rad/s }
measured:
  meter: { of: hub.speed, file: meter.csv, time: t, value: n, unit: rpm, time_unit: ms, offset: 0.2 s, source: invented }
";

/// A record on its own clock, which starts 0.2 s after the run: 20 rad/s2 t and `more` rad/s.
fn record(more: f64) -> String {
    let rows = (0..=70).map(|place| {
        let time = 0.01 * f64::from(place);
        let speed = 20.0 * (time + 0.2) + more;
        format!("{},{}\n", 1000.0 * time, speed * 30.0 / PI)
    });
    format!("t,n\n{}", rows.collect::<String>())
}

fn bench(name: &str, record: &str) -> Bench {
    let bench = Bench::new(name);
    bench.write("pushed.yaml", PUSHED);
    bench.write("meter.csv", record);
    bench
}

fn meter(told: &Told) -> serde_json::Value {
    json(&told.out)["measured"]["meter"].clone()
}

#[test]
fn compare_tells_how_far_each_run_is_from_its_record() {
    // Twice the inertia: 10 rad/s2 t against a record of 20 rad/s2 t from 0.2 s to 0.9 s. The
    // error is -10 t: its mean -5.5 rad/s, its root mean square sqrt(100 * mean of t^2) over the
    // 71 rows at 0.2, 0.21 ... 0.9 s (closed form).
    let bench = bench("record_compare", &record(0.0));
    let kept = bench.run(&["run", "pushed.yaml", "--out", "kept", "--quiet"]);
    assert_eq!(kept.status, Some(0), "{kept:?}");
    let told = bench.run(&[
        "compare",
        "kept",
        "pushed.yaml",
        "--set",
        "bodies.hub.inertia=0.2 kg*m2",
        "--format",
        "json",
        "--no-charts",
    ]);
    let answers = &json(&told.out)["answers"];
    let second = |key: &str| answers[format!("measured.meter.{key}")]["values"][1].as_f64();
    let first = |key: &str| answers[format!("measured.meter.{key}")]["values"][0].as_f64();
    let squares: f64 = (0..=70).map(|row| (0.2 + 0.01 * f64::from(row)).powi(2)).sum();
    assert!((second("rms").unwrap() - (100.0 * squares / 71.0).sqrt()).abs() < 1e-6, "{answers}");
    assert!((second("bias").unwrap() + 5.5).abs() < 1e-6, "{answers}");
    assert!(first("rms").unwrap().abs() < 1e-6, "{answers}");
    let text = bench.run(&[
        "compare",
        "kept",
        "pushed.yaml",
        "--set",
        "bodies.hub.inertia=0.2 kg*m2",
        "--no-charts",
    ]);
    assert!(text.out.contains("rms error"), "{text:?}");
}

#[test]
fn a_record_of_the_truth_has_no_error() {
    let bench = bench("record_true", &record(0.0));
    let told = bench.run(&["run", "pushed.yaml", "--format", "json"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let found = meter(&told);
    assert_eq!(found["of"], "hub.speed");
    assert_eq!(found["unit"], "rad/s");
    assert_eq!(found["rows"], 71);
    assert!((found["from"].as_f64().unwrap() - 0.2).abs() < 1e-12, "{found}");
    assert!((found["to"].as_f64().unwrap() - 0.9).abs() < 1e-12, "{found}");
    for key in ["rms", "bias", "lag", "peak_error"] {
        assert!(found[key].as_f64().unwrap().abs() < 1e-6, "{key}: {found}");
    }
    assert!((found["peak_computed"].as_f64().unwrap() - 18.0).abs() < 1e-6, "{found}");
}

#[test]
fn errors_are_those_of_the_closed_form() {
    // Everywhere 0.5 rad/s too much: a mean square of 0.25, and on a slope of 20 rad/s2 the run is
    // 0.5/20 s late.
    let bench = bench("record_off", &record(0.5));
    let told = bench.run(&["run", "pushed.yaml", "--format", "json"]);
    let found = meter(&told);
    let near = |key: &str, wanted: f64| {
        let value = found[key].as_f64().unwrap();
        assert!((value - wanted).abs() < 1e-5, "{key}: {value} {wanted}");
    };
    near("rms", 0.5);
    near("bias", -0.5);
    near("rms_share", 0.5 / 14.0);
    near("lag", 0.025);
    near("peak_error", -0.5 / 18.5);
    let told = bench.run(&["run", "pushed.yaml"]);
    assert!(told.out.contains("Measured against computed"), "{}", told.out);
    assert!(told.out.contains("+25 ms"), "{}", told.out);
}

#[test]
fn dots_stand_in_charts_and_the_table_in_the_report() {
    let bench = bench("record_report", &record(0.5));
    let told = bench.run(&["report", "pushed.yaml"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let page = bench.read("output/pushed/report.html");
    assert!(page.contains("<h3>Measured and computed</h3>"));
    // One group in the chart of the run, one in the chart of what was measured.
    assert_eq!(page.matches("data-record=\"meter\"").count(), 2);
    assert!(page.contains("measured, meter"));
    bench.run(&["run", "pushed.yaml", "--out", "run"]);
    assert!(names(&bench.path("run")).iter().any(|name| name == "measured.svg"));
}

#[test]
fn files_that_do_not_fit_are_told_with_the_reason() {
    let sound = record(0.0);
    for (name, record, change, words) in [
        ("column", "t,speed\n0,1\n", "", "no column is headed `n`; there are `t`, `speed`"),
        ("unsorted", "t,n\n0,1\n20,2\n10,3\n", "", "line 4 of `meter.csv`: times must rise"),
        ("text", "t,n\n0,fast\n", "", "line 2 of `meter.csv`: `fast` in the column `n`"),
        ("unit", &sound, "unit: N*m", "measured.meter.unit"),
        (
            "late",
            &sound,
            "offset: 2 s",
            "goes from 2 s to 2.7 s; the run from 0 s to 1 s does not meet it",
        ),
        ("few", &sound, "offset: 0.985 s", "only 2 rows lie within the run"),
        ("channel", &sound, "of: hub.sped", "did you mean `hub.speed`?"),
    ] {
        let bench = bench(&format!("record_{name}"), record);
        let mut text = PUSHED.to_owned();
        if let Some((key, _)) = change.split_once(':') {
            let line = PUSHED.lines().find(|line| line.contains("meter.csv")).unwrap();
            let old = line
                .split([',', '{'])
                .find(|part| part.trim().starts_with(&format!("{key}:")))
                .unwrap();
            text = PUSHED.replace(line, &line.replacen(old, &format!(" {change}"), 1));
        }
        bench.write("pushed.yaml", &text);
        let told = bench.run(&["run", "pushed.yaml"]);
        assert_eq!(told.status, Some(2), "{name}: {told:?}");
        assert!(told.err.contains(words), "{name}: {}", told.err);
        assert!(!bench.path("output").exists(), "{name}: nothing is written");
    }
    let bench = bench("record_missing", &sound);
    std::fs::remove_file(bench.path("meter.csv")).unwrap();
    let told = bench.run(&["check", "pushed.yaml"]);
    assert!(told.err.contains("cannot read the table `meter.csv`: no such file"), "{}", told.err);
}

#[test]
fn rows_outside_the_run_are_left_out_with_a_warning() {
    let bench = bench("record_partly", &record(0.0));
    let told = bench.run(&[
        "run",
        "pushed.yaml",
        "--format",
        "json",
        "--set",
        "measured.meter.offset=0.5 s",
    ]);
    assert!(told.err.contains("20 rows lie outside the run and are left out"), "{}", told.err);
    assert_eq!(meter(&told)["rows"], 51);
}
