//! The outside world: files, streams, the clock, threads, signals and the terminal. Nothing below this module touches any.

pub mod catalogue;
pub mod clock;
pub mod errands;
pub mod files;
pub mod interface;
pub mod memory;
pub mod models;
pub mod progress;
pub mod signal;
pub mod solver;
pub mod tasks;
pub mod terminal;
pub mod watch;
pub mod workers;
