//! The files of a run: columns, rows, numbers, and the same bytes every time.
//!
//! Expected: the contract of the results as the README documents it.

use super::helper::{Outcome, head, near, run_through, run_well, run_with, same};
use serde_json::Value;

/// A train with one of each: gear, coupling, shafts, motor, loads, brake.
fn train() -> String {
    format!(
        "{}bodies:\n  motor_rotor: {{ inertia: 0.25 kg*m2, speed: 0 rpm }}\n  inner_rotor: {{ inertia: 0.02 kg*m2 }}\n  \
         outer_rotor: {{ inertia: 0.15 kg*m2 }}\n  impeller: {{ inertia: 2.5 kg*m2 }}\n\
         shafts:\n  motor_shaft: {{ between: [motor_rotor, inner_rotor], stiffness: 20 kN*m/rad, damping: 2 N*m*s/rad }}\n  \
         pump_shaft: {{ between: [outer_rotor, impeller], stiffness: 50 kN*m/rad, damping: 5 N*m*s/rad }}\n\
         magnetic_gears:\n  gear:\n    inner: inner_rotor\n    modulator: ground\n    outer: outer_rotor\n    \
         pole_pairs: {{ inner: 4, outer: 22 }}\n    pull_out: {{ at: outer, torque: 1500 N*m }}\n    \
         damping: {{ at: outer, coefficient: 24.2 N*m*s/rad }}\n\
         motors:\n  line_motor: {{ body: motor_rotor, law: {{ induction: {{ synchronous_speed: 1500 rpm, \
         breakdown_torque: 400 N*m, breakdown_slip: 20 %, voltage: 1 }} }} }}\n\
         loads:\n  pump: {{ body: impeller, law: {{ power_law: {{ torque: 700 N*m, speed: 267 rpm, exponent: 2 }} }} }}\n\
         brakes:\n  holding: {{ body: impeller, torque: 100 N*m, applied: {{ step: {{ at: 0.2 s, from: 1, to: 0 }} }} }}\n\
         requirements:\n  no_slip: {{ of: gear.slips, at_most: 0 }}\n",
        head(0.55, 0.02, 1e-7),
    )
}

#[test]
fn columns_follow_the_file() {
    let outcome = run_through(&train());
    let expected = [
        "time [s]",
        "motor_rotor.speed [rad/s]",
        "motor_rotor.angle [rad]",
        "inner_rotor.speed [rad/s]",
        "inner_rotor.angle [rad]",
        "outer_rotor.speed [rad/s]",
        "outer_rotor.angle [rad]",
        "impeller.speed [rad/s]",
        "impeller.angle [rad]",
        "motor_shaft.torque [N*m]",
        "motor_shaft.twist [rad]",
        "pump_shaft.torque [N*m]",
        "pump_shaft.twist [rad]",
        "gear.load_angle [rad]",
        "gear.phase [rad]",
        "gear.slips [1]",
        "gear.net_slips [1]",
        "gear.pull_out_share [1]",
        "gear.short_of_peak [1]",
        "gear.slip_speed [rad/s]",
        "gear.loss [W]",
        "gear.torque_inner [N*m]",
        "gear.torque_outer [N*m]",
        "gear.torque_modulator [N*m]",
        "line_motor.torque [N*m]",
        "line_motor.power [W]",
        "pump.torque [N*m]",
        "pump.power [W]",
        "holding.torque [N*m]",
        "holding.power [W]",
    ];
    assert_eq!(outcome.series().heads, expected);
    // Every channel has its extremes in the summary.
    let channels = outcome.at(&["channels"]);
    let channels = channels.as_object().unwrap();
    for head in &expected[1..] {
        let (name, unit) = head.trim_end_matches(']').split_once(" [").unwrap();
        assert_eq!(channels[name]["unit"], unit, "{name}");
    }
    assert_eq!(channels.len(), expected.len() - 1);
}

#[test]
fn rows_stand_at_each_step_and_at_the_end() {
    let outcome = run_through(&train());
    let series = outcome.series();
    let times = series.column("time");
    // 0, 0.02 ... 0.54, and the end at 0.55.
    assert_eq!(times.len(), 29);
    for (row, time) in times.iter().enumerate() {
        let expected = (0.02 * f64::from(u32::try_from(row).unwrap())).min(0.55);
        near(*time, expected, 1e-12);
    }
    same(outcome.number(&["end_time"]), 0.55, 1e-12);
    // The last row is the final value; extremes of the summary hold all rows between them.
    for head in &series.heads[1..] {
        let name = head.split(" [").next().unwrap();
        let column = series.column(name);
        let span = outcome.channel(name, "max") - outcome.channel(name, "min");
        near(*column.last().unwrap(), outcome.channel(name, "final"), 1e-9 * span.max(1e-6));
        for value in column {
            assert!(value <= outcome.channel(name, "max") + 1e-9 * span, "{name}");
            assert!(value >= outcome.channel(name, "min") - 1e-9 * span, "{name}");
        }
    }
    // A run whose length is a whole number of steps has no double row at the end.
    let even = train().replace("duration: 0.55 s", "duration: 0.5 s");
    assert_eq!(run_through(&even).series().rows.len(), 26);
}

