//! The README: its commands run, its reference is complete, its table of scenarios names them all.

mod commands;
mod reference;
mod scenarios;

use std::fs;
use std::path::{Path, PathBuf};

/// Path of the README.
fn path() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md")
}

/// Text of the README.
fn text() -> String {
    fs::read_to_string(path()).expect("the README can be read")
}
