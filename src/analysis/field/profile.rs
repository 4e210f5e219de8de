//! A single species: its rate against its abundance.

use super::{Flow, Frame, Scale, Window, rounded};

/// The rate of a single species in every column of a frame.
#[derive(Clone, Debug, PartialEq)]
pub struct Profile {
    /// The cells; upwards is the rate, in the species' unit per unit of time, for a map what a step adds.
    pub frame: Frame,
    /// The rate in the middle of every column; `None` where it is not defined.
    pub rates: Vec<Option<f64>>,
}

/// The profile between two abundances; the height is chosen so that every rate, and 0, fits, on a linear scale.
pub fn profile(flow: &Flow, x: [f64; 2], scale: Scale, columns: usize, rows: usize) -> Profile {
    let scales = [scale, Scale::Linear];
    let line = Frame::scaled(Window { x, y: [0.0, 1.0] }, scales, columns, 2);
    let motion = flow.motion(&line);
    let rates: Vec<Option<f64>> = motion.x[..line.columns].iter().map(|&x| x.is_finite().then_some(x)).collect();
    let known = || rates.iter().flatten().copied();
    let (low, high) = (known().fold(0.0, f64::min), known().fold(0.0, f64::max));
    let y = match (low, high) {
        (0.0, 0.0) => [-1.0, 1.0],
        _ => [-rounded(-low), rounded(high)],
    };
    Profile { frame: Frame::scaled(Window { x, y }, scales, columns, rows), rates }
}
