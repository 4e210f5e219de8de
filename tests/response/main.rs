//! The response to a control, against closed forms and published thresholds.

#[path = "../common/mod.rs"]
mod common;

mod branches;
mod chart;
mod located;
mod setting;
mod thresholds;
