//! From bytes to a checked model.
//!
//! [`load`] reads a model file and the tables it names, and returns the model or everything that is wrong with it, each
//! with its place. It touches no files itself: [`Files`] does. One module reads each section; `keys` has the table of
//! keys, `names` resolves names and formulas, `desk` reads plain values and collects the messages. To add a section, add
//! its row to `keys`, its words to `messages`, a module here, and files to `tests/files/errors`.

mod block;
mod desk;
mod draws;
mod keys;
mod matrix;
mod names;
mod numbers;
mod parameters;
mod parts;
mod scenarios;
mod shorthand;
mod species;
mod table;
mod whole;

use crate::diag::{Diagnostic, Location, Sources, Span};
use crate::model::messages::Message;
use crate::model::{Model, units, yaml};
use desk::Desk;

/// Where the tables come from that a model names.
pub trait Files {
    /// The bytes of the file that a model calls `path`, relative to the model file. More than `limit` bytes need not be
    /// read; the answer is then an error or any text longer than the limit.
    ///
    /// # Errors
    ///
    /// Why it cannot be read, in a few words.
    fn read(&self, path: &str, limit: usize) -> Result<Vec<u8>, String>;
}

/// A model that names no files, or may not read any.
pub struct NoFiles;

impl Files for NoFiles {
    fn read(&self, _path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        Err("no files can be read here".to_owned())
    }
}

/// Reads a model: the model, or `None` if anything is wrong; the texts that places refer to; everything that is wrong, in
/// the order of the text, at most about a hundred messages. `name` is what messages call the model file.
pub fn load(name: &str, text: &[u8], files: &dyn Files) -> (Option<Model>, Sources, Vec<Diagnostic>) {
    let mut sources = Sources::default();
    let (source, tree) = yaml::read(name, text, &mut sources);
    let mut desk = Desk::new(files, sources, tree.findings);
    let root = tree.root.filter(|root| !desk::is_null(root));
    if root.is_none() && desk.is_clean() {
        desk.say(Message::EmptyFile, Location { source, span: Span::default() }, &[]);
    }
    let model = root.and_then(|root| whole::model(&mut desk, &root));
    let (sources, diagnostics) = desk.finish();
    let model = model.filter(|_| diagnostics.is_empty()).map(|model| Model { sources: sources.clone(), ..model });
    // Units are read once everything else is sound, for they are read with the places of the finished model.
    match model.as_ref().map(units::malformed) {
        Some(slips) if !slips.is_empty() => (None, sources, slips),
        _ => (model, sources, diagnostics),
    }
}

#[cfg(test)]
mod tests;
