//! What the sketch shows: axes, window, point. One for all scenarios, so that they can be compared.

use super::Hold;
use crate::analysis::field::{LINEAR, Scale, Window};

/// How the sketch is looked at.
#[derive(Clone, Debug, PartialEq)]
pub struct Sketch {
    /// Species across and upwards; without, as the model says.
    pub axes: Option<[usize; 2]>,
    /// The part of the plane; without, all equilibria and today's stocks.
    pub window: Option<Window>,
    /// How abundances lie along the axes.
    pub scales: [Scale; 2],
    /// The point, along the axes.
    pub point: Option<[f64; 2]>,
    /// Whether the path to the point is shown as well as that from it.
    pub backwards: bool,
    /// What the arrows move.
    pub hold: Option<Hold>,
}

impl Default for Sketch {
    fn default() -> Self {
        Self { axes: None, window: None, scales: LINEAR, point: None, backwards: false, hold: None }
    }
}
