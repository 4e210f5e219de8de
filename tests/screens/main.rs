//! The screens without a terminal: keys go in, what is shown comes out. [`bench::Bench`] is the way to try one.

#![allow(clippy::expect_used, clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

mod bench;
mod chooser;
mod interactions;
mod kept;
mod knock;
mod looks;
#[path = "../tables/markdown.rs"]
mod markdown;
mod readme;
mod response;
mod saved;
mod skeleton;
#[path = "../tables/tex.rs"]
mod tex;
mod texts;
mod values;
mod walk;
mod written;
