//! Exit statuses, arguments and what is written or left alone.
//!
//! Expected: the contract of the command line as the README documents it.

use super::helper::{Folder, call, head, run, run_well, run_with, same};

/// A wheel under a torque, with a requirement on its speed.
fn wheel(limit: &str) -> String {
    format!(
        "{}bodies:\n  wheel: {{ inertia: 2 kg*m2 }}\n\
         motors:\n  push: {{ body: wheel, law: {{ prescribed: {{ torque: 10 N*m }} }} }}\n\
         requirements:\n  slow: {{ of: wheel.speed, at_most: {limit} }}\n",
        head(1.0, 0.1, 1e-8),
    )
}

#[test]
fn status_tells_the_verdict() {
    assert_eq!(run(&wheel("6 rad/s")).status, Some(0));
    let missed = run(&wheel("4 rad/s"));
    assert_eq!(missed.status, Some(1));
    assert_eq!(missed.met("slow"), Some(false));
    same(missed.found("slow").unwrap(), 5.0, 1e-9);
    same(missed.number(&["requirements", "slow", "limit"]), 4.0, 1e-12);
    same(missed.number(&["requirements", "slow", "time"]), 1.0, 1e-9);
    // A run that ends early because it was told to is completed.
    assert!(missed.at(&["completed"]).as_bool().unwrap());
}

#[test]
fn status_tells_a_fault_of_the_file() {
    let good = wheel("6 rad/s");
    for (typed, faulty, said) in [
        ("inertia: 2 kg*m2", "inertia: -2 kg*m2", "inertia"),
        ("inertia: 2 kg*m2", "inertia: .nan", "inertia"),
        ("inertia: 2 kg*m2", "inertai: 2 kg*m2", "did you mean"),
        ("body: wheel", "body: whel", "did you mean"),
        ("duration: 1 s", "duration: 0 s", "duration"),
        ("wheel.speed", "wheel.spead", "did you mean"),
        ("lodeshaft: 1", "lodeshaft: 7", "lodeshaft"),
    ] {
        let bad = good.replace(typed, faulty);
        let outcome = run(&bad);
        assert_eq!(outcome.status, Some(2), "{faulty}\n{}", outcome.stderr);
        assert!(outcome.stderr.contains(said), "{faulty}\n{}", outcome.stderr);
        assert!(outcome.stderr.contains("case.yaml:"), "no place\n{}", outcome.stderr);
        assert!(outcome.stdout.is_empty(), "{}", outcome.stdout);
        assert!(!outcome.wrote_something(), "{faulty}");
        let checked = super::helper::check(&bad);
        assert_eq!(checked.status, Some(2), "{faulty}");
    }
}

#[test]
fn all_faults_of_a_file_come_at_once() {
    let bad = wheel("6 rad/s")
        .replace("inertia: 2 kg*m2", "inertia: 2 s")
        .replace("torque: 10 N*m", "torque: ten")
        .replace("at_most: 6 rad/s", "at_moost: 6 rad/s");
    let outcome = run(&bad);
    assert_eq!(outcome.status, Some(2));
    for path in ["bodies.wheel.inertia", "motors.push.law.prescribed.torque", "requirements.slow"] {
        assert!(outcome.stderr.contains(path), "{path}\n{}", outcome.stderr);
    }
}

#[test]
fn status_tells_a_fault_of_the_command() {
    for arguments in [
        &["run", "missing.yaml"][..],
        &["run"],
        &["fly", "case.yaml"],
        &["run", "case.yaml", "--set", "bodies.wheel.inertia"],
        &["run", "case.yaml", "--set", "bodies.whel.inertia=3"],
        &["run", "case.yaml", "--format", "xml"],
        &["check", "case.yaml", "missing.yaml"],
    ] {
        let folder = Folder::new();
        folder.write("case.yaml", &wheel("6 rad/s"));
        let outcome = call(folder, arguments, "");
        assert_eq!(outcome.status, Some(2), "{arguments:?}\n{}", outcome.stderr);
        assert!(!outcome.stderr.is_empty(), "{arguments:?} says nothing");
    }
}

#[test]
fn status_tells_that_the_numerics_gave_up() {
    // Fixed steps of 0.1 s on a spring of 1000 rad/s: the classical method multiplies the
    // error by (w h)^4/24 = 4e6 a step, so that the numbers overflow within 5 s.
    let scenario = "lodeshaft: 1\ntitle: Too coarse\nduration: 20 s\noutput_step: 0.5 s\nsolver: { method: rk4, step: 0.1 s }\n\
         bodies:\n  wheel: { inertia: 1 kg*m2, speed: 1 rad/s }\n\
         shafts:\n  spring: { between: [wheel, ground], stiffness: 1 MN*m/rad }\n\
         requirements:\n  slow: { of: wheel.speed, at_most: 6 rad/s }\n";
    let outcome = run(scenario);
    assert_eq!(outcome.status, Some(3), "{}", outcome.stderr);
    assert_eq!(outcome.at(&["completed"]).as_bool(), Some(false));
    let end = outcome.number(&["end_time"]);
    assert!(end > 0.0 && end < 10.0, "{end}");
    assert_eq!(outcome.met("slow"), None);
    // What was found up to then is written, and the message tells when it ended.
    let times = outcome.series().column("time");
    assert!(times.len() > 2 && times.iter().all(|time| *time <= end), "{times:?}");
    assert!(outcome.stderr.contains(" s"), "{}", outcome.stderr);
}

