//! Models from files, from standard input, and those that are compiled in.

use std::path::Path;

use crate::diag::{Diagnostic, Sources};
use crate::model::load::{NoFiles, load};
use crate::model::{Model, Original};

use super::files::{read_model, sha256};

/// Name and text of a model that is compiled in.
#[derive(Clone, Copy, Debug)]
pub struct Compiled {
    /// What messages call it.
    pub name: &'static str,
    text: &'static str,
}

/// A model of this repository, under the name that it has there.
macro_rules! shipped {
    ($name:literal) => {
        Compiled { name: $name, text: include_str!(concat!("../../", $name)) }
    };
}

/// Those that need no tables beside them, and differ in kind; the first is shown when none is named.
pub const COMPILED: &[Compiled] = &[
    shipped!("scenarios/skarnby-bank.yaml"),
    shipped!("scenarios/harrowmere-moor.yaml"),
    shipped!("scenarios/ombrel-reef.yaml"),
    shipped!("scenarios/aldrun-river.yaml"),
    shipped!("scenarios/varrow-island.yaml"),
];

/// What reading a model came to.
pub enum Reading {
    /// A sound model.
    Model(Box<Original>),
    /// Everything that is wrong with it.
    Wrong(Sources, Vec<Diagnostic>),
    /// It could not be read at all, and why.
    Unreadable(String),
}

/// Reads the model at `path`; without one, the first that is compiled in.
pub fn read(path: Option<&Path>) -> Reading {
    let Some(path) = path else { return compiled(&COMPILED[0]) };
    match read_model(path) {
        Ok(found) => {
            let loaded = load(&found.name, &found.bytes, &found.tables);
            reading(loaded, sha256(&found.bytes), || found.tables.into_read())
        }
        Err(error) => Reading::Unreadable(format!("{error:#}")),
    }
}

impl Compiled {
    /// Its text.
    pub fn text(&self) -> &'static str {
        self.text
    }
}

/// Reads a model that is compiled in.
pub fn compiled(model: &Compiled) -> Reading {
    let loaded = load(model.name, model.text.as_bytes(), &NoFiles);
    reading(loaded, sha256(model.text.as_bytes()), Vec::new)
}

fn reading(
    (model, sources, found): (Option<Model>, Sources, Vec<Diagnostic>),
    sha256: String,
    tables: impl FnOnce() -> Vec<(String, String)>,
) -> Reading {
    match model {
        Some(model) => Reading::Model(Box::new(Original { model, sha256, tables: tables() })),
        None => Reading::Wrong(sources, found),
    }
}
