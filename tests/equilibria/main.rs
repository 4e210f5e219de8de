//! Equilibria: what the searches find, prove and leave open.

#[path = "../common/mod.rs"]
mod common;

mod assemblies;
mod cases;
mod communities;
mod families;
mod references;
mod searches;
mod starts;
