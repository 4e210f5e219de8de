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

mod advice;
mod advised;
mod bands;
pub mod chart;
mod charted;
mod closest;
mod cover;
mod curve;
mod defining;
pub mod equations;
mod events;
mod footing;
mod front;
mod harvested;
pub mod locate;
mod margins;
mod open_access;
mod peak;
mod picture;
mod piece;
mod ray;
mod registry;
mod removal;
mod respond;
mod stations;
mod stretches;
mod surface;
mod switch;
mod terrain;
mod types;
mod undefined;
mod walk;
mod watch;
mod yields;

pub use advice::advise;
pub use advised::{
    Advice, Band, BestYield, ClosestEdge, Edge, Front, FrontPoint, Margins, NoFront, OpenAccess, Removal, Total,
};
pub use bands::band;
pub use chart::chart;
pub use charted::{Chart, ChartCurve, ChartPoint, Region, RegionState};
pub use front::front;
pub use margins::{bands, margins};
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
