//! The command line: arguments → what to do → how it ended.
//!
//! `arguments` has the commands and options; one module a command does its work on values and returns what to print. Only
//! here and in `shell` is anything read, written or printed. To add a command: a variant in `arguments`, a module, a line
//! in `run`.

use std::io::{self, IsTerminal, Write};
use std::process::ExitCode;

use clap::Parser;

use arguments::{Arguments, Color, Command};

mod arguments;
mod check;
mod model;

/// How a run ended; the numbers are part of the contract.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Exit {
    /// Everything asked for was done.
    Done = 0,
    /// The model or its data is at fault, or a file could not be read or written.
    Fault = 1,
    /// The command line was not understood.
    Usage = 2,
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> Self {
        Self::from(exit as u8)
    }
}

/// What a command has to say, and how it ended.
pub(crate) struct Outcome {
    /// For standard output, or the file named by `--output`.
    pub(crate) result: String,
    /// For standard error.
    pub(crate) remarks: String,
    pub(crate) exit: Exit,
}

/// Runs the program on the process's own arguments and streams.
pub fn main() -> ExitCode {
    match Arguments::try_parse() {
        Ok(arguments) => run(&arguments).into(),
        Err(error) => usage(&error).into(),
    }
}

fn usage(error: &clap::Error) -> Exit {
    // Help and version were asked for; they go to standard output and are no mistake.
    let asked_for = !error.use_stderr();
    let printed = error.print();
    if asked_for && printed.is_ok() { Exit::Done } else { Exit::Usage }
}

fn run(arguments: &Arguments) -> Exit {
    let color = match arguments.options.color {
        Color::Always => true,
        Color::Never => false,
        Color::Auto => colours_wanted(),
    };
    let outcome = match &arguments.command {
        Some(Command::Check { model }) => check::check(Some(model), &arguments.options, color),
        None => check::check(arguments.model.as_deref(), &arguments.options, color),
    };
    finish(&outcome, &arguments.options)
}

/// Colour only where someone looks at a terminal that can show it, and has not asked for none (NO_COLOR, set and not
/// empty).
fn colours_wanted() -> bool {
    let refused = std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty());
    let dumb = std::env::var_os("TERM").is_none_or(|term| term == "dumb");
    !refused && !dumb && io::stderr().is_terminal()
}

fn finish(outcome: &Outcome, options: &arguments::Options) -> Exit {
    let mut exit = outcome.exit;
    if !outcome.result.is_empty() {
        let written = match &options.output {
            Some(path) => crate::shell::files::write_whole(path, &outcome.result, options.force),
            None => print(&mut io::stdout().lock(), &outcome.result).map_err(Into::into),
        };
        if let Err(error) = written {
            complain(&format!("error: {error:#}\n"));
            exit = Exit::Fault;
        }
    }
    complain(&outcome.remarks);
    exit
}

/// Writes a text; a reader that has gone away is no mistake of ours.
fn print(stream: &mut dyn Write, text: &str) -> io::Result<()> {
    let written = stream.write_all(text.as_bytes()).and_then(|()| stream.flush());
    match written {
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => Ok(()),
        other => other,
    }
}

fn complain(text: &str) {
    // With standard error gone there is nobody left to tell.
    let _ = print(&mut io::stderr().lock(), text);
}
