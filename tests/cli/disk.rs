//! Disks that are full or read-only, readers that go away, and Ctrl-C in a report.
#![cfg(unix)]

use super::bench::{Bench, SMALL, Told, json, names};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

/// Runs the program in a shell that allows files of so many blocks only; what is written beyond
/// fails as on a full disk. The signal that would end the program is switched off.
fn with_small_files(bench: &Bench, blocks: u32, arguments: &[&str]) -> Told {
    let program = env!("CARGO_BIN_EXE_lodeshaft");
    let words = format!("trap '' XFSZ; ulimit -f {blocks}; exec '{program}' \"$@\"");
    let mut command = Command::new("sh");
    command.args(["-c", &words, "sh"]).args(arguments).current_dir(&bench.folder);
    Told::from(command.stdin(Stdio::null()).output().unwrap())
}

#[test]
fn a_disk_that_is_full_ends_with_4_and_keeps_the_old_result() {
    let bench = Bench::new("full_disk");
    // 20 000 rows are more than 64 blocks, which are 32 or 64 kB by shell.
    let arguments = ["run", "small.yaml", "--set", "output_step=0.01 ms"];
    for old in [false, true] {
        if old {
            assert_eq!(bench.run(&["run", "small.yaml"]).status, Some(0));
        }
        let told = with_small_files(&bench, 64, &arguments);
        assert_eq!(told.status, Some(4), "{told:?}");
        assert!(told.err.contains("error: cannot write"), "{}", told.err);
        assert!(told.out.is_empty(), "no verdict of a result that is not there: {}", told.out);
        let left = names(&bench.path("output"));
        assert_eq!(left, if old { vec!["small"] } else { vec![] }, "no hidden rest");
        if old {
            let summary = json(&bench.read("output/small/summary.json"));
            assert_eq!(summary["completed"], true);
        }
    }
    assert_eq!(bench.run(&arguments).status, Some(0), "with room it works");
}

#[test]
fn a_study_on_a_full_disk_ends_with_4_and_goes_on_later() {
    let bench = Bench::new("full_study");
    let study = "studies:\n  drawn: { monte_carlo: { draws: 800, seed: 4, spread: { magnetic_couplings.coupling.pull_out: { normal: { relative: 5 % } } } } }\n";
    bench.write("drawn.yaml", &format!("{}{study}", SMALL.replace("0.2 s", "0.02 s")));
    let told = with_small_files(&bench, 16, &["study", "drawn.yaml", "--quiet"]);
    assert_eq!(told.status, Some(4), "{told:?}");
    assert!(told.err.contains("--resume"), "{}", told.err);
    let told = bench.run(&["study", "drawn.yaml", "--quiet", "--resume"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    let told = bench.run(&["study", "drawn.yaml", "--quiet", "--out", "whole"]);
    assert_eq!(told.status, Some(0), "{told:?}");
    for name in ["drawn.csv", "drawn.json"] {
        let resumed = bench.read(&format!("output/drawn/studies/{name}"));
        assert_eq!(resumed, bench.read(&format!("whole/studies/{name}")), "{name}");
    }
}

#[test]
fn a_folder_that_may_not_be_written_ends_with_4() {
    use std::os::unix::fs::PermissionsExt;
    let bench = Bench::new("read_only");
    std::fs::create_dir(bench.path("closed")).unwrap();
    let mode = |mode: u32| {
        let rights = std::fs::Permissions::from_mode(mode);
        std::fs::set_permissions(bench.path("closed"), rights).unwrap();
    };
    mode(0o555);
    // The superuser may write everywhere: then the kernel's own files stand for it.
    let open = std::fs::write(bench.path("closed/probe"), "").is_ok();
    let out = if open { "/proc/sys/results" } else { "closed/results" };
    for command in ["run", "report"] {
        let told = bench.run(&[command, "small.yaml", "--out", out]);
        assert_eq!(told.status, Some(4), "{command}: {told:?}");
        assert!(told.err.contains("error: cannot write"), "{}", told.err);
        assert!(told.out.is_empty());
    }
    mode(0o755);
}

#[test]
fn a_reader_of_one_line_is_no_fault() {
    let bench = Bench::new("one_line");
    let program = env!("CARGO_BIN_EXE_lodeshaft");
    for arguments in ["schema", "check small.yaml", "run small.yaml", "poles --ratio 5.5"] {
        let words = format!("{{ '{program}' {arguments}; echo $? > status; }} | head -n 1");
        let mut command = Command::new("sh");
        let told = command.args(["-c", &words]).current_dir(&bench.folder).output().unwrap();
        assert_eq!(String::from_utf8_lossy(&told.stdout).lines().count(), 1, "{arguments}");
        assert_eq!(bench.read("status").trim(), "0", "{arguments}: {told:?}");
        let said = String::from_utf8_lossy(&told.stderr).into_owned();
        assert!(!said.contains("panicked") && !said.contains("error"), "{said}");
    }
}

#[test]
fn an_interrupted_report_ends_with_130_and_leaves_no_rest() {
    let bench = Bench::new("report_interrupted");
    let study = "studies:\n  drawn: { monte_carlo: { draws: 100000, seed: 4, spread: { magnetic_couplings.coupling.pull_out: { normal: { relative: 5 % } } } } }\n";
    bench.write("drawn.yaml", &format!("{SMALL}{study}"));
    let child = bench.command(&["report", "drawn.yaml", "--quiet"]).spawn().unwrap();
    let begun = Instant::now();
    // Under way once its hidden folder holds studies.
    let working = || {
        names(&bench.path("output"))
            .iter()
            .any(|name| bench.path("output").join(name).join("studies").exists())
    };
    while !working() {
        assert!(begun.elapsed() < Duration::from_secs(60), "the report did not begin its studies");
        std::thread::sleep(Duration::from_millis(10));
    }
    let id = child.id().to_string();
    assert!(Command::new("kill").args(["-INT", &id]).status().unwrap().success());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(130), "{output:?}");
    assert_eq!(names(&bench.path("output")), ["drawn"], "no hidden rest");
    let page = bench.read("output/drawn/report.html");
    assert!(page.trim_end().ends_with("</html>"));
}
