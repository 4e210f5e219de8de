//! The table: its columns, its formats, its JSON against the contract.

#[path = "../cli_support/mod.rs"]
mod cli_support;
#[path = "../common/mod.rs"]
mod common;
#[path = "../table_support/mod.rs"]
mod table_support;

mod cases;
mod columns;
mod compact;
mod formats;
mod json;
mod markdown;
mod tex;
mod text;
