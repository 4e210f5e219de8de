//! What the program keeps between runs, what it offers to open, and how it notices that a file was changed.

#![expect(clippy::expect_used, reason = "without files and folders a test can only fail")]

mod catalogue;
mod memory;
mod watch;

use std::path::Path;

/// A model that is sound, with its title.
pub(crate) fn model(title: &str) -> String {
    format!("title: {title}\ntime: yr\nspecies: {{N: {{upper: 9}}}}\nchange: {{N: 1 - N}}\n")
}

pub(crate) fn write(path: &Path, text: &str) {
    std::fs::write(path, text).expect("a file that can be written");
}
