//! `restpoint` and `restpoint MODEL` on a terminal: the interface.

use std::io::{self, IsTerminal};
use std::path::Path;

use unicode_normalization::UnicodeNormalization;

use crate::app::Source;
use crate::diag::cleanse::cleanse;
use crate::shell::interface::{Abilities, End, Start, Wish, run};
use crate::shell::models::{Reading, read};
use crate::shell::workers::Threads;

use super::arguments::{Arguments, BUDGET, Color, Format, Work};
use super::choice::Choice;
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
    if let Some(refused) = refused(model.as_deref(), work) {
        return Some(refused);
    }
    let abilities = Abilities::find(Wish { ascii: options.ascii, color })?;
    let threads = work.threads.map_or_else(Threads::available, |count| Threads::new(count.into()));
    let start = Start {
        model: model.as_ref().map(|path| Source::File(path.clone())),
        abilities,
        budget: work.budget.unwrap_or(BUDGET),
        threads,
        set: work.set.iter().map(|(name, value)| (composed(name), *value)).collect(),
        only: work.scenarios.iter().map(|name| composed(name)).collect(),
    };
    Some(match run(start) {
        Ok(End::Left) => Outcome::only(String::new(), Exit::Done),
        Ok(End::Signal(number)) => Outcome::only(String::new(), Exit::Signal(number)),
        Ok(End::Lost) => Outcome::only(String::new(), Exit::Signal(1)),
        Err(error) => Outcome::only(format!("error: {error:#}\n"), Exit::Fault),
    })
}

/// A name as models have it.
fn composed(name: &str) -> String {
    name.nfc().collect()
}

/// Names that the model does not have, said before the screen is taken. A model that cannot be used is the interface's to
/// show, and names given for whatever will be chosen are looked for when it is.
fn refused(model: Option<&Path>, work: &Work) -> Option<Outcome> {
    if work.scenarios.is_empty() && work.set.is_empty() {
        return None;
    }
    let Reading::Model(original) = read(Some(model?)) else { return None };
    let reason = Choice::new(&original.model, work).err()?;
    Some(Outcome::only(format!("error: {}\n", cleanse(&reason)), Exit::Usage))
}
