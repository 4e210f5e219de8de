//! The outside world: files and streams. Nothing below this module touches any.

pub mod files;
