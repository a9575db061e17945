//! Runs a shipped scenario through the program and reads its summary.

use serde_json::Value;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::sync::atomic::{AtomicUsize, Ordering};

/// Number of folders made so far, so that tests in parallel never share one.
static FOLDERS: AtomicUsize = AtomicUsize::new(0);

/// Stems of all shipped scenarios, sorted.
pub fn all() -> Vec<String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let mut stems: Vec<String> = fs::read_dir(folder)
        .expect("the folder of the scenarios can be read")
        .map(|entry| entry.expect("an entry can be read").path())
        .filter(|path| path.extension().is_some_and(|ending| ending == "yaml"))
        .map(|path| path.file_stem().expect("a file has a stem").to_string_lossy().into_owned())
        .collect();
    stems.sort();
    stems
}

/// Path of a shipped scenario.
pub fn path_of(stem: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios").join(format!("{stem}.yaml"))
}

/// What the program found.
pub struct Found {
    /// Exit status.
    pub status: Option<i32>,
    summary: Value,
    stderr: String,
}

/// Runs a scenario with values set by path.
pub fn run(stem: &str, sets: &[&str]) -> Found {
    let mut arguments = vec!["--no-charts"];
    for set in sets {
        arguments.extend(["--set", set]);
    }
    let found = call("run", stem, &arguments);
    assert_eq!(found.value("completed"), true, "{stem} {sets:?}\n{}", found.stderr);
    found
}

/// Runs a study of a scenario.
pub fn study(stem: &str, name: &str) -> Found {
    call("study", stem, &[name])
}

fn call(command: &str, stem: &str, arguments: &[&str]) -> Found {
    let number = FOLDERS.fetch_add(1, Ordering::Relaxed);
    let name = format!("scenarios-{}-{number}", std::process::id());
    let out = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    let output = Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
        .arg(command)
        .arg(path_of(stem))
        .args(arguments)
        .arg("--out")
        .arg(&out)
        .args(["--quiet", "--format", "json"])
        .output()
        .expect("the program starts");
    // A folder left behind harms nobody; a failing test must show its own message.
    let _ = fs::remove_dir_all(&out);
    let stderr = String::from_utf8_lossy(&output.stderr).into_owned();
    let summary = serde_json::from_slice(&output.stdout)
        .unwrap_or_else(|fault| panic!("{command} {stem} {arguments:?}: {fault}\n{stderr}"));
    Found { status: output.status.code(), summary, stderr }
}

impl Found {
    /// A value by its keys, joined by `/`.
    pub fn value(&self, keys: &str) -> &Value {
        keys.split('/').fold(&self.summary, |value, key| {
            let inside = match key.parse::<usize>() {
                Ok(index) if value.is_array() => value.get(index),
                _ => value.get(key),
            };
            inside.unwrap_or_else(|| panic!("no {key} of {keys}\n{value:#}\n{}", self.stderr))
        })
    }

    /// A number by its keys.
    pub fn number(&self, keys: &str) -> f64 {
        self.value(keys).as_f64().unwrap_or_else(|| panic!("{keys} is {}", self.value(keys)))
    }

    /// All slips of a magnetic gear or coupling.
    pub fn slips(&self, gear: &str) -> u64 {
        self.value(&format!("gears/{gear}/slips")).as_u64().expect("slips are a whole number")
    }

    /// The state of a magnetic gear or coupling at the end.
    pub fn state(&self, gear: &str) -> &str {
        self.value(&format!("gears/{gear}/state_at_end")).as_str().expect("the state is a word")
    }

    /// The last value of a channel.
    pub fn last(&self, channel: &str) -> f64 {
        self.number(&format!("channels/{channel}/final"))
    }
}

/// Fails unless two numbers agree relative to the expected one.
#[track_caller]
pub fn same(found: f64, expected: f64, relative: f64) {
    let off = (found - expected).abs() / expected.abs();
    assert!(off <= relative, "found {found}, expected {expected}: off by {off:e} of it");
}
