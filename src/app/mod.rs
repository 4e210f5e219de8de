//! The interface's state, in plain data that knows no terminal.

pub mod catalogue;
pub mod memory;
