//! What is shown of a model and its results, as text and as data; no terminal, no files.
//!
//! [`check`] says what was understood of a model file, [`table`] what equilibria its scenarios have.

pub mod check;
pub mod table;
