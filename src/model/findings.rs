//! The errors of one file, as many as are worth showing.

use std::fmt::Display;

use super::messages::Message;
use crate::diag::{Diagnostic, Location};

/// Errors that are kept; a file with more has one cause for most of them.
const LIMIT: usize = 100;

/// Errors as they were found; beyond the limit they are counted only, which costs nothing.
#[derive(Debug, Default)]
pub(super) struct Findings {
    found: Vec<Diagnostic>,
    /// Where the first error beyond the limit was, and how many there were.
    more: Option<(Location, usize)>,
}

impl Findings {
    pub(super) fn say(&mut self, message: Message, at: Location, values: &[&dyn Display]) {
        if self.is_full() {
            self.count(at);
        } else {
            self.found.push(message.at(at, values));
        }
    }

    pub(super) fn report(&mut self, diagnostic: Diagnostic) {
        if self.is_full() {
            self.count(diagnostic.at);
        } else {
            self.found.push(diagnostic);
        }
    }

    /// Two like keys in one map.
    pub(super) fn twice(&mut self, at: Location, key: &str, first: Location) {
        if self.is_full() {
            self.count(at);
        } else {
            self.found.push(Message::DuplicateKey.at(at, &[&key]).related(first, "first here"));
        }
    }

    fn count(&mut self, at: Location) {
        self.more = Some(self.more.map_or((at, 1), |(first, count)| (first, count + 1)));
    }

    /// Whether what is found from now on is counted only, so that no advice need be thought of.
    pub(super) fn is_full(&self) -> bool {
        self.found.len() >= LIMIT
    }

    pub(super) fn is_empty(&self) -> bool {
        self.found.is_empty()
    }

    /// In the order of the text, with the number of those left out at the end.
    pub(super) fn into_sorted(mut self) -> Vec<Diagnostic> {
        self.found.sort_by_key(|diagnostic| diagnostic.at);
        if let Some((at, count)) = self.more {
            self.found.push(Message::MoreErrors.at(at, &[&count]));
        }
        self.found
    }
}
