//! Formulas: text → syntax tree → exact graph → tape.
//!
//! [`parse`](parse::parse) reads a formula and reports every slip with its place; [`graph`] shares and differentiates;
//! [`tape`] evaluates. To add a function, add a row to [`builtin::BUILTINS`].

pub mod ast;
