//! `lodeshaft schema`: JSON Schema of the scenario file.

use super::status::Status;
use super::streams;
use crate::render::{json, schema};

/// Runs the command.
pub fn run() -> Status {
    streams::print(&json::pretty(&schema::schema()), Status::Done)
}
