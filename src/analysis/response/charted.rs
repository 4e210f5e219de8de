//! What a chart of two controls has, in words for tables and screens.

use super::{Control, ThresholdKind};
use crate::analysis::linearise::Kind;

/// A curve of thresholds over two controls.
#[derive(Clone, Debug, PartialEq)]
pub struct ChartCurve {
    /// What happens on it.
    pub kind: ThresholdKind,
    /// Whether it bounds a stable state, along its length: one entry a point.
    pub bounds_stable: Vec<bool>,
    /// The controls, point by point.
    pub points: Vec<[f64; 2]>,
    /// The state at each point.
    pub states: Vec<Vec<f64>>,
    /// Whether it is closed.
    pub closed: bool,
}

/// A point at which curves of a chart meet or change.
#[derive(Clone, Debug, PartialEq)]
pub struct ChartPoint {
    /// A cusp, Bogdanov–Takens or generalised Hopf point.
    pub kind: ThresholdKind,
    /// The two controls.
    pub at: [f64; 2],
    /// The state there.
    pub state: Vec<f64>,
    /// The last correction of its defining system in either control.
    pub error: f64,
}

/// One equilibrium of a region: who is present, and its type.
#[derive(Clone, Debug, PartialEq)]
pub struct RegionState {
    /// Who is present.
    pub present: Vec<bool>,
    /// Its type; `None` where it has no linear part.
    pub kind: Option<Kind>,
}

/// A part of the chart in which number and types of equilibria are the same.
#[derive(Clone, Debug, PartialEq)]
pub struct Region {
    /// A point inside, as far from its border as was found.
    pub inside: [f64; 2],
    /// The equilibria there, in the order of the list.
    pub equilibria: Vec<RegionState>,
    /// Whether it is proved that the box holds no others at that point.
    pub complete: bool,
}

/// The chart of two controls.
#[derive(Clone, Debug, PartialEq)]
pub struct Chart {
    /// What was varied: across, and upwards.
    pub controls: [Control; 2],
    /// Curves of thresholds.
    pub curves: Vec<ChartCurve>,
    /// Points on them.
    pub points: Vec<ChartPoint>,
    /// Regions between them.
    pub regions: Vec<Region>,
    /// A grid of cells row by row from the lowest: the region that the middle of each belongs to; `None` where it is not
    /// known.
    pub cells: Vec<Option<usize>>,
    /// Columns and rows of that grid.
    pub grid: [usize; 2],
}
