//! Model files: what is read from them, and what is said about those that are wrong or suspect.

#[path = "../common/mod.rs"]
mod common;
#[path = "../load_support/mod.rs"]
mod load_support;

mod cases;
mod check_report;
mod contract;
mod draft;
mod errors;
mod limits;
mod lints;
mod odd;
mod scenarios;
mod units_check;
mod units_read;
