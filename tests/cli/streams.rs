//! What goes to standard output and what to standard error.

use super::bench::{Bench, json};
use std::io::Write;
use std::process::Stdio;

#[test]
fn json_is_all_that_standard_output_holds() {
    let bench = Bench::new("json");
    for more in [&[][..], &["--quiet"]] {
        let told = bench.run(&[&["run", "small.yaml", "--format", "json"], more].concat());
        assert_eq!(told.status, Some(0));
        assert_eq!(told.out, bench.read("output/small/summary.json"));
        assert_eq!(json(&told.out)["output_folder"], "output/small");
        assert!(told.err.contains("warning: begins with a jolt"), "{}", told.err);
    }
}

#[test]
fn quiet_drops_the_summary_and_keeps_warnings_and_errors() {
    let bench = Bench::new("quiet");
    let told = bench.run(&["run", "small.yaml", "--quiet"]);
    assert_eq!((told.status, told.out.as_str()), (Some(0), ""));
    assert!(told.err.contains("warning: "), "{}", told.err);
    let told = bench.run(&["run", "nowhere.yaml", "--quiet"]);
    assert_eq!(told.status, Some(2));
    assert!(told.err.contains("error: "));
}

#[test]
fn a_dash_reads_standard_input() {
    let bench = Bench::new("stdin");
    let mut child = bench.command(&["run", "-"]).stdin(Stdio::piped()).spawn().unwrap();
    child.stdin.take().unwrap().write_all(super::bench::SMALL.as_bytes()).unwrap();
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0), "{output:?}");
    assert!(bench.path("output/standard_input/summary.json").exists());
    assert!(String::from_utf8(output.stderr).unwrap().contains("standard input"));
}

#[test]
fn a_reader_that_goes_away_is_no_fault() {
    let bench = Bench::new("pipe");
    let told = bench.run(&["schema"]);
    assert!(told.out.len() > 10_000, "longer than what is asked for below");
    let mut child = bench.command(&["schema"]).spawn().unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0), "{output:?}");
    assert!(output.stderr.is_empty(), "{output:?}");
}

#[cfg(target_os = "linux")]
#[test]
fn output_that_cannot_be_printed_ends_with_4() {
    let bench = Bench::new("full");
    let full = std::fs::OpenOptions::new().write(true).open("/dev/full").unwrap();
    let output = bench.command(&["run", "small.yaml"]).stdout(full).output().unwrap();
    assert_eq!(output.status.code(), Some(4), "{output:?}");
}

#[test]
fn no_colour_codes_where_nobody_watches() {
    let bench = Bench::new("plain");
    let told = bench.run(&["run", "small.yaml"]);
    assert!(!told.out.contains('\u{1b}') && !told.err.contains('\u{1b}'));
    assert!(!told.err.contains('\r'), "no progress line either");
}
