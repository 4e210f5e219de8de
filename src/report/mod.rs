//! What is shown of a model and its results, as text and as data; no terminal, no files.
//!
//! [`check`] says what was understood of a model file.

pub mod check;
