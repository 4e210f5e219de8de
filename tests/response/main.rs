//! The response to a control, against closed forms and published thresholds.

#[path = "../common/mod.rs"]
mod common;

mod branches;
mod by_hand;
mod closest;
mod front;
mod margins;
mod pictures;
mod setting;
mod support;
mod thresholds;
mod yields;
