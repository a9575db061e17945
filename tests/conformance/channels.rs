//! Each train runs; its channels have their units and finite values, its energy adds up.
//!
//! Expected units are those of the documentation; the first law gives the energy.

use super::program::{call, none, run};
use super::trees::trains;
use serde_json::Value;

/// Unit of a channel by the part of its name behind the dot, as documented.
const UNITS: [(&str, &[&str]); 8] = [
    ("rad/s", &["speed", "slip_speed"]),
    ("rad", &["angle", "twist", "load_angle", "phase", "pitch"]),
    (
        "N*m",
        &[
            "torque",
            "torque_a",
            "torque_b",
            "torque_inner",
            "torque_outer",
            "torque_modulator",
            "torque_sun",
            "torque_carrier",
            "torque_ring",
        ],
    ),
    ("W", &["power", "loss", "hysteresis_loss", "eddy_loss"]),
    (
        "degC",
        &[
            "magnet_temperature",
            "magnet_temperature_inner",
            "magnet_temperature_outer",
            "magnet_temperature_a",
            "magnet_temperature_b",
        ],
    ),
    ("m/s", &["flow"]),
    ("A", &["current"]),
    (
        "1",
        &[
            "slips",
            "net_slips",
            "pull_out_share",
            "short_of_peak",
            "tip_speed_ratio",
            "power_coefficient",
            "advance_ratio",
        ],
    ),
];

/// Largest share of energy that the audit may miss.
const RESIDUAL: f64 = 1e-6;

fn unit_of(channel: &str) -> Option<&'static str> {
    let quantity = channel.rsplit_once('.')?.1;
    UNITS.iter().find(|(_, names)| names.contains(&quantity)).map(|(unit, _)| *unit)
}

#[test]
fn every_train_is_accepted_by_check() {
    let mut wrong = Vec::new();
    for train in trains() {
        let call = call(&train.tree, &["check", "case.yaml"]);
        if call.status != Some(0) {
            wrong.push(format!("{}: status {:?}\n{}", train.name, call.status, call.stderr));
        }
    }
    none(&wrong);
}

#[test]
fn every_train_runs_with_finite_values_in_documented_units_and_keeps_its_energy() {
    let mut wrong = Vec::new();
    for train in trains() {
        let call = run(&train.tree);
        if call.status != Some(0) {
            wrong.push(format!("{}: status {:?}\n{}", train.name, call.status, call.stderr));
            continue;
        }
        let summary: Value = serde_json::from_str(&call.stdout).unwrap();
        let mut tell = |text: String| wrong.push(format!("{}: {text}", train.name));
        if summary["completed"] != true {
            tell("not completed".to_owned());
        }
        match summary["energy"]["residual_share"].as_f64() {
            Some(share) if share < RESIDUAL => {}
            other => tell(format!("the energy misses {other:?}")),
        }
        let channels = summary["channels"].as_object().unwrap();
        for (name, channel) in channels {
            match unit_of(name) {
                None => tell(format!("{name} has no unit in tests/conformance/channels.rs")),
                Some(unit) if channel["unit"] == unit => {}
                Some(unit) => tell(format!("{name} is in {}, not {unit}", channel["unit"])),
            }
            for figure in ["min", "max", "final", "min_time", "max_time"] {
                if channel[figure].as_f64().is_none() {
                    tell(format!("{name} has no {figure}"));
                }
            }
        }
        for fault in series_faults(&call.file("series.csv"), channels.len()) {
            tell(fault);
        }
    }
    none(&wrong);
}

/// What is wrong with a series: heads, units and values.
fn series_faults(text: &str, channels: usize) -> Vec<String> {
    let mut faults = Vec::new();
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    let heads: Vec<String> = reader.headers().unwrap().iter().map(str::to_owned).collect();
    if heads.len() != channels + 1 || heads[0] != "time [s]" {
        faults.push(format!("the series begins with {} and has {} columns", heads[0], heads.len()));
    }
    for head in heads.iter().skip(1) {
        let (name, unit) = head.trim_end_matches(']').split_once(" [").unwrap();
        if unit_of(name) != Some(unit) {
            faults.push(format!("the column {head} is not in its unit"));
        }
    }
    let mut rows = 0;
    for row in reader.records().map(Result::unwrap) {
        rows += 1;
        for (head, field) in heads.iter().zip(&row) {
            if !field.parse::<f64>().is_ok_and(f64::is_finite) {
                faults.push(format!("{head} holds `{field}`"));
            }
        }
    }
    if rows < 20 {
        faults.push(format!("only {rows} rows"));
    }
    faults
}
