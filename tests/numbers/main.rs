//! Intervals, numbers of 32 digits and eigenvalues: pure numerics.

mod double_arithmetic;
mod interval_arithmetic;
mod interval_functions;
mod interval_references;
mod interval_support;
mod spectra;
