//! The entries of the chooser, and completions of a typed path, as plain data.
//!
//! They are found by `shell::catalogue`. All texts here are harmless to a terminal.

use super::Source;

/// Why a model is listed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// It was named on the command line.
    Given,
    /// It lies in the folder of models.
    Folder,
    /// It was opened recently.
    Recent,
    /// It comes with the program.
    Compiled,
}

/// A model that can be chosen.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Entry {
    /// Where it is read from.
    pub source: Source,
    /// Why it is listed.
    pub origin: Origin,
    /// What its file is called, as it is shown.
    pub name: String,
    /// What it calls itself; empty where it could not be read.
    pub title: String,
    /// The names of its species.
    pub species: Vec<String>,
    /// How many scenarios it has.
    pub scenarios: usize,
    /// Why it cannot be used: the first error as `file:line:column: message`.
    pub problem: Option<String>,
}

/// What a typed path could become.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Completion {
    /// The text, as far as all that begin with it agree.
    pub text: String,
    /// Those that begin with it, in order; a folder ends in `/`. Not all where there are many.
    pub candidates: Vec<String>,
}
