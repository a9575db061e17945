//! Calls the program on a tree, in a folder that holds the tables of the trains.

use super::trees::{folder, text};
use lodeshaft::tree::Node;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;
use std::sync::atomic::{AtomicUsize, Ordering};

static FOLDERS: AtomicUsize = AtomicUsize::new(0);

/// What a call came to.
pub struct Call {
    /// Exit status.
    pub status: Option<i32>,
    /// Standard output.
    pub stdout: String,
    /// Standard error.
    pub stderr: String,
    folder: PathBuf,
}

impl Call {
    /// A file below the results.
    pub fn file(&self, name: &str) -> String {
        fs::read_to_string(self.folder.join("out").join(name))
            .unwrap_or_else(|fault| panic!("{name}: {fault}\n{}", self.stderr))
    }

    /// Every file of the results with its bytes, by name.
    pub fn files(&self) -> Vec<(String, Vec<u8>)> {
        let mut found = Vec::new();
        collect(&self.folder.join("out"), "", &mut found);
        found.sort();
        found
    }
}

fn collect(folder: &Path, before: &str, found: &mut Vec<(String, Vec<u8>)>) {
    for entry in fs::read_dir(folder).expect("the results").map(Result::unwrap) {
        let name = format!("{before}{}", entry.file_name().to_str().unwrap());
        if entry.path().is_dir() {
            collect(&entry.path(), &format!("{name}/"), found);
        } else {
            found.push((name, fs::read(entry.path()).unwrap()));
        }
    }
}

impl Drop for Call {
    fn drop(&mut self) {
        // A folder left behind harms nobody.
        let _ = fs::remove_dir_all(&self.folder);
    }
}

/// Calls the program on a tree written as `case.yaml`.
pub fn call(tree: &Node, arguments: &[&str]) -> Call {
    let number = FOLDERS.fetch_add(1, Ordering::Relaxed);
    let name = format!("conformance-{}-{number}", std::process::id());
    let here = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    fs::create_dir_all(&here).unwrap();
    for entry in fs::read_dir(folder()).unwrap().map(|entry| entry.unwrap().path()) {
        if entry.extension().is_some_and(|ending| ending == "csv") {
            fs::copy(&entry, here.join(entry.file_name().unwrap())).unwrap();
        }
    }
    fs::write(here.join("case.yaml"), text(tree)).unwrap();
    let output = Command::new(env!("CARGO_BIN_EXE_lodeshaft"))
        .args(arguments)
        .current_dir(&here)
        .output()
        .expect("the program starts");
    Call {
        status: output.status.code(),
        stdout: String::from_utf8(output.stdout).unwrap(),
        stderr: String::from_utf8(output.stderr).unwrap(),
        folder: here,
    }
}

/// Runs a tree to its files.
pub fn run(tree: &Node) -> Call {
    call(tree, &["run", "case.yaml", "--out", "out", "--no-charts", "--format", "json"])
}

/// Fails with all that was found wrong.
#[track_caller]
pub fn none(wrong: &[String]) {
    assert!(wrong.is_empty(), "\n{}\n", wrong.join("\n"));
}
