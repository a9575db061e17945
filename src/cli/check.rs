//! `lodeshaft check`: reads files and shows their trains; runs nothing.

use super::status::Status;
use super::{Common, Format, streams};
use crate::analysis::{study, train, transient};
use crate::diagnostic::Diagnostics;
use crate::render::{self, json};
use crate::scenario::Source;
use clap::Args;
use serde_json::Value;
use std::path::{Path, PathBuf};

/// What `check` takes.
#[derive(Debug, Args)]
pub struct CheckArguments {
    /// The scenarios; `-` reads standard input.
    #[arg(required = true)]
    pub files: Vec<PathBuf>,
}

/// Runs the command.
pub fn run(arguments: &CheckArguments, common: &Common) -> Status {
    let mut status = Status::Done;
    let mut reports = Vec::new();
    for (index, file) in arguments.files.iter().enumerate() {
        let (own, text, report) = check(file, common);
        status = status.max(own);
        reports.push((file.display().to_string(), report));
        if common.format == Format::Text && !common.quiet && !text.is_empty() {
            let gap = if index > 0 { "\n" } else { "" };
            status = streams::print(&format!("{gap}{text}"), status);
        }
    }
    if common.format == Format::Json {
        let files = json::named(reports.iter().map(|(name, it)| (name.as_str(), it.clone())));
        return streams::print(&json::pretty(&json::named([("files", files)])), status);
    }
    status
}

fn check(file: &Path, common: &Common) -> (Status, String, Value) {
    let loaded = match study::load(file, &common.sets) {
        Ok(plan) => plan.loaded,
        Err(failure) => return at_fault(&failure.source, &failure.diagnostics),
    };
    let mut found = loaded.warnings.clone();
    match transient::prepare(&loaded.scenario) {
        Err(more) => {
            found.extend(more);
            at_fault(&loaded.source, &found)
        }
        Ok(equations) => {
            found.extend(equations.model.warnings.clone());
            for (path, message) in &equations.warnings {
                found.warning(path.as_str(), message.as_str());
            }
            streams::tell(&loaded.source.render(&found));
            let figures = train::figures(&equations.model);
            let text = render::train::text(&loaded.source.name, &loaded.scenario, &figures);
            let mut report = json::named([
                ("accepted", Value::from(true)),
                ("messages", messages(&loaded.source, &found)),
            ]);
            if let (Value::Object(all), Value::Object(more)) =
                (&mut report, render::train::to_json(&loaded.scenario, &figures))
            {
                all.extend(more);
            }
            (Status::Done, text, report)
        }
    }
}

fn at_fault(source: &Source, found: &Diagnostics) -> (Status, String, Value) {
    streams::tell(&source.render(found));
    let report =
        json::named([("accepted", Value::from(false)), ("messages", messages(source, found))]);
    (Status::Fault, String::new(), report)
}

fn messages(source: &Source, found: &Diagnostics) -> Value {
    let list = found.iter().map(|entry| {
        let place = source.place(entry);
        json::named([
            ("severity", Value::from(entry.severity.to_string())),
            ("path", Value::from(entry.path.as_str())),
            ("text", Value::from(entry.message.as_str())),
            ("hint", entry.hint.as_deref().map_or(Value::Null, Value::from)),
            ("line", place.map_or(Value::Null, |(line, _)| Value::from(line))),
            ("column", place.map_or(Value::Null, |(_, column)| Value::from(column))),
        ])
    });
    Value::Array(list.collect())
}
