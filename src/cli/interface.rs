//! `restpoint` and `restpoint MODEL` on a terminal: the interface.

use std::io::{self, IsTerminal};
use std::path::{Path, PathBuf};

use crate::app::Source;
use crate::shell::interface::{Abilities, End, Start, Wish, run};
use crate::shell::workers::Threads;

use super::arguments::{Arguments, BUDGET, Color, Format};
use super::{Exit, Outcome};

/// Runs the interface, where there is a terminal to run it on and nothing asks for a table; `None` where a table is to be
/// printed.
pub(super) fn interface(arguments: &Arguments) -> Option<Outcome> {
    let Arguments { model, work, show, options, .. } = arguments;
    let asks_for_table = options.format != Format::Text
        || options.output.is_some()
        || show.columns.is_some()
        || work.strict
        || model.as_deref() == Some(Path::new("-"));
    if asks_for_table || !io::stdout().is_terminal() {
        return None;
    }
    let color = match options.color {
        Color::Auto => None,
        Color::Always => Some(true),
        Color::Never => Some(false),
    };
    let abilities = Abilities::find(Wish { ascii: options.ascii, color })?;
    let threads = work.threads.map_or_else(Threads::available, |count| Threads::new(count.into()));
    let start = Start {
        model: model.as_ref().map(|path| Source::File(absolute(path))),
        abilities,
        budget: work.budget.unwrap_or(BUDGET),
        threads,
        set: work.set.clone(),
        only: work.scenarios.clone(),
    };
    Some(match run(start) {
        Ok(End::Left) => Outcome::only(String::new(), Exit::Done),
        Ok(End::Signal(number)) => Outcome::only(String::new(), Exit::Signal(number)),
        Ok(End::Lost) => Outcome::only(String::new(), Exit::Signal(1)),
        Err(error) => Outcome::only(format!("error: {error:#}\n"), Exit::Fault),
    })
}

/// The path from the root, so that it stays what it is; as it was given where the system does not say.
fn absolute(path: &Path) -> PathBuf {
    std::path::absolute(path).unwrap_or_else(|_| path.to_path_buf())
}
