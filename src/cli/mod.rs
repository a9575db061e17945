//! The command line: what was typed, and the commands that do it.

mod check;
mod compare;
mod compared;
mod interrupt;
mod manual;
mod new;
mod open;
mod poles;
mod progress;
mod report;
mod report_studies;
mod run;
mod schema;
mod status;
mod streams;
mod study;
mod study_progress;

use crate::render::pictures::Print;
use clap::{Args, Parser, Subcommand, ValueEnum};
use status::Status;
use std::path::PathBuf;
use std::process::ExitCode;

/// Simulates drivetrains with magnetic gears and couplings: how close they come to slipping.
///
/// Exit status: 0 done and every requirement met, 1 a requirement or limit not met, 2 the file or
/// the command is at fault, 3 the numerics gave up, 4 results could not be written, 130 interrupted.
#[derive(Debug, Parser)]
#[command(name = "lodeshaft", version, max_term_width = 100)]
pub struct CommandLine {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
    /// Options that every command takes.
    #[command(flatten)]
    pub common: Common,
}

/// The commands.
#[derive(Debug, Subcommand)]
pub enum Command {
    /// Runs a scenario in time: series, events, summary, charts and verdicts.
    Run(run::RunArguments),
    /// Runs the studies of a scenario: margins, load cases, sweeps, tolerances.
    Study(study::StudyArguments),
    /// Runs a scenario and all its studies and writes them as one page.
    Report(report::ReportArguments),
    /// Reads and checks scenarios and shows their trains; runs nothing.
    Check(check::CheckArguments),
    /// Compares scenarios, variants of one or folders of results: what differs in inputs and answers.
    Compare(compare::CompareArguments),
    /// Lists pole-pair choices for a ratio: pieces, the six ratios, ripple orders.
    Poles(poles::PolesArguments),
    /// Prints a commented file to start from.
    New(new::NewArguments),
    /// Prints the JSON Schema of the scenario file, for editors.
    Schema,
    /// Prints completions for a shell: bash, zsh, fish, powershell, elvish.
    Completions(manual::CompletionsArguments),
    /// Prints the manual page of the program or of one of its commands.
    Man(manual::ManArguments),
}

/// Options that every command takes, as far as they mean something to it.
#[derive(Clone, Debug, Args)]
pub struct Common {
    /// Folder of the results [default: output/<the file's stem>].
    #[arg(long, global = true, value_name = "DIR")]
    pub out: Option<PathBuf>,
    /// Sets a value of the file by its dotted path, for example bodies.rotor.inertia="2 kg*m2".
    #[arg(long = "set", global = true, value_name = "PATH=VALUE", value_parser = path_and_value)]
    pub sets: Vec<(String, String)>,
    /// What is printed on standard output.
    #[arg(long, global = true, value_enum, default_value_t = Format::Text)]
    pub format: Format,
    /// No text summary and no progress; warnings and errors stay.
    #[arg(long, global = true)]
    pub quiet: bool,
    /// Draws no charts.
    #[arg(long, global = true)]
    pub no_charts: bool,
    /// Pixels of PNG charts for each pixel of a page, 0.5 to 8.
    #[arg(long, global = true, value_name = "N", default_value_t = 2.0, value_parser = scale)]
    pub scale: f64,
    /// Size of charts: page, slide, or width x height as in 900x500, in pixels of a page.
    #[arg(long, global = true, value_name = "SIZE", default_value = "page", value_parser = size)]
    pub size: Print,
    /// Number of threads for studies [default: one a processor].
    #[arg(long, global = true, value_name = "N", value_parser = clap::value_parser!(u16).range(1..))]
    pub threads: Option<u16>,
}

/// What is printed on standard output.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Format {
    /// For people.
    Text,
    /// For machines: nothing but JSON.
    Json,
}

fn scale(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(scale) if (0.5..=8.0).contains(&scale) => Ok(scale),
        _ => Err("it takes a number from 0.5 to 8".to_owned()),
    }
}

fn size(text: &str) -> Result<Print, String> {
    Print::default().sized(text)
}

impl Common {
    /// How charts are written.
    pub fn print(&self) -> Print {
        Print { scale: self.scale, ..self.size }
    }
}

fn path_and_value(text: &str) -> Result<(String, String), String> {
    match text.split_once('=') {
        Some((path, value)) if !path.trim().is_empty() => {
            Ok((path.trim().to_owned(), value.trim().to_owned()))
        }
        _ => Err("it takes a dotted path, `=` and a value".to_owned()),
    }
}

/// Reads the command line, does what it says and tells how it ended.
pub fn main() -> ExitCode {
    let CommandLine { command, common } = CommandLine::parse();
    let status: Status = match command {
        Command::Run(arguments) => run::run(&arguments, &common),
        Command::Study(arguments) => study::run(&arguments, &common),
        Command::Report(arguments) => report::run(&arguments, &common),
        Command::Check(arguments) => check::run(&arguments, &common),
        Command::Compare(arguments) => compare::run(&arguments, &common),
        Command::Poles(arguments) => poles::run(&arguments, &common),
        Command::New(arguments) => new::run(&arguments),
        Command::Schema => schema::run(),
        Command::Completions(arguments) => manual::completions(&arguments),
        Command::Man(arguments) => manual::page(&arguments),
    };
    status.into()
}
