//! The response to a control, against closed forms and published thresholds.

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
mod setting;
mod support;
mod thresholds;
mod yields;
