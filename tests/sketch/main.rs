//! The sketch: what is drawn, and how it reads as text.

#[path = "../sketch_support/mod.rs"]
mod sketch_support;

mod field;
mod text;
