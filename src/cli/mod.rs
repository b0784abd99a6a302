//! The command line: options, files and threads round the library; reports, JSON and exit codes.
//!
//! A command gathers everything it has to say before it writes, so that a failure leaves no half report. What goes wrong
//! is a [`Failure`] with its exit code, and is shown here once. Text from outside is shown with its control characters
//! made visible.

mod args;
mod check;
mod failure;
mod files;
mod help;
mod json;
mod outcome;
mod place;
mod printed;
mod progress;
mod report;
mod sweep;

use std::ffi::OsString;
use std::io::{self, Write};
use std::process::ExitCode;

use clap::Parser;

use args::{Arguments, Command};
use failure::{Failure, visible_lines};

/// How a command ended, as the exit code says it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Exit {
    /// A circle fits, a sweep is done, a proof holds.
    Done = 0,
    Other = 1,
    Usage = 2,
    BadInput = 3,
    NoRoom = 4,
    CapHit = 5,
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> ExitCode {
        ExitCode::from(exit as u8)
    }
}

/// Runs the program with its arguments, the first of which is its own name.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    let arguments = match Arguments::try_parse_from(arguments) {
        Ok(arguments) => arguments,
        Err(e) => return show_clap(&e).into(),
    };
    let end = match &arguments.command {
        Some(Command::Place(options)) => place::run(options),
        Some(Command::Check(options)) => check::run(options),
        Some(Command::Sweep(options)) => sweep::run(options),
        None => place::run_sample(),
    };
    match end {
        Ok(exit) => exit.into(),
        Err(failure) => failure.show().into(),
    }
}

/// Help and version go to stdout, usage errors to stderr.
fn show_clap(e: &clap::Error) -> Exit {
    let text = visible_lines(&e.render().to_string());
    if e.use_stderr() {
        // Where stderr is closed there is nobody to tell.
        let _ = io::stderr().write_all(text.as_bytes());
        return Exit::Usage;
    }
    match print(&text) {
        Ok(()) => Exit::Done,
        Err(failure) => failure.show(),
    }
}

/// Writes to stdout. A closed pipe ends quietly: whoever read has had enough.
fn print(text: &str) -> Result<(), Failure> {
    let mut out = io::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Err(e) if e.kind() != io::ErrorKind::BrokenPipe => Err(Failure::writing("the output", e)),
        _ => Ok(()),
    }
}
