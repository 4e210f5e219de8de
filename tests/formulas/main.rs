//! Formulas: read and printed, differentiated and simplified, and propagated through.

#[path = "../common/mod.rs"]
mod common;

mod calculus;
mod limits;
mod parse;
mod propagation;
