//! Arguments are parsed, files are read and written, and an exit code is chosen; everything else is the library's.

mod arguments;
mod explain;
mod files;
mod output;
mod parameters;
mod rhythm;
mod sample;
mod screen;
mod validate;

use arguments::{Arguments, Command};
use clap::Parser;
use std::ffi::OsString;
use std::process::ExitCode;

/// How a run ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Ending {
    /// Done.
    Done,
    /// Done, and findings at or above `--fail-on`.
    Findings,
    /// Wrong usage.
    Usage,
    /// The input cannot be used, or not without `--allow-partial`.
    Input,
    /// Something that should not happen, or that the computer refused.
    Internal,
}

impl Ending {
    fn code(self) -> u8 {
        match self {
            Self::Done => 0,
            Self::Findings => 1,
            Self::Usage => 2,
            Self::Input => 3,
            Self::Internal => 4,
        }
    }
}

/// A run that stopped: how it ended, and what to tell.
#[derive(Debug)]
pub(crate) struct Stop {
    /// How it ended.
    pub(crate) ending: Ending,
    /// What to tell, with its causes.
    pub(crate) error: anyhow::Error,
}

impl Stop {
    pub(crate) fn usage(text: impl std::fmt::Display) -> Self {
        Self {
            ending: Ending::Usage,
            error: anyhow::anyhow!("{text}"),
        }
    }
}

/// Everything that goes wrong on the way and is neither usage nor input is the computer's refusal.
impl From<anyhow::Error> for Stop {
    fn from(error: anyhow::Error) -> Self {
        Self {
            ending: Ending::Internal,
            error,
        }
    }
}

/// Runs the program on its arguments.
pub(crate) fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    let arguments = match Arguments::try_parse_from(arguments) {
        Ok(arguments) => arguments,
        Err(error) => return parse_ending(&error),
    };
    let result = match &arguments.command {
        Command::Screen(options) => screen::run(options),
        Command::Sample(options) => sample::run(options),
        Command::Rhythm(options) => rhythm::run(options),
        Command::Validate(options) => validate::run(options),
        Command::Explain(options) => explain::run(options),
    };
    match result {
        Ok(ending) => ExitCode::from(ending.code()),
        Err(stop) if output::is_broken_pipe(&stop.error) => ExitCode::SUCCESS,
        Err(stop) => {
            output::tell(format!("acroshift: {:#}\n", stop.error).as_bytes());
            ExitCode::from(stop.ending.code())
        }
    }
}

/// Help and version go to standard output and end with 0; anything else is wrong usage.
fn parse_ending(error: &clap::Error) -> ExitCode {
    let printed = error.print();
    match (error.use_stderr(), printed) {
        (false, Ok(())) => ExitCode::SUCCESS,
        (false, Err(refused)) if refused.kind() == std::io::ErrorKind::BrokenPipe => {
            ExitCode::SUCCESS
        }
        _ => ExitCode::from(Ending::Usage.code()),
    }
}
