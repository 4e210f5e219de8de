//! Where paths go, and the integrators that follow them.

#[path = "../common/mod.rs"]
mod common;

mod destinations;
mod ode;
