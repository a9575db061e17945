//! Commands of the contract that this version does not know yet: refused by name.

use super::status::Status;
use super::streams;
use crate::diagnostic::Severity;
use clap::Args;

/// Whatever such a command was given.
#[derive(Debug, Args)]
#[command(disable_help_flag = true)]
pub struct LaterArguments {
    /// Ignored.
    #[arg(trailing_var_arg = true, allow_hyphen_values = true, hide = true)]
    pub rest: Vec<String>,
}

/// Refuses a command.
pub fn refuse(name: &str) -> Status {
    let message = format!("`{name}` is not in this version of the program");
    streams::complain(Severity::Error, message, Some("`lodeshaft --help` lists what is"));
    Status::Fault
}
