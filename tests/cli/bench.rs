//! A place of its own for each test, and the program run in it.

use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

/// A small train that runs in no time: a coupling that carries half its pull-out torque.
pub const SMALL: &str = "\
lodeshaft: 1
title: Two bodies and a coupling
duration: 0.2 s
output_step: 1 ms
bodies:
  driver: { inertia: 0.1 kg*m2 }
  driven: { inertia: 0.2 kg*m2 }
magnetic_couplings:
  coupling: { between: [driver, driven], pole_pairs: 4, pull_out: 80 N*m, damping: 0.5 N*m*s/rad }
motors:
  motor: { body: driver, law: { prescribed: { torque: 15 N*m } } }
requirements:
  no_slip: { of: coupling.slips, at_most: 0 }
";

/// A folder of a test's own, removed at its end.
pub struct Bench {
    pub folder: PathBuf,
}

impl Bench {
    pub fn new(name: &str) -> Self {
        let folder =
            std::env::temp_dir().join(format!("lodeshaft-test-{}-{name}", std::process::id()));
        let _ = std::fs::remove_dir_all(&folder);
        std::fs::create_dir_all(&folder).unwrap();
        let bench = Self { folder };
        bench.write("small.yaml", SMALL);
        bench
    }

    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.join(name)
    }

    pub fn write(&self, name: &str, text: &str) {
        std::fs::write(self.path(name), text).unwrap();
    }

    pub fn read(&self, name: &str) -> String {
        std::fs::read_to_string(self.path(name)).unwrap()
    }

    /// The program in this folder, streams captured.
    pub fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_lodeshaft"));
        command.current_dir(&self.folder).args(arguments);
        command.stdin(Stdio::null()).stdout(Stdio::piped()).stderr(Stdio::piped());
        command
    }

    pub fn run(&self, arguments: &[&str]) -> Told {
        Told::from(self.command(arguments).output().unwrap())
    }
}

impl Drop for Bench {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.folder);
    }
}

/// What a run of the program told.
#[derive(Debug)]
pub struct Told {
    pub status: Option<i32>,
    pub out: String,
    pub err: String,
}

impl From<Output> for Told {
    fn from(output: Output) -> Self {
        Self {
            status: output.status.code(),
            out: String::from_utf8(output.stdout).unwrap(),
            err: String::from_utf8(output.stderr).unwrap(),
        }
    }
}

/// The names in a folder, sorted.
pub fn names(folder: &Path) -> Vec<String> {
    let Ok(entries) = std::fs::read_dir(folder) else { return Vec::new() };
    let mut names: Vec<String> =
        entries.map(|entry| entry.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

pub fn json(text: &str) -> serde_json::Value {
    serde_json::from_str(text).unwrap_or_else(|fault| panic!("{fault}: {text}"))
}
