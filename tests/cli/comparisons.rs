//! `compare`: scenarios, variants and folders of results side by side.

use super::bench::{Bench, Told, json, names};

/// A body of 0.1 kg*m2 pushed by 2 N*m for 1 s: w = T t / J, so 20 rad/s at the end (closed form).
const PUSHED: &str = "\
lodeshaft: 1
title: A pushed body
duration: 1 s
bodies:
  hub: { inertia: 0.1 kg*m2 }
motors:
  push: { body: hub, law: { prescribed: { torque: 2 N*m } } }
requirements:
  fast: { of: hub.speed, reaches: 15 rad/s }
";

fn bench(name: &str) -> Bench {
    let bench = Bench::new(name);
    bench.write("pushed.yaml", PUSHED);
    bench
}

fn final_speeds(told: &Told) -> (Vec<f64>, Vec<Option<f64>>) {
    let answers = &json(&told.out)["answers"]["channels.hub.speed.final"];
    let list = |key: &str| answers[key].as_array().unwrap().clone();
    (
        list("values").iter().map(|it| it.as_f64().unwrap()).collect(),
        list("change").iter().map(serde_json::Value::as_f64).collect(),
    )
}

#[test]
fn a_change_of_the_inertia_is_told_with_what_it_does() {
    let bench = bench("compare_set");
    let arguments = ["compare", "pushed.yaml", "--set", "bodies.hub.inertia=0.2 kg*m2"];
    let told = bench.run(&[&arguments[..], &["--format", "json"]].concat());
    // Twice the inertia gets half the speed: 10 rad/s never reach 15.
    assert_eq!(told.status, Some(1), "{told:?}");
    let found = json(&told.out);
    let inputs = &found["inputs"];
    assert_eq!(inputs.as_object().unwrap().len(), 1);
    assert_eq!(inputs["bodies.hub.inertia"][0], "0.1 kg*m2");
    assert_eq!(inputs["bodies.hub.inertia"][1], "0.2 kg*m2");
    let (values, changes) = final_speeds(&told);
    assert!((values[0] - 20.0).abs() < 1e-6 && (values[1] - 10.0).abs() < 1e-6, "{values:?}");
    assert!((changes[1].unwrap() + 0.5).abs() < 1e-7, "{changes:?}");
    assert_eq!(found["answers"]["requirements.fast.met"]["values"][1], "not met");
    assert_eq!(found["runs"][0]["met"], true);
    let told = bench.run(&arguments);
    for words in ["Inputs that differ", "bodies.hub.inertia", "NOT MET", "-50 %", "output/compare"]
    {
        assert!(told.out.contains(words), "{words}: {}", told.out);
    }
}