#[test]
fn a_brake_pressed_beyond_its_range_is_a_fault() {
    // No single signal shows it: two of 0.8 add to 1.6 at 2 s.
    let half = |at: f64| format!("{{ step: {{ at: {at} s, from: 0, to: 0.8 }} }}");
    let scenario = format!(
        "{}bodies:\n  wheel: {{ inertia: 100 kg*m2, speed: 30 rad/s }}\n\
         brakes:\n  stop: {{ body: wheel, torque: 5 N*m, applied: {{ sum: [{}, {}] }} }}\n",
        head(5.0, 0.5, 1e-8),
        half(1.0),
        half(2.0),
    );
    let outcome = run(&scenario);
    assert_eq!(outcome.status, Some(2), "{}", outcome.stderr);
    assert!(outcome.stderr.contains("brakes.stop.applied"), "{}", outcome.stderr);
}

#[test]
fn values_are_set_from_the_command_line() {
    let scenario = wheel("6 rad/s");
    let outcome = run_with(&scenario, &["--set", "bodies.wheel.inertia=4 kg*m2"]);
    assert_eq!(outcome.status, Some(0));
    same(outcome.channel("wheel.speed", "final"), 2.5, 1e-9);
    let arguments = [
        "--set",
        "motors.push.law.prescribed.torque=20 N*m",
        "--set",
        "requirements.slow.at_most=11 rad/s",
        "--set",
        "duration=500 ms",
    ];
    let outcome = run_with(&scenario, &arguments);
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    same(outcome.channel("wheel.speed", "final"), 5.0, 1e-9);
    // A path may name an absent optional key.
    let outcome = run_with(&scenario, &["--set", "motors.push.scale=0.5"]);
    same(outcome.channel("wheel.speed", "final"), 2.5, 1e-9);
}

#[test]
fn standard_input_is_a_scenario_too() {
    let arguments = ["run", "-", "--out", "out", "--no-charts", "--format", "json"];
    let outcome = call(Folder::new(), &arguments, &wheel("6 rad/s"));
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    same(outcome.channel("wheel.speed", "final"), 5.0, 1e-9);
    assert!(outcome.file("series.csv").starts_with("time [s],wheel.speed [rad/s]"));
}

#[test]
fn quiet_run_prints_nothing_but_keeps_its_files() {
    let folder = Folder::new();
    folder.write("case.yaml", &wheel("6 rad/s"));
    let outcome = call(folder, &["run", "case.yaml", "--out", "out", "--no-charts", "--quiet"], "");
    assert_eq!(outcome.status, Some(0));
    assert!(outcome.stdout.is_empty(), "{}", outcome.stdout);
    assert!(outcome.file("summary.json").contains("wheel.speed"));
}

#[test]
fn text_summary_names_the_verdict_and_the_folder() {
    let folder = Folder::new();
    folder.write("case.yaml", &wheel("4 rad/s"));
    let outcome = call(folder, &["run", "case.yaml", "--out", "out", "--no-charts"], "");
    assert_eq!(outcome.status, Some(1));
    for word in ["A case of the tests", "slow", "out"] {
        assert!(outcome.stdout.contains(word), "{word}\n{}", outcome.stdout);
    }
}

#[test]
fn results_replace_results_but_nothing_else() {
    let arguments = ["run", "case.yaml", "--out", "out", "--no-charts", "--format", "json"];
    let folder = run_well(&wheel("6 rad/s")).into_folder();
    folder.write("case.yaml", &wheel("7 rad/s"));
    let again = call(folder, &arguments, "");
    assert_eq!(again.status, Some(0), "{}", again.stderr);
    assert!(again.file("summary.json").contains("7"));
    // A folder with somebody's letters is refused and left as it is.
    let folder = Folder::new();
    folder.write("case.yaml", &wheel("6 rad/s"));
    std::fs::create_dir(folder.join("out")).unwrap();
    folder.write("out/letter.txt", "Dear aunt");
    let refused = call(folder, &arguments, "");
    assert!(matches!(refused.status, Some(2 | 4)), "{:?}", refused.status);
    assert_eq!(refused.file("letter.txt"), "Dear aunt");
    assert!(!refused.into_folder().join("out/series.csv").exists());
    // A place that cannot be made.
    let folder = Folder::new();
    folder.write("case.yaml", &wheel("6 rad/s"));
    folder.write("out", "a file stands here");
    let refused = call(folder, &arguments, "");
    assert!(matches!(refused.status, Some(2 | 4)), "{:?}", refused.status);
}

#[test]
fn check_accepts_good_files_and_tells_the_worst() {
    let folder = Folder::new();
    folder.write("good.yaml", &wheel("6 rad/s"));
    folder.write("bad.yaml", &wheel("6 furlongs"));
    let outcome = call(folder, &["check", "good.yaml"], "");
    assert_eq!(outcome.status, Some(0), "{}", outcome.stderr);
    let outcome = call(outcome.into_folder(), &["check", "good.yaml", "bad.yaml"], "");
    assert_eq!(outcome.status, Some(2));
    assert!(outcome.stderr.contains("bad.yaml:"), "{}", outcome.stderr);
    assert!(!outcome.wrote_something());
}
