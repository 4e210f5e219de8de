//! restpoint: every equilibrium of a harvested community, with a proof where one is possible.
//!
//! The library is the program without its terminal. Data flow one way: a model file becomes a checked
//! [`model::Model`], its formulas an exact graph ([`expr::graph`]), the graph a tape ([`expr::tape`]) that runs over
//! numbers, lanes, intervals and jets. Start reading at [`model`]; the module map stands in `DEVELOPERS.md`.

pub mod analysis;
pub mod app;
pub mod cli;
pub mod diag;
pub mod expr;
pub mod model;
pub mod num;
pub mod report;
pub mod shell;
