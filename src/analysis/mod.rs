//! What the equations imply: equilibria, and all that is asked of them.
//!
//! Takes a model's rows and a budget, returns results that say why they stopped. Nothing here reads a clock, starts a
//! thread or prints: the budget's `stop` and the order of work come from outside.

pub mod equilibria;
