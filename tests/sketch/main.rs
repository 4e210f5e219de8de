//! The sketch: what is drawn, and how it reads as text; and the other instruments that are drawn in cells.

#[path = "../sketch_support/mod.rs"]
mod sketch_support;

mod divides;
mod extras;
mod field;
mod knocks;
mod text;
