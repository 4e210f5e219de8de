//! What velocities look like in the middle of every cell: thousands at once, so nothing is divided a second time.

use super::Frame;

/// The stretch of each axis in the middle of the cells of a frame; it depends on the place along that axis alone.
#[derive(Clone, Debug, PartialEq)]
pub struct Sight {
    across: Vec<f64>,
    up: Vec<f64>,
}

impl Sight {
    /// Of a frame.
    pub fn new(frame: &Frame) -> Self {
        let across = (0..frame.columns).map(|column| frame.stretch([frame.x(column as f64), frame.window.y[0]])[0]);
        let up = (0..frame.rows).map(|row| frame.stretch([frame.window.x[0], frame.y(row as f64)])[1]);
        Self { across: across.collect(), up: up.collect() }
    }

    /// A velocity in the middle of a cell of the frame as the eye sees it, in widths of a column.
    ///
    /// # Panics
    /// If the frame has no such cell.
    pub fn at(&self, column: usize, row: usize, [x, y]: [f64; 2]) -> [f64; 2] {
        [x * self.across[column], y * self.up[row]]
    }
}
