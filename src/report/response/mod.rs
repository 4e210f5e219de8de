//! The response of a scenario's equilibria to a control, as it is shown.
//!
//! [`plot`] draws it in characters.

pub mod plot;
