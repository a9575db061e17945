//! Runs studies of a train whose limit is known, and reads what they leave behind.

use serde_json::Value;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Output, Stdio};
use std::sync::atomic::{AtomicUsize, Ordering};

/// Largest step of torque from rest that an undamped magnetic coupling holds, over its pull-out
/// torque: the root of `T (pi - asin T) = 1 + sqrt(1 - T^2)` (equal areas, textbooks of power
/// system stability).
pub const LIMIT: f64 = 0.724_611_353_776_708_5;

/// Number of folders made so far, so that tests in parallel never share one.
static FOLDERS: AtomicUsize = AtomicUsize::new(0);

/// A folder of its own for one test, gone when dropped.
pub struct Folder {
    path: PathBuf,
}

impl Folder {
    /// Makes an empty folder with a scenario.
    pub fn new(scenario: &str) -> Self {
        let number = FOLDERS.fetch_add(1, Ordering::Relaxed);
        let name = format!("studies-{}-{number}", std::process::id());
        let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
        fs::create_dir_all(&path).expect("a folder for the test can be made");
        let folder = Self { path };
        folder.write("case.yaml", scenario);
        folder
    }

    /// Writes a file.
    pub fn write(&self, name: &str, text: &str) {
        fs::write(self.path.join(name), text).expect("the test's file can be written");
    }

    /// Text of a file of the studies in the results `out`.
    pub fn study_file(&self, out: &str, name: &str) -> String {
        let path = self.path.join(out).join("studies").join(name);
        fs::read_to_string(&path).unwrap_or_else(|fault| panic!("{}: {fault}", path.display()))
    }

    /// Where it is.
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Whether a path exists.
    pub fn has(&self, name: &str) -> bool {
        self.path.join(name).exists()
    }

    /// A command of the program in this folder.
    pub fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_lodeshaft"));
        command.args(arguments).current_dir(&self.path).stdin(Stdio::null());
        command
    }

    /// Runs the program to its end.
    pub fn call(&self, arguments: &[&str]) -> Output {
        self.command(arguments).output().expect("the program runs")
    }

    /// Starts the program and leaves it running.
    pub fn start(&self, arguments: &[&str]) -> Child {
        self.command(arguments)
            .stdout(Stdio::null())
            .stderr(Stdio::null())
            .spawn()
            .expect("the program starts")
    }

    /// Runs the studies with JSON on standard output and results in `out`.
    pub fn study(&self, arguments: &[&str]) -> (Option<i32>, Value, String) {
        let mut all = vec!["study", "case.yaml", "--out", "out", "--format", "json"];
        all.extend(arguments);
        let output = self.call(&all);
        let stderr = String::from_utf8_lossy(&output.stderr).into_owned();
        let answers = serde_json::from_slice(&output.stdout)
            .unwrap_or_else(|fault| panic!("{fault}\n{stderr}"));
        (output.status.code(), answers, stderr)
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        // A folder left behind harms nobody; a failing test must show its own message.
        let _ = fs::remove_dir_all(&self.path);
    }
}

/// The train of one body behind a coupling, with a step of torque at 0 s.
pub fn train(torque: f64, pull_out: f64, studies: &str) -> String {
    format!(
        "lodeshaft: 1
title: One body behind a magnetic coupling
duration: 0.8 s
bodies:
  rotor: {{ inertia: 0.05 kg*m2 }}
magnetic_couplings:
  coupling: {{ between: [rotor, ground], pole_pairs: 4, pull_out: {pull_out} N*m }}
motors:
  drive: {{ body: rotor, law: {{ prescribed: {{ torque: {torque} N*m }} }} }}
requirements:
  no_slip: {{ of: coupling.slips, at_most: 0 }}
studies:
{studies}"
    )
}

/// Runs the only study of a train and returns its status and answer.
pub fn ask(scenario: &str) -> (Option<i32>, Value) {
    let folder = Folder::new(scenario);
    let (status, answers, stderr) = folder.study(&[]);
    let studies = answers["studies"].as_object().unwrap_or_else(|| panic!("{answers}\n{stderr}"));
    assert_eq!(studies.len(), 1, "{stderr}");
    let answer = studies.values().next().cloned().unwrap_or_default();
    (status, answer)
}

/// The rows of a table with their columns by name.
pub struct Table {
    head: Vec<String>,
    /// Cells, one list a row.
    pub rows: Vec<Vec<String>>,
}

impl Table {
    /// Reads a CSV text.
    pub fn read(text: &str) -> Self {
        let mut reader = csv::Reader::from_reader(text.as_bytes());
        let head = reader.headers().unwrap().iter().map(str::to_owned).collect();
        let rows =
            reader.records().map(|row| row.unwrap().iter().map(str::to_owned).collect()).collect();
        Self { head, rows }
    }

    /// A column by its head.
    pub fn column(&self, name: &str) -> Vec<&str> {
        let place = self.head.iter().position(|head| head == name);
        let place = place.unwrap_or_else(|| panic!("no column {name} in {:?}", self.head));
        self.rows.iter().map(|row| row[place].as_str()).collect()
    }

    /// A column of numbers.
    pub fn numbers(&self, name: &str) -> Vec<f64> {
        self.column(name).iter().map(|cell| cell.parse().unwrap()).collect()
    }
}
