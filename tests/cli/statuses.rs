//! Exit statuses and what is told with them.

use super::bench::{Bench, json, names};

#[test]
fn a_run_that_meets_its_requirements_ends_with_0_and_writes_its_folder() {
    let bench = Bench::new("met");
    let told = bench.run(&["run", "small.yaml"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    assert!(told.out.contains("MET: the requirement"), "{}", told.out);
    assert!(told.out.contains("output/small"), "names its folder: {}", told.out);
    let files = names(&bench.path("output/small"));
    for file in ["summary.json", "series.csv", "events.csv"] {
        assert!(files.iter().any(|name| name == file), "{files:?}");
    }
    let summary = json(&bench.read("output/small/summary.json"));
    assert_eq!(summary["completed"], true);
    assert_eq!(summary["end_time"], 0.2);
    assert_eq!(summary["gears"]["coupling"]["slips"], 0);
    assert_eq!(summary["gears"]["coupling"]["ratio"], 1.0);
    assert_eq!(summary["requirements"]["no_slip"]["met"], true);
    let series = bench.read("output/small/series.csv");
    let lines: Vec<&str> = series.lines().collect();
    assert!(lines[0].starts_with("time [s],driver.speed [rad/s],driver.angle [rad],"));
    assert_eq!(lines.len(), 202, "head, 0 s, and each of 200 steps");
    assert!(lines[200].starts_with("0.199,"), "{}", lines[200]);
}

#[test]
fn a_requirement_that_is_not_met_ends_with_1() {
    let bench = Bench::new("not_met");
    let strong = "motors.motor.law.prescribed.torque=2000 N*m";
    let told = bench.run(&["run", "small.yaml", "--set", strong]);
    assert_eq!(told.status, Some(1), "{told:?}");
    assert!(told.out.contains("NOT MET: 1 of 1"), "{}", told.out);
    let summary = json(&bench.read("output/small/summary.json"));
    assert_eq!(summary["requirements"]["no_slip"]["met"], false);
    assert_eq!(summary["set"]["motors.motor.law.prescribed.torque"], "2000 N*m");
}

#[test]
fn a_faulty_or_missing_file_ends_with_2_and_writes_nothing() {
    let bench = Bench::new("fault");
    let told = bench.run(&["run", "nowhere.yaml"]);
    assert_eq!(told.status, Some(2));
    assert!(
        told.err.starts_with("error: cannot read `nowhere.yaml`: no such file"),
        "{}",
        told.err
    );
    bench.write("bad.yaml", &super::bench::SMALL.replace("inertia: 0.2 kg*m2", "inertia: 0.2 kg"));
    let told = bench.run(&["run", "bad.yaml"]);
    assert_eq!(told.status, Some(2));
    assert!(told.err.contains("  --> bad.yaml:7:22  (bodies.driven.inertia)"), "{}", told.err);
    assert!(told.out.is_empty());
    // A fault that only the train as a whole shows.
    let locked = "shafts:\n  lock: { between: [driver, ground], rigid: true }\n";
    bench.write("locked.yaml", &format!("{}{locked}", super::bench::SMALL));
    let told = bench.run(&["run", "locked.yaml", "--set", "bodies.driver.speed=5 rad/s"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    assert!(!bench.path("output").exists(), "nothing is written");
}

#[test]
fn a_steady_start_without_balance_is_a_fault_of_the_file() {
    let bench = Bench::new("no_balance");
    let told = bench.run(&["run", "small.yaml", "--set", "start=steady"]);
    assert_eq!(told.status, Some(2), "{told:?}");
    assert!(told.err.contains("(start)"), "{}", told.err);
    assert!(!bench.path("output").exists(), "nothing is written");
}

#[test]
fn a_wrong_command_line_ends_with_2() {
    let bench = Bench::new("usage");
    for arguments in [
        &["run"][..],
        &["walk"],
        &["run", "small.yaml", "--set", "duration"],
        &["run", "small.yaml", "--format", "xml"],
        &["run", "small.yaml", "--threads", "0"],
    ] {
        let told = bench.run(arguments);
        assert_eq!(told.status, Some(2), "{arguments:?}: {told:?}");
        assert!(told.err.contains("error"), "{arguments:?}: {}", told.err);
    }
    let told = bench.run(&["run", "small.yaml", "--set", "bodies.drivr.inertia=1"]);
    assert_eq!(told.status, Some(2));
    assert!(told.err.contains("did you mean `driver`?"), "{}", told.err);
}

#[test]
fn numerics_that_give_up_end_with_3_and_keep_what_was_found() {
    let bench = Bench::new("gave_up");
    // (1/0.001)^1000 is beyond the largest double, 1.8e308: the load is not a number at once.
    let wall = "\
loads:
  wall:
    body: driven
    law: { power_law: { torque: 1 N*m, speed: 0.001 rad/s, exponent: 1000 } }
";
    bench.write("wall.yaml", &format!("{}{wall}", super::bench::SMALL));
    let told = bench.run(&["run", "wall.yaml", "--set", "bodies.driven.speed=1 rad/s"]);
    assert_eq!(told.status, Some(3), "{told:?}");
    let summary = json(&bench.read("output/wall/summary.json"));
    assert_eq!(summary["completed"], false);
    assert!(summary["requirements"]["no_slip"]["met"].is_null());
    assert!(told.err.contains("the speed of `driven`"), "names the state: {}", told.err);
    assert!(told.out.contains("NOT JUDGED: 1 of 1"), "{}", told.out);
}

#[test]
fn check_ends_with_the_worst_of_all_files() {
    let bench = Bench::new("check");
    bench.write("bad.yaml", "lodeshaft: 1\n");
    assert_eq!(bench.run(&["check", "small.yaml"]).status, Some(0));
    let told = bench.run(&["check", "bad.yaml", "small.yaml"]);
    assert_eq!(told.status, Some(2));
    assert!(told.out.contains("Magnetic coupling `coupling`"), "the good one is shown");
    assert!(!bench.path("output").exists(), "runs nothing");
}

/// Keys that a summary must hold, in this order; more may stand between them.
#[test]
fn a_summary_holds_the_promised_keys_in_order() {
    let bench = Bench::new("keys");
    let summary = json(&bench.run(&["run", "small.yaml", "--format", "json"]).out);
    let in_order = |value: &serde_json::Value, promised: &[&str]| {
        let keys: Vec<&String> = value.as_object().unwrap().keys().collect();
        let places: Vec<Option<usize>> =
            promised.iter().map(|key| keys.iter().position(|known| known == key)).collect();
        assert!(places.iter().all(Option::is_some), "{promised:?} {keys:?}");
        assert!(places.is_sorted(), "{promised:?} {keys:?}");
    };
    in_order(
        &summary,
        &[
            "title",
            "completed",
            "end_time",
            "gears",
            "channels",
            "requirements",
            "energy",
            "motors",
            "warnings",
            "solver",
        ],
    );
    in_order(
        &summary["gears"]["coupling"],
        &[
            "slips",
            "net_slips",
            "state_at_end",
            "resynchronised_at",
            "peak_pull_out_share",
            "peak_pull_out_share_time",
            "peak_load_angle",
            "peak_load_angle_time",
            "final_load_angle",
            "ratio",
            "slip_events",
        ],
    );
    in_order(
        &summary["channels"]["driver.speed"],
        &["unit", "min", "min_time", "max", "max_time", "final"],
    );
    in_order(
        &summary["requirements"]["no_slip"],
        &["text", "met", "value", "limit", "unit", "time"],
    );
    in_order(
        &summary["energy"],
        &["supplied", "absorbed", "lost", "stored_change", "residual_share"],
    );
    in_order(&summary["solver"], &["method", "steps", "rejected", "evaluations", "events"]);
    in_order(&summary["warnings"][0], &["path", "text"]);
}
