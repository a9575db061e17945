//! Opens a page in the browser of the desktop.

use super::streams;
use crate::diagnostic::Severity;
use std::path::Path;
use std::process::{Command, Stdio};

/// The program of the desktop that opens a file with what its owner chose for it.
fn opener() -> (&'static str, &'static [&'static str]) {
    if cfg!(target_os = "macos") {
        ("open", &[])
    } else if cfg!(windows) {
        ("explorer", &[])
    } else {
        ("xdg-open", &[])
    }
}

/// Opens a page; what does not work is a warning, the page stands in any case.
pub fn page(path: &Path) {
    let (program, before) = opener();
    let started = Command::new(program)
        .args(before)
        .arg(path)
        .stdin(Stdio::null())
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .spawn();
    if let Err(error) = started {
        let message = format!("`{}` cannot be opened with `{program}`: {error}", path.display());
        streams::complain(Severity::Warning, message, None);
    }
}
