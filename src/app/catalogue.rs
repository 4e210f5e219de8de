//! Models to choose from, as plain data.

use super::Source;

/// Why a model is offered.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// It was named on the command line.
    Given,
    /// It is in the folder of scenarios.
    Folder,
    /// It was opened before.
    Recent,
    /// It is compiled in.
    Compiled,
}

/// A model to choose.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// Where it comes from.
    pub source: Source,
    /// Why it is offered.
    pub origin: Origin,
    /// Its title, harmless.
    pub title: String,
    /// Names of its species.
    pub species: Vec<String>,
    /// How many scenarios it has.
    pub scenarios: usize,
    /// What is wrong with it, with its place.
    pub problem: Option<String>,
}
