//! What becomes of every equilibrium as one control varies: branches, thresholds, yields, margins; two controls as a chart.
//!
//! The words here are what tables and screens show; each analysis fills them from its own file. All of it is numerical
//! unless something says that it is proved: branches are followed (Keller 1977), thresholds located as roots of a system
//! that defines them (Kuznetsov 2004, ch. 10), and only the count of equilibria between stations may be proved. `equations`
//! has a scenario's rows with controls as inputs; start there for anything that moves a parameter.
//!
//! [`respond()`] makes the picture of one control: `picture` keeps what was followed, `piece` has a face's equations between
//! kinks, `curve` points of a branch, `walk` goes along it and `events` says what changed on a step, `switch` what that
//! means and where else it leads, `locate` where exactly it is, `cover` proves that nothing is missing, `stations` searches
//! along the range. [`chart()`] is for two controls.

pub mod chart;
mod cover;
mod curve;
mod defining;
pub mod equations;
mod events;
pub mod locate;
mod picture;
mod piece;
mod registry;
mod respond;
mod stations;
mod switch;
mod types;
mod undefined;
mod walk;

pub use chart::chart;
pub use respond::respond;

use nalgebra::Complex;

use super::linearise::Kind;
use crate::model::{ParameterId, SpeciesId};

/// A parameter that is varied, in its own unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Control {
    /// Which.
    pub parameter: ParameterId,
    /// Lower end of the range looked at.
    pub from: f64,
    /// Upper end, above the lower.
    pub to: f64,
    /// Its value in the scenario, perhaps outside the range.
    pub present: f64,
}

/// Where the set of equilibria, or what they are, changes.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ThresholdKind {
    /// Two equilibria meet and are gone.
    Fold,
    /// Two branches cross and exchange stability; often a community with and without a species.
    Transcritical,
    /// A branch crosses one that turns back there.
    Pitchfork,
    /// A pair of eigenvalues crosses the imaginary axis: cycles are born.
    Hopf,
    /// A multiplier passes −1: a cycle of two steps is born.
    PeriodDoubling,
    /// A pair of multipliers crosses the unit circle.
    NeimarkSacker,
    /// The state lies on a kink of `min`, `max`, `abs`, `ramp` or `clamp`.
    BorderCollision,
    /// An abundance becomes negative, or leaves the search box.
    Exit,
    /// At this value there is a line of equilibria.
    Continuum,
    /// Two folds meet; on a chart of two controls.
    Cusp,
    /// A fold meets a Hopf threshold in a double eigenvalue 0; on a chart of two controls.
    BogdanovTakens,
    /// A Hopf threshold turns from soft to hard; on a chart of two controls.
    GeneralisedHopf,
}

/// What is born at a threshold is stable (soft) or unstable (hard): whether the community drifts or jumps.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Criticality {
    /// What comes instead is stable and near: amplitude grows from 0.
    Soft,
    /// What is near is unstable: the community jumps to somewhere else.
    Hard,
}

/// A part of a branch that begins at a threshold.
#[derive(Clone, Debug, PartialEq)]
pub struct Arm {
    /// The branch, where it was followed.
    pub branch: Option<usize>,
    /// Whether it lies at larger values of the control.
    pub above: bool,
    /// Its type beside the threshold; `None` where it has no linear part.
    pub kind: Option<Kind>,
    /// Whether it is stable there.
    pub stable: Option<bool>,
    /// Whether no abundance is negative there, and none outside the search box.
    pub feasible: bool,
    /// Who is present.
    pub present: Vec<bool>,
}

/// A threshold (critical value) of one control.
#[derive(Clone, Debug, PartialEq)]
pub struct Threshold {
    /// What happens there.
    pub kind: ThresholdKind,
    /// The control's value.
    pub at: f64,
    /// The state of all species.
    pub state: Vec<f64>,
    /// Eigenvalues there in the contract's order; of a border collision those below the kink in the control, of a state
    /// without linear part none.
    pub eigenvalues: Vec<Complex<f64>>,
    /// Of a border collision those on the other side of the kink.
    pub other_side: Option<Vec<Complex<f64>>>,
    /// Of Hopf, pitchfork, period doubling and Neimark–Sacker thresholds, where a coefficient decides.
    pub criticality: Option<Criticality>,
    /// Whose abundance is 0, or leaves the box; of a transcritical threshold who comes or goes.
    pub species: Option<SpeciesId>,
    /// The parts of branches that meet there.
    pub arms: Vec<Arm>,
    /// Of a border collision the two quantities that are equal there, as formulas.
    pub kink: Option<[String; 2]>,
    /// The last correction of its defining system in the control, in the control's unit: how well it is known.
    pub error: f64,
}