#[test]
fn default_step_is_a_two_thousandth_of_the_run() {
    let scenario =
        train().replace("output_step: 0.02 s\n", "").replace("duration: 0.55 s", "duration: 0.2 s");
    let series = run_through(&scenario).series();
    assert_eq!(series.rows.len(), 2001);
    near(series.rows[1][0], 0.0001, 1e-15);
}

/// Every number of a JSON tree.
fn numbers(value: &Value, found: &mut Vec<f64>) {
    match value {
        Value::Number(number) => found.push(number.as_f64().unwrap()),
        Value::Array(list) => list.iter().for_each(|entry| numbers(entry, found)),
        Value::Object(map) => map.values().for_each(|entry| numbers(entry, found)),
        _ => {}
    }
}

#[test]
fn numbers_are_finite_and_read_back_exactly() {
    let outcome = run_through(&train());
    let mut all = Vec::new();
    numbers(&outcome.summary(), &mut all);
    assert!(all.len() > 100 && all.iter().all(|number| number.is_finite()));
    for file in ["summary.json", "series.csv", "events.csv"] {
        let text = outcome.file(file);
        for word in ["NaN", "nan", "inf", "Infinity"] {
            assert!(!text.contains(word), "{word} in {file}");
        }
    }
    // The fewest digits that read back exactly: no field has more than Rust's shortest form,
    // which has that property by definition of its formatting.
    for field in outcome.file("series.csv").lines().skip(1).flat_map(|line| line.split(',')) {
        let number: f64 = field.parse().unwrap();
        assert!(digits(field) <= digits(&format!("{number:e}")), "{field}");
    }
}

/// Number of significant digits of a decimal number.
fn digits(field: &str) -> usize {
    let mantissa: String =
        field.chars().take_while(|c| *c != 'e' && *c != 'E').filter(char::is_ascii_digit).collect();
    let whole = mantissa.trim_start_matches('0');
    if field.contains('.') { whole.len().max(1) } else { whole.trim_end_matches('0').len().max(1) }
}

#[test]
fn summary_on_stdout_is_the_file() {
    let outcome = run_through(&train());
    let file: Value = serde_json::from_str(&outcome.file("summary.json")).unwrap();
    assert_eq!(outcome.summary(), file);
    for key in [
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
    ] {
        assert!(file.get(key).is_some(), "{key}");
    }
    let gear = &file["gears"]["gear"];
    for key in [
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
    ] {
        assert!(gear.get(key).is_some(), "{key}");
    }
    same(gear["ratio"].as_f64().unwrap(), -5.5, 1e-12);
    for key in ["method", "steps", "rejected", "evaluations", "events"] {
        assert!(file["solver"].get(key).is_some(), "{key}");
    }
}

/// All files of a run.
fn bytes(outcome: &Outcome) -> Vec<String> {
    ["summary.json", "series.csv", "events.csv"].map(|file| outcome.file(file)).to_vec()
}

#[test]
fn same_scenario_gives_the_same_bytes() {
    let first = bytes(&run_through(&train()));
    assert_eq!(first, bytes(&run_through(&train())));
    for threads in ["1", "2"] {
        let outcome = run_with(&train(), &["--threads", threads]);
        assert!(first == bytes(&outcome), "--threads {threads} changes the result");
    }
}

#[test]
fn events_come_in_order_of_time() {
    // Pull-out of 100 N*m at the outer rotor cannot hold this start.
    let scenario = train().replace("torque: 1500 N*m", "torque: 100 N*m");
    let outcome = run_through(&scenario);
    assert_eq!(outcome.status, Some(1));
    let events = outcome.events();
    assert!(events.windows(2).all(|pair| pair[0].time <= pair[1].time));
    let kinds = [
        "slip",
        "past_peak",
        "short_of_peak",
        "resynchronised",
        "stuck",
        "sliding",
        "contact",
        "gap",
        "protection",
        "requirement",
    ];
    assert!(events.iter().all(|event| kinds.contains(&event.kind.as_str())));
    let slips = outcome.times("slip", "gear");
    assert_eq!(slips.len() as u64, outcome.slips("gear"));
    assert_eq!(slips, outcome.slip_times("gear"));
    // It leaves the interval between the peaks before it slips.
    assert!(outcome.times("past_peak", "gear")[0] < slips[0]);
    let counted = outcome.series().column("gear.slips");
    same(*counted.last().unwrap(), slips.len() as f64, 1e-12);
}

#[test]
fn a_run_without_anything_to_compare_is_well() {
    let scenario =
        train().replace("requirements:\n  no_slip: { of: gear.slips, at_most: 0 }\n", "");
    let outcome = run_well(&scenario);
    assert!(outcome.at(&["requirements"]).as_object().unwrap().is_empty());
}
