//! The command line: arguments → what to do → how it ended.
//!
//! `arguments` has the commands and options; one module a command does its work on values and returns what to print. Only
//! here and in `shell` is anything read, written or printed. To add a command: a variant in `arguments`, a module, a line
//! in `perform`.

use std::io::{self, IsTerminal, Write};
use std::process::ExitCode;

use clap::error::{ContextKind, ErrorKind};
use clap::{CommandFactory, Parser};

use arguments::{Arguments, Color, Command, Options};

use crate::diag::cleanse::cleanse;
use crate::diag::nearest::nearest;
use crate::shell::{files, terminal};

mod arguments;
mod check;
mod choice;
mod compare;
mod interface;
mod model;
mod response;
mod sketch;
mod solve;
mod table;
mod varied;

/// How a run ended; the numbers are part of the contract.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Exit {
    /// Everything asked for was done.
    Done,
    /// The model or its data is at fault, or a file could not be read or written.
    Fault,
    /// The command line was not understood.
    Usage,
    /// Something shown is not proved, and proof was asked for.
    Unproved,
    /// Interrupted; the result is partial and says so.
    Interrupted,
    /// A signal of this number ended the interface.
    Signal(i32),
}

impl Exit {
    /// Its number, which is part of the contract.
    pub fn number(self) -> u8 {
        match self {
            Exit::Done => 0,
            Exit::Fault => 1,
            Exit::Usage => 2,
            Exit::Unproved => 3,
            Exit::Interrupted => 130,
            // As a shell reports a process that a signal ended.
            Exit::Signal(number) => u8::try_from(128 + number).unwrap_or(1),
        }
    }
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> Self {
        Self::from(exit.number())
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

impl Outcome {
    /// Nothing but a remark.
    fn only(remarks: String, exit: Exit) -> Self {
        Self { result: String::new(), remarks, exit }
    }
}

/// What results and remarks are put on.
#[derive(Clone, Copy)]
struct Screen {
    /// Columns for results.
    width: usize,
    /// Rows for results, where a terminal has them.
    height: Option<usize>,
    /// Whether results may be coloured.
    color: bool,
    /// Whether remarks may be coloured.
    color_remarks: bool,
}

/// Runs the program on the process's own arguments and streams.
pub fn main() -> ExitCode {
    match Arguments::try_parse() {
        Ok(arguments) => run(&arguments).into(),
        Err(error) => usage(&error).into(),
    }
}

/// That the first word is no command, where another word follows it: it was hardly meant as the model's name.
fn no_such_command(error: &clap::Error) -> Option<String> {
    let stray = error.get(ContextKind::InvalidArg)?.to_string();
    let first = std::env::args_os().nth(1)?.into_string().ok()?;
    let is_command = first.chars().all(char::is_alphabetic);
    if error.kind() != ErrorKind::UnknownArgument || stray.starts_with('-') || !is_command {
        return None;
    }
    let command = Arguments::command();
    let names: Vec<&str> = command.get_subcommands().map(clap::Command::get_name).collect();
    let first = cleanse(&first);
    if names.contains(&first.as_ref()) {
        return None;
    }
    Some(match nearest(&first, names.iter().copied()) {
        Some(near) => format!("error: there is no command \"{first}\"; did you mean \"{near}\"?\n"),
        None => format!("error: there is no command \"{first}\"; there are {}\n", names.join(", ")),
    })
}

fn usage(error: &clap::Error) -> Exit {
    if let Some(reason) = no_such_command(error) {
        complain(&reason);
        return Exit::Usage;
    }
    // Help and version were asked for; they go to standard output and are no mistake. Nor is a reader that has gone away.
    let printed = match error.print() {
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => Ok(()),
        other => other,
    };
    match (error.use_stderr(), printed) {
        (true, _) => Exit::Usage,
        (false, Ok(())) => Exit::Done,
        (false, Err(_)) => Exit::Fault,
    }
}

fn run(arguments: &Arguments) -> Exit {
    let options = &arguments.options;
    // Before the work, so that none is done in vain.
    let no_place = || Some((Exit::Fault, files::refusal(options.output.as_deref()?, options.force)?));
    match misplaced(arguments).or_else(no_place) {
        Some((exit, reason)) => {
            complain(&format!("error: {reason}\n"));
            exit
        }
        None => finish(&perform(arguments, screen(options)), options),
    }
}

fn perform(arguments: &Arguments, screen: Screen) -> Outcome {
    let options = &arguments.options;
    match &arguments.command {
        Some(Command::Check { model }) => check::check(Some(model), options, screen.color_remarks),
        Some(Command::Table { show, .. }) if show.is_help() => table::columns(options),
        Some(Command::Table { model: None, .. }) => Outcome::only(NO_MODEL.to_owned(), Exit::Usage),
        Some(Command::Table { model, work, show }) => table::table(model.as_deref(), work, show, options, screen),
        Some(Command::Compare { model, work }) => compare::compare(model, work, options, screen),
        Some(Command::Response(asked)) => response::response(asked, options, screen),
        Some(Command::Sketch(asked)) => sketch::sketch(asked, options, screen),
        None if arguments.show.is_help() => table::columns(options),
        None => interface::interface(arguments).unwrap_or_else(|| {
            table::table(arguments.model.as_deref(), &arguments.work, &arguments.show, options, screen)
        }),
    }
}

const NO_MODEL: &str = "\
error: a model is needed

Usage: restpoint table [OPTIONS] <MODEL>

For more information, try '--help'.
";

/// What stands before a command that belongs after it, and would have no effect there.
fn misplaced(arguments: &Arguments) -> Option<(Exit, String)> {
    arguments.command.as_ref()?;
    let before = match &arguments.model {
        Some(model) => Some(model.display().to_string()),
        None if arguments.show.columns.is_some() => Some("--columns".to_owned()),
        None => arguments.work.given().map(str::to_owned),
    };
    before.map(|what| (Exit::Usage, format!("{what} belongs after the command, not before it")))
}

fn screen(options: &Options) -> Screen {
    let on_terminal = options.output.is_none() && io::stdout().is_terminal();
    let width = if on_terminal { terminal::width() } else { terminal::COLUMNS };
    let height = if on_terminal { terminal::height() } else { None };
    let color = |is_terminal| match options.color {
        Color::Always => true,
        Color::Never => false,
        Color::Auto => is_terminal && colour_can_be_shown(),
    };
    Screen { width, height, color: color(on_terminal), color_remarks: color(io::stderr().is_terminal()) }
}

/// Whether the terminal can show colour, and its user has not asked for none (NO_COLOR, set and not empty).
fn colour_can_be_shown() -> bool {
    let refused = std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty());
    let dumb = std::env::var_os("TERM").is_none_or(|term| term == "dumb");
    !refused && !dumb
}

fn finish(outcome: &Outcome, options: &Options) -> Exit {
    let mut exit = outcome.exit;
    if !outcome.result.is_empty() {
        let written = match &options.output {
            Some(path) => files::write_whole(path, &outcome.result, options.force),
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
