//! Standard output and standard error.

use super::status::Status;
use crate::diagnostic::Severity;
use std::fmt::Display;
use std::io::{self, IsTerminal, Write};

/// Prints to standard output; a reader that has gone away is no fault.
pub fn print(text: &str, status: Status) -> Status {
    let mut out = io::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Ok(()) => status,
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => status,
        Err(error) => {
            complain(Severity::Error, format!("cannot write to standard output: {error}"), None);
            status.max(Status::NotWritten)
        }
    }
}

/// Writes to standard error, which nobody may be reading.
pub fn tell(text: &str) {
    let _ = io::stderr().lock().write_all(text.as_bytes());
}

/// Writes an error or a warning that belongs to no place in a file.
pub fn complain(severity: Severity, message: impl Display, hint: Option<&str>) {
    let mut text = format!("{severity}: {message}\n");
    if let Some(hint) = hint {
        text.push_str(&format!("  hint: {hint}\n"));
    }
    tell(&text);
}

/// True when a person watches standard error.
pub fn is_watched() -> bool {
    io::stderr().is_terminal()
}
