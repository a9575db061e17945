//! `lodeshaft completions` and `lodeshaft man`: what packagers install beside the program.

use super::status::Status;
use super::{CommandLine, streams};
use crate::diagnostic::{Severity, closest};
use clap::{Args, CommandFactory};
use clap_complete::Shell;

/// What `completions` takes.
#[derive(Debug, Args)]
pub struct CompletionsArguments {
    /// The shell.
    #[arg(value_enum)]
    pub shell: Shell,
}

/// What `man` takes.
#[derive(Debug, Args)]
pub struct ManArguments {
    /// A command, for its own page [default: the page of the program].
    pub command: Option<String>,
}

/// Prints the completions of a shell.
pub fn completions(arguments: &CompletionsArguments) -> Status {
    let mut command = CommandLine::command();
    let name = command.get_name().to_owned();
    let mut bytes = Vec::new();
    clap_complete::generate(arguments.shell, &mut command, name, &mut bytes);
    streams::print(&String::from_utf8_lossy(&bytes), Status::Done)
}

/// Prints a page of the manual in the format of `man`.
pub fn page(arguments: &ManArguments) -> Status {
    let mut program = CommandLine::command();
    program.build();
    let chosen = match &arguments.command {
        None => program,
        Some(name) => match program.find_subcommand(name) {
            // Built as a part of the program, it is named with it: lodeshaft-run.
            Some(command) => command.clone(),
            None => {
                let names = || program.get_subcommands().map(clap::Command::get_name);
                let hint = match closest(name, names()) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => format!("it may be {}", names().collect::<Vec<_>>().join(", ")),
                };
                let message = format!("there is no command `{name}`");
                streams::complain(Severity::Error, message, Some(&hint));
                return Status::Fault;
            }
        },
    };
    let mut bytes = Vec::new();
    // Writing to memory cannot fail.
    let _ = clap_mangen::Man::new(chosen).render(&mut bytes);
    streams::print(&String::from_utf8_lossy(&bytes), Status::Done)
}