#[test]
fn folders_of_results_stand_beside_scenarios() {
    let bench = bench("compare_folder");
    let set = "motors.push.law.prescribed.torque=3 N*m";
    assert_eq!(bench.run(&["run", "pushed.yaml", "--set", set, "--out", "strong"]).status, Some(0));
    // The file changes afterwards; the folder stands for what was run.
    bench.write("pushed.yaml", &PUSHED.replace("0.1 kg*m2", "0.05 kg*m2"));
    let told = bench.run(&["compare", "strong", "pushed.yaml", "--format", "json"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let found = json(&told.out);
    assert_eq!(found["inputs"]["bodies.hub.inertia"][0], "0.1 kg*m2");
    assert_eq!(found["inputs"]["motors.push.law.prescribed.torque"][0], "3 N*m");
    assert_eq!(found["runs"][0]["results"], "strong");
    assert_eq!(found["runs"][0]["set"]["motors.push.law.prescribed.torque"], "3 N*m");
    let (values, _) = final_speeds(&told);
    assert!((values[0] - 30.0).abs() < 1e-6 && (values[1] - 40.0).abs() < 1e-6, "{values:?}");
}

#[test]
fn a_run_and_its_own_folder_are_the_same() {
    let bench = bench("compare_same");
    bench.run(&["run", "small.yaml"]);
    let told = bench.run(&["compare", "output/small", "small.yaml", "--format", "json"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let found = json(&told.out);
    assert!(found["inputs"].as_object().unwrap().is_empty(), "{found}");
    assert!(found["answers"].as_object().unwrap().is_empty(), "{found}");
    assert!(found["same"].as_u64().unwrap() > 20);
    let told = bench.run(&["compare", "output/small", "small.yaml"]);
    assert!(told.out.contains("The inputs are the same."), "{}", told.out);
    assert!(told.out.contains("No answer differs notably."), "{}", told.out);
}

#[test]
fn the_folder_holds_page_table_and_charts() {
    let bench = bench("compare_files");
    let variants = [
        "--variant",
        "twice: bodies.driven.inertia=0.4 kg*m2",
        "--variant",
        "bodies.driven.inertia=0.6 kg*m2",
    ];
    let told = bench.run(&[&["compare", "small.yaml", "--out", "both"], &variants[..]].concat());
    assert_eq!(told.status, Some(0), "{told:?}");
    let files = names(&bench.path("both"));
    for file in ["compare.csv", "compare.html", "compare.json", "compare.png", "compare.svg"] {
        assert!(files.iter().any(|name| name == file), "{files:?}");
    }
    let page = bench.read("both/compare.html");
    for words in ["<b>small</b>", "<b>twice</b>", "inertia 0.6 kg*m2", "class=\"data\""] {
        assert!(page.contains(words), "{words}");
    }
    let table = bench.read("both/compare.csv");
    assert!(table.starts_with("figure,unit,small,twice,inertia 0.6 kg*m2\n"), "{table}");
    assert!(table.contains("\ngears.coupling.slips,1,0,0,0\n"), "{table}");
    // Three runs in one chart: solid, dashed, dotted.
    let chart = bench.read("both/compare.svg");
    assert!(chart.matches("stroke-dasharray").count() > 2 || chart.contains("twice"), "dashes");
    let told = bench.run(&["compare", "small.yaml", "pushed.yaml", "--no-charts", "--out", "none"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    assert!(!names(&bench.path("none")).iter().any(|name| name.ends_with(".svg")));
}

#[test]
fn a_folder_that_is_not_ours_is_told_apart_from_one_without_a_run() {
    let bench = bench("compare_foreign");
    std::fs::create_dir(bench.path("thesis")).unwrap();
    bench.write("thesis/summary.json", "{}");
    let told = bench.run(&["compare", "small.yaml", "thesis"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    assert!(
        told.err.contains("`thesis` is a folder, but holds no results of this program"),
        "{}",
        told.err
    );
    assert!(!bench.path("output").exists(), "nothing is written");
    bench.run(&["run", "small.yaml", "--out", "kept"]);
    std::fs::remove_file(bench.path("kept/summary.json")).unwrap();
    let told = bench.run(&["compare", "small.yaml", "kept"]);
    assert!(told.err.contains("`kept` holds no run, only studies"), "{}", told.err);
}

#[test]
fn results_of_another_version_are_read_with_a_warning_or_refused_with_the_reason() {
    let bench = bench("compare_version");
    bench.run(&["run", "small.yaml", "--out", "old"]);
    let ours = concat!("lodeshaft ", env!("CARGO_PKG_VERSION"));
    let summary = bench.read("old/summary.json");
    bench.write("old/summary.json", &summary.replace(ours, "lodeshaft 0.0.1"));
    let told = bench.run(&["compare", "small.yaml", "old"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let wanted = format!("warning: `old` was written by lodeshaft 0.0.1, not by {ours}");
    assert!(told.err.contains(&wanted), "{}", told.err);
    // A figure that this version needs is not there.
    let less = summary.replace(ours, "lodeshaft 0.0.1").replace("\"time_past_peak\"", "\"past\"");
    bench.write("old/summary.json", &less);
    let told = bench.run(&["compare", "small.yaml", "old"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    assert!(told.err.contains("`gears.coupling.time_past_peak` is missing"), "{}", told.err);
    assert!(told.err.contains("it was written by lodeshaft 0.0.1"), "{}", told.err);
    std::fs::remove_file(bench.path("old/scenario.yaml")).unwrap();
    let told = bench.run(&["compare", "small.yaml", "old"]);
    assert!(told.err.contains("there is no `scenario.yaml`"), "{}", told.err);
}

#[test]
fn a_comparison_does_not_replace_what_it_compares() {
    let bench = bench("compare_replace");
    bench.run(&["run", "small.yaml", "--out", "kept"]);
    let told = bench.run(&["compare", "kept", "small.yaml", "--out", "./kept"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    assert!(told.err.contains("would replace `kept`"), "{}", told.err);
    assert!(bench.path("kept/series.csv").exists());
    let told = bench.run(&["compare", "small.yaml"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    assert!(told.err.contains("there is only one run"), "{}", told.err);
    let told = bench.run(&["compare", "small.yaml", "nowhere.yaml"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    assert!(told.err.contains("no such file"), "{}", told.err);
}
