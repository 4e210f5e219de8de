//! The program as it is typed: options, files, streams, ends; and what `README.md` says of it.

#[path = "../cli_support/mod.rs"]
mod cli_support;

mod exit;
mod output;
mod readme;
mod sketch;
mod streams;
