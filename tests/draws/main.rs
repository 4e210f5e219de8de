//! Draws of uncertain parameters, and how sure is what is counted over them.
#![allow(clippy::panic, clippy::unwrap_used, clippy::expect_used, reason = "a test fails by panicking")]

mod counting;
mod coverage;
mod distributions;
mod plans;
mod points;
mod sensitivity;
mod support;
