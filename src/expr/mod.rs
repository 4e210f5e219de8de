//! Formulas: text → syntax tree → exact graph → tape.
//!
//! [`parse`](parse::parse) reads a formula and reports every slip with its place; [`graph`] shares, differentiates and
//! divides; [`tape`] evaluates. To add a function, add a row to [`builtin::BUILTINS`].

pub mod ast;
pub mod builtin;
pub mod constant;
pub mod function;
pub mod graph;
pub mod lex;
pub mod parse;
pub mod print;
pub mod slip;
pub mod tape;
