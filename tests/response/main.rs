//! The response to a control, against closed forms and published thresholds.

#![allow(clippy::expect_used, clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

#[path = "../common/mod.rs"]
mod common;

mod branches;
mod by_hand;
mod chart;
mod closest;
mod front;
mod located;
mod margins;
mod pictures;
mod plot;
mod setting;
mod support;
mod thresholds;
mod yields;
