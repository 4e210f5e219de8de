//! The linear part of equilibria, what the nonlinear terms add, and what both mean.

#[path = "../common/mod.rs"]
mod common;

mod cases;
mod criteria;
mod measures_cases;
mod measures_references;
mod nonlinear;
mod types;
mod written;
