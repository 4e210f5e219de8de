//! The model that a command works on: from a file, from standard input, or compiled in.

use std::path::Path;

use crate::diag::render::render;
use crate::diag::{Diagnostic, Severity, Sources};
use crate::model::Model;
use crate::model::load::{NoFiles, load};
use crate::shell::files::read_model;

/// The model that is shown when none is named.
const DEMONSTRATION: (&str, &str) = ("scenarios/skarnby-bank.yaml", include_str!("../../scenarios/skarnby-bank.yaml"));

/// What reading a model came to.
pub(super) enum Reading {
    /// A sound model.
    Model(Box<Model>),
    /// Everything that is wrong with it.
    Wrong(Sources, Vec<Diagnostic>),
    /// It could not be read at all, and why.
    Unreadable(String),
}

/// Reads the model at `path`; without one, the model that is compiled in.
pub(super) fn read(path: Option<&Path>) -> Reading {
    let (model, sources, found) = match path {
        None => load(DEMONSTRATION.0, DEMONSTRATION.1.as_bytes(), &NoFiles),
        Some(path) => match read_model(path) {
            Ok(found) => load(&found.name, &found.bytes, &found.tables),
            Err(error) => return Reading::Unreadable(format!("error: {error:#}\n")),
        },
    };
    match model {
        Some(model) => Reading::Model(Box::new(model)),
        None => Reading::Wrong(sources, found),
    }
}

/// Diagnostics for a reader: each in full, then how many there are.
pub(super) fn remarks(found: &[Diagnostic], sources: &Sources, color: bool) -> String {
    let mut text: Vec<String> = found.iter().map(|diagnostic| render(diagnostic, sources, color)).collect();
    let errors = found.iter().filter(|diagnostic| diagnostic.severity == Severity::Error).count();
    if errors > 1 {
        text.push(format!("{errors} errors\n"));
    }
    text.join("\n")
}
