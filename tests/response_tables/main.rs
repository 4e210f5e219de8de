//! `restpoint response`: what a threshold means, the forms read back by readers that are not ours, how runs end.
#![expect(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

#[path = "../cli_support/mod.rs"]
mod cli_support;
mod command;
mod forms;
mod meanings;
mod support;
#[path = "../table_support/mod.rs"]
mod table_support;
#[path = "../tables/tex.rs"]
mod tex;
mod thinned;
