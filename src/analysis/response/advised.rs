//! What a response says of margins and catches, in words for tables and screens.

use super::{Taking, Threshold, ThresholdKind};
use crate::model::{ParameterId, SpeciesId};

/// How a state is lost at the end of its band.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Edge {
    /// At this threshold of the response; of a band that no response was needed for, at this end's threshold of its own.
    Threshold(usize),
    /// Nothing happens up to the end of the range.
    Range,
    /// It could not be followed further.
    NotFollowed,
}

/// The interval of a control over which a state persists and is stable, around the present value.
#[derive(Clone, Debug, PartialEq)]
pub struct Band {
    /// The equilibrium, by its place in the scenario's list.
    pub equilibrium: usize,
    /// The parameter.
    pub parameter: ParameterId,
    /// The parameter's present value, in its own unit.
    pub present: f64,
    /// Lower and upper end, in the parameter's unit.
    pub ends: [f64; 2],
    /// What happens there.
    pub edges: [Edge; 2],
    /// The thresholds at the ends, where there are any.
    pub thresholds: [Option<Threshold>; 2],
}

impl Band {
    /// Distance to the nearest loss in the parameter's unit, and which end it is; `None` where neither end is a threshold.
    pub fn margin(&self) -> Option<(f64, usize)> {
        let distance = |end: usize| {
            let lost = matches!(self.edges[end], Edge::Threshold(_));
            lost.then_some(((self.ends[end] - self.present).abs(), end))
        };
        [distance(0), distance(1)].into_iter().flatten().min_by(|a, b| a.0.total_cmp(&b.0))
    }
}

/// The smallest move of all parameters with a range together that takes a state away (Dobson 1993).
#[derive(Clone, Debug, PartialEq)]
pub struct ClosestEdge {
    /// The equilibrium, by its place in the scenario's list.
    pub equilibrium: usize,
    /// What happens there.
    pub kind: ThresholdKind,
    /// Each parameter that moves, with its value at the edge.
    pub values: Vec<(ParameterId, f64)>,
    /// Length of the move: root of the sum of squares of moves, each in widths of the parameter's range.
    pub distance: f64,
    /// The state at the edge.
    pub state: Vec<f64>,
    /// What is left of the move at right angles to the surface there, relative to its length: 0 at a stationary point.
    pub residual: f64,
    /// Whether it lies within all ranges.
    pub within_ranges: bool,
}

/// What is known of how near a state is to being lost.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Margins {
    /// One for each parameter with a range, the nearest loss in widths of the range first.
    pub bands: Vec<Band>,
    /// The nearest found from several starts, and how many of them led to it: no proof that there is none nearer.
    pub closest: Option<(ClosestEdge, usize)>,
}

/// The largest equilibrium yield over stable states with all kept species.
#[derive(Clone, Debug, PartialEq)]
pub struct BestYield {
    /// What is largest: one of [`takings`](super::Response::takings), or `None` for the amounts of all harvests together.
    pub taking: Option<usize>,
    /// The yield, in its unit per time unit or step; where not attained, its supremum.
    pub amount: f64,
    /// The control there.
    pub at: f64,
    /// The state there.
    pub state: Vec<f64>,
    /// The branch that it lies on.
    pub branch: usize,
    /// Whether a stable state has it; otherwise it is only approached.
    pub attained: bool,
    /// The edge at which it is approached; `None` where it is attained, or the branch was not followed further.
    pub edge: Option<usize>,
    /// The nearest threshold at which the state would be lost, above or below, and the distance to it as a share of the
    /// control at the yield; `None` where there is none in the range.
    pub nearest: Option<(usize, f64)>,
}

/// The least control that removes a species that is to be removed.
#[derive(Clone, Debug, PartialEq)]
pub struct Removal {
    /// The species.
    pub species: SpeciesId,
    /// From this value on no stable state has it; `None` where there is no such value in the range.
    pub at: Option<f64>,
    /// The threshold there.
    pub threshold: Option<usize>,
    /// Whether from there on, up to the end of the range, a stable state without it is on the picture; otherwise it may
    /// live on in cycles.
    pub settles_without: bool,
}

/// Where a harvest's value is 0 and would fall on: the effort at which open access settles (Gordon 1954).
#[derive(Clone, Debug, PartialEq)]
pub struct OpenAccess {
    /// The harvest's name.
    pub harvest: String,
    /// The control there.
    pub at: f64,
    /// The state there.
    pub state: Vec<f64>,
    /// The branch that it lies on.
    pub branch: usize,
}

/// A pair of yields that neither control can raise without lowering the other.
#[derive(Clone, Debug, PartialEq)]
pub struct FrontPoint {
    /// The two controls.
    pub at: [f64; 2],
    /// The two yields, of the harvests in the order of the plan.
    pub yields: [f64; 2],
    /// The state there.
    pub state: Vec<f64>,
}

/// The best pairs of yields over two controls.
#[derive(Clone, Debug, PartialEq)]
pub struct Front {
    /// What the two harvests take, in the order of the plan.
    pub takings: [Taking; 2],
    /// By rising yield of the first; empty where the best of stable coexistence is nowhere at rest.
    pub points: Vec<FrontPoint>,
    /// The largest sum of both.
    pub total: Total,
    /// Whether it was looked for to the end.
    pub is_whole: bool,
}

/// The largest sum of two yields.
#[derive(Clone, Debug, PartialEq)]
pub enum Total {
    /// A stable state has it.
    At(FrontPoint),
    /// No stable state was found that has it; it may only be approached where states are lost.
    NotFound,
    /// The two are not of one unit, so there is no sum.
    OfDifferentUnits,
}

/// Why there are no best pairs.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum NoFront {
    /// So many harvests take what is to be kept; it needs two.
    Harvests(usize),
    /// This harvest takes more than one species.
    SeveralSpecies(String),
}

/// What the response says of catches.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Advice {
    /// For every amount taken, and for all together where there are several.
    pub best: Vec<BestYield>,
    /// For every species to be removed.
    pub removals: Vec<Removal>,
    /// For every harvest with price or cost.
    pub open_access: Vec<OpenAccess>,
}
