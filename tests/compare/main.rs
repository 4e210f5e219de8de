//! Scenarios side by side: which equilibrium is which, and how that is shown.
#![expect(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

#[path = "../common/mod.rs"]
mod common;

mod command;
mod formats;
mod passage;
mod support;
#[path = "../table_support/mod.rs"]
mod table_support;
#[path = "../tables/tex.rs"]
mod tex;
