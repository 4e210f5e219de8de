//! The response to a control, against closed forms and published thresholds.

#[path = "../common/mod.rs"]
mod common;

mod by_hand;
mod closest;
mod margins;
mod support;
mod yields;
