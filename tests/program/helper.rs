//! Runs the program on a scenario written by a test and reads its files back.

use serde_json::Value;
use std::fs;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::sync::atomic::{AtomicUsize, Ordering};

/// Number of folders made so far, so that tests in parallel never share one.
static FOLDERS: AtomicUsize = AtomicUsize::new(0);

/// A folder of its own for one test, gone when dropped.
pub struct Folder {
    path: PathBuf,
}

impl Folder {
    /// Makes an empty folder below cargo's folder for tests.
    pub fn new() -> Self {
        let number = FOLDERS.fetch_add(1, Ordering::Relaxed);
        let name = format!("program-{}-{number}", std::process::id());
        let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
        fs::create_dir_all(&path).expect("a folder for the test can be made");
        Self { path }
    }

    /// Path of an entry.
    pub fn join(&self, name: &str) -> PathBuf {
        self.path.join(name)
    }

    /// Writes a file and returns its path.
    pub fn write(&self, name: &str, text: &str) -> PathBuf {
        let path = self.path.join(name);
        fs::write(&path, text).expect("the test's file can be written");
        path
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        // A folder left behind harms nobody; a failing test must show its own message.
        let _ = fs::remove_dir_all(&self.path);
    }
}

/// What the program left behind.
pub struct Outcome {
    /// Exit status; `None` when a signal ended it.
    pub status: Option<i32>,
    /// Standard output.
    pub stdout: String,
    /// Standard error.
    pub stderr: String,
    folder: Folder,
}

/// Calls the program with any arguments in a folder.
pub fn call(folder: Folder, arguments: &[&str], input: &str) -> Outcome {
    let mut child = Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
        .args(arguments)
        .current_dir(&folder.path)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    // A program that refuses its arguments may close its input early.
    let _ = child.stdin.take().expect("the input is piped").write_all(input.as_bytes());
    let output = child.wait_with_output().expect("the program ends");
    Outcome {
        status: output.status.code(),
        stdout: String::from_utf8(output.stdout).expect("standard output is UTF-8"),
        stderr: String::from_utf8(output.stderr).expect("standard error is UTF-8"),
        folder,
    }
}

/// Runs a scenario: results in `out` below the test's folder, summary as JSON on stdout.
pub fn run(scenario: &str) -> Outcome {
    run_with(scenario, &[])
}

/// Runs a scenario with further arguments.
pub fn run_with(scenario: &str, arguments: &[&str]) -> Outcome {
    let folder = Folder::new();
    folder.write("case.yaml", scenario);
    let mut all = vec!["run", "case.yaml", "--out", "out", "--no-charts", "--format", "json"];
    all.extend(arguments);
    call(folder, &all, "")
}

/// Runs a scenario that must be completed with every requirement met.
pub fn run_well(scenario: &str) -> Outcome {
    let outcome = run(scenario);
    assert_eq!(outcome.status, Some(0), "\n{}\n{}", scenario, outcome.stderr);
    outcome
}

/// Runs a scenario that must be completed, whatever its verdicts.
pub fn run_through(scenario: &str) -> Outcome {
    let outcome = run(scenario);
    let done = matches!(outcome.status, Some(0 | 1));
    assert!(done, "status {:?}\n{}\n{}", outcome.status, scenario, outcome.stderr);
    outcome
}

/// Checks a scenario without running it.
pub fn check(scenario: &str) -> Outcome {
    let folder = Folder::new();
    folder.write("case.yaml", scenario);
    call(folder, &["check", "case.yaml"], "")
}

impl Outcome {
    /// The summary that was printed.
    pub fn summary(&self) -> Value {
        serde_json::from_str(&self.stdout)
            .unwrap_or_else(|fault| panic!("{fault}\n{}\n{}", self.stdout, self.stderr))
    }

    /// A value of the summary by its keys.
    pub fn at(&self, keys: &[&str]) -> Value {
        let mut value = &self.summary();
        for key in keys {
            value = value
                .get(key)
                .unwrap_or_else(|| panic!("no {key} of {keys:?} in\n{value:#}\n{}", self.stderr));
        }
        value.clone()
    }

    /// A number of the summary by its keys.
    pub fn number(&self, keys: &[&str]) -> f64 {
        let value = self.at(keys);
        value.as_f64().unwrap_or_else(|| panic!("{keys:?} is {value}"))
    }

    /// A figure of a channel: `min`, `min_time`, `max`, `max_time` or `final`.
    pub fn channel(&self, name: &str, figure: &str) -> f64 {
        self.number(&["channels", name, figure])
    }

    /// All slips of a magnetic gear or coupling.
    pub fn slips(&self, gear: &str) -> u64 {
        self.at(&["gears", gear, "slips"]).as_u64().expect("slips are a whole number")
    }

    /// The state of a magnetic gear or coupling at the end.
    pub fn state(&self, gear: &str) -> String {
        self.at(&["gears", gear, "state_at_end"]).as_str().expect("the state is a word").to_owned()
    }