/// What a harvest gives: one column of numbers along a branch.
#[derive(Clone, Debug, PartialEq)]
pub struct Taking {
    /// The harvest's name.
    pub harvest: String,
    /// An amount of this species, per time unit or step; `None` for its value: prices times amounts less cost.
    pub species: Option<SpeciesId>,
}

/// A point of a branch.
#[derive(Clone, Debug, PartialEq)]
pub struct Point {
    /// The control's value.
    pub at: f64,
    /// The state of all species.
    pub state: Vec<f64>,
    /// Its type by the linear part; `None` where it has none.
    pub kind: Option<Kind>,
    /// Whether all eigenvalues attract; `None` where the linear part does not say.
    pub stable: Option<bool>,
    /// Leading eigenvalue; for a map, multiplier.
    pub leading: Option<Complex<f64>>,
    /// Whether no abundance is negative, and none outside the search box.
    pub feasible: bool,
    /// One number for each [`Response::takings`]; `None` where it has no value.
    pub takings: Vec<Option<f64>>,
    /// The threshold that the point is.
    pub threshold: Option<usize>,
}

/// How a branch ends.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Ending {
    /// At an end of the control's range.
    Range,
    /// Where it began: it is closed.
    Closed,
    /// At a threshold beyond which it is not followed.
    Threshold(usize),
    /// Rates have no value, or no derivative, beyond.
    Undefined,
    /// Far outside the search box, or with an abundance far below 0.
    Far,
    /// It could not be followed further, or not in the steps allowed.
    Lost,
    /// It was told to stop.
    Stopped,
}

/// An equilibrium followed over the range.
#[derive(Clone, Debug, PartialEq)]
pub struct Branch {
    /// Who is present along it (an abundance may still pass through 0).
    pub present: Vec<bool>,
    /// Its points in order; the control need not be monotone.
    pub points: Vec<Point>,
    /// How it ends at the first point, and at the last.
    pub ends: [Ending; 2],
    /// Equilibria of the scenario's list that it passes through at the control's present value.
    pub equilibria: Vec<usize>,
}

/// A value of the control at which the certified search was run.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Station {
    /// The control's value.
    pub at: f64,
    /// Equilibria found there.
    pub found: usize,
    /// Whether it is proved that the box holds no others there.
    pub complete: bool,
}

/// A part of the range over which it is not proved that the picture has every equilibrium.
#[derive(Clone, Debug, PartialEq)]
pub struct Gap {
    /// Lower end.
    pub from: f64,
    /// Upper end; the same for a single value.
    pub to: f64,
    /// Why.
    pub reason: GapReason,
}

/// Why a part of the range is not proved.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum GapReason {
    /// Branches meet in it, or come so near that the count could not be proved: around a threshold.
    Meeting,
    /// The search left something undecided at its ends.
    Unresolved,
    /// A state that the search found could not be joined to a branch.
    Unjoined,
    /// The model has no value there.
    Undefined,
    /// The budget was spent.
    Budget,
}

/// Every equilibrium over the range of a control.
#[derive(Clone, Debug, PartialEq)]
pub struct Response {
    /// What was varied.
    pub control: Control,
    /// What harvests give: columns of numbers along the branches.
    pub takings: Vec<Taking>,
    /// By number present, then by who is present, then as found.
    pub branches: Vec<Branch>,
    /// By rising value of the control.
    pub thresholds: Vec<Threshold>,
    /// Where the certified search was run, by rising value.
    pub stations: Vec<Station>,
    /// What is not proved to be whole, by rising value; empty where every equilibrium of the range is on the picture.
    pub gaps: Vec<Gap>,
    /// Parts of the range in which the model has no value, with what is wrong.
    pub undefined: Vec<(f64, f64, String)>,
}

impl Response {
    /// Whether it is proved that no equilibrium in the box is missing, at any value but the thresholds themselves.
    pub fn is_complete(&self) -> bool {
        self.gaps.is_empty()
    }
}

/// How a state is lost at the end of its band.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Edge {
    /// At this threshold of the response.
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
    /// What is largest: one of [`Response::takings`], or `None` for the amounts of all harvests together.
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
    /// The edge at which it is approached; `None` where it is attained, or the range ends there.
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
