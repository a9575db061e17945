//! The command line program.

use std::process::ExitCode;

fn main() -> ExitCode {
    lodeshaft::cli::main()
}