    /// Times of the slips.
    pub fn slip_times(&self, gear: &str) -> Vec<f64> {
        let events = self.at(&["gears", gear, "slip_events"]);
        let events = events.as_array().expect("slip events are a list");
        events.iter().map(|slip| slip["time"].as_f64().expect("a slip has a time")).collect()
    }

    /// Whether a requirement is met; `None` for null.
    pub fn met(&self, requirement: &str) -> Option<bool> {
        self.at(&["requirements", requirement, "met"]).as_bool()
    }

    /// What a requirement found; `None` for null.
    pub fn found(&self, requirement: &str) -> Option<f64> {
        self.at(&["requirements", requirement, "value"]).as_f64()
    }

    /// Text of a file in the results.
    pub fn file(&self, name: &str) -> String {
        let path = self.folder.join("out").join(name);
        fs::read_to_string(&path).unwrap_or_else(|fault| panic!("{name}: {fault}\n{}", self.stderr))
    }

    /// Whether anything was written to the folder of results.
    pub fn wrote_something(&self) -> bool {
        self.folder.join("out").exists()
    }

    /// The folder, to go on with.
    pub fn into_folder(self) -> Folder {
        self.folder
    }

    /// The time series.
    pub fn series(&self) -> Series {
        Series::read(&self.file("series.csv"))
    }

    /// Rows of events.csv.
    pub fn events(&self) -> Vec<EventRow> {
        let text = self.file("events.csv");
        let mut reader = csv::Reader::from_reader(text.as_bytes());
        let head: Vec<String> =
            reader.headers().expect("events have a head").iter().map(str::to_owned).collect();
        assert_eq!(head, ["time [s]", "kind", "of", "value", "unit", "text"]);
        reader
            .records()
            .map(|row| row.expect("events.csv is well formed"))
            .map(|row| EventRow {
                time: row[0].parse().expect("an event has a time"),
                kind: row[1].to_owned(),
                of: row[2].to_owned(),
            })
            .collect()
    }

    /// Times of the events of one kind at one thing.
    pub fn times(&self, kind: &str, of: &str) -> Vec<f64> {
        let events = self.events().into_iter();
        events
            .filter(|event| event.kind == kind && event.of == of)
            .map(|event| event.time)
            .collect()
    }
}

/// A row of events.csv.
pub struct EventRow {
    /// s.
    pub time: f64,
    /// The word for what happened.
    pub kind: String,
    /// The thing it happened to.
    pub of: String,
}

/// series.csv by columns.
pub struct Series {
    /// Heads of the columns as written.
    pub heads: Vec<String>,
    /// Rows; NaN where a field is empty.
    pub rows: Vec<Vec<f64>>,
}

impl Series {
    fn read(text: &str) -> Self {
        let mut reader = csv::Reader::from_reader(text.as_bytes());
        let heads = reader.headers().expect("the series has a head").iter().map(str::to_owned);
        let heads = heads.collect();
        let number = |field: &str| -> f64 {
            if field.is_empty() { f64::NAN } else { field.parse().expect("a field is a number") }
        };
        let rows = reader
            .records()
            .map(|row| row.expect("series.csv is well formed").iter().map(number).collect())
            .collect();
        Self { heads, rows }
    }

    /// A column by the name of its channel.
    pub fn column(&self, channel: &str) -> Vec<f64> {
        let begin = format!("{channel} [");
        let place = self
            .heads
            .iter()
            .position(|head| head.starts_with(&begin))
            .unwrap_or_else(|| panic!("no column {channel} in {:?}", self.heads));
        self.rows.iter().map(|row| row[place]).collect()
    }

    /// A channel at a time that stands in a row.
    pub fn at(&self, channel: &str, time: f64) -> f64 {
        let times = self.column("time");
        let row = times.iter().position(|at| (at - time).abs() <= 1e-12 * time.max(1.0));
        let row = row.unwrap_or_else(|| panic!("no row at {time} s"));
        self.column(channel)[row]
    }
}

/// Fails unless two numbers agree relative to the larger of `expected` and 1e-300.
#[track_caller]
pub fn same(found: f64, expected: f64, relative: f64) {
    let off = (found - expected).abs() / expected.abs().max(1e-300);
    assert!(off <= relative, "found {found}, expected {expected}: off by {off:e} of it");
}

/// Fails unless two numbers agree absolutely.
#[track_caller]
pub fn near(found: f64, expected: f64, absolute: f64) {
    let off = (found - expected).abs();
    assert!(off <= absolute, "found {found}, expected {expected}: off by {off:e}");
}

/// The head of a scenario: length of the run and step of the rows in s, tolerance of the default method.
pub fn head(duration: f64, step: f64, tolerance: f64) -> String {
    format!(
        "lodeshaft: 1\ntitle: A case of the tests\nduration: {duration} s\noutput_step: {step} s\n\
         solver: {{ tolerance: {tolerance} }}\n"
    )
}
