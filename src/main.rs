//! The command line of `acroshift`: arguments and files in, exit code out.

mod cli;

use std::process::ExitCode;

fn main() -> ExitCode {
    cli::run(std::env::args_os())
}
