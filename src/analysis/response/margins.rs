//! How near a stable state is to being lost: along every parameter with a range, and in all of them together.
//!
//! Each parameter is moved alone, both ways from its present value, and the state followed until it is lost or the range
//! ends (`ray`); `closest` looks for the smallest move of all of them. Start at [`margins`].

use super::closest;
use super::equations::Equations;
use super::footing::{Footing, Line, Standing};
use super::locate::describe::Describer;
use super::locate::{Event, Located, Locator, Sign};
use super::ray::{Course, Ray, scales};
use super::watch::Watch;
use super::{Arm, Band, ClosestEdge, Edge, Margins, Threshold, ThresholdKind};
use crate::analysis::equilibria::{Budget, Equilibrium};
use crate::analysis::subject::Subject;
use crate::expr::graph::Operation;
use crate::model::{Parameter, ParameterId};

/// A parameter that moves.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Mover {
    pub(super) parameter: ParameterId,
    /// Its value in the scenario.
    pub(super) present: f64,
    /// Lower and upper end of its range.
    pub(super) range: [f64; 2],
    /// What it may be at all.
    pub(super) limits: [f64; 2],
}

impl Mover {
    pub(super) fn width(&self) -> f64 {
        self.range[1] - self.range[0]
    }
}

/// Everything that moves or stays as a state is followed.
pub(super) struct Setting<'s> {
    pub(super) equations: Equations,
    pub(super) locator: Locator,
    pub(super) describer: Describer,
    pub(super) footing: Footing,
    pub(super) watch: Watch,
    pub(super) movers: Vec<Mover>,
    /// Abundances of those who move.
    pub(super) x: Vec<f64>,
    pub(super) stop: &'s dyn Fn() -> bool,
}

impl Setting<'_> {
    /// The state followed from the present values along a direction, given in widths of the ranges, to t = `limit`.
    pub(super) fn follow(&mut self, direction: &[f64], limit: f64) -> Course {
        let line = Line {
            base: self.movers.iter().map(|mover| mover.present).collect(),
            direction: self.movers.iter().zip(direction).map(|(mover, part)| part * mover.width()).collect(),
        };
        let scale = scales(&self.footing, &self.x, &self.equations.sides);
        let standing = Standing::new(&self.footing, line, scale);
        let mut ray = Ray {
            equations: &mut self.equations,
            locator: &mut self.locator,
            watch: &self.watch,
            standing,
            stop: self.stop,
        };
        ray.follow(&self.x, limit)
    }
}

/// The bands of an equilibrium, by its place in the scenario's list, along every parameter with a range, the nearest loss
/// first; and the closest edge in all of them together. Empty for a state that is not stable, and where no parameter has a
/// range. Once the budget's `stop` says so the rest counts as not followed.
pub fn margins(subject: &mut Subject<'_>, list: &[Equilibrium], which: usize, budget: &Budget<'_>) -> Margins {
    let stop = || (budget.stop)();
    let found = moved_alone(subject, list, which, &stop);
    let (movers, bands): (Vec<Mover>, Vec<Band>) = found.into_iter().unzip();
    let closest = list.get(which).and_then(|start| closest::closest(subject, start, &movers, &stop));
    Margins { bands, closest: closest.map(|(edge, count)| (ClosestEdge { equilibrium: which, ..edge }, count)) }
}

/// The bands of [`margins`] alone, which take a small part of its time.
pub fn bands(subject: &mut Subject<'_>, list: &[Equilibrium], which: usize, budget: &Budget<'_>) -> Vec<Band> {
    let stop = || (budget.stop)();
    moved_alone(subject, list, which, &stop).into_iter().map(|(_, band)| band).collect()
}

/// Every parameter with its band, the nearest loss first.
fn moved_alone(
    subject: &Subject<'_>,
    list: &[Equilibrium],
    which: usize,
    stop: &dyn Fn() -> bool,
) -> Vec<(Mover, Band)> {
    let Some(start) = list.get(which) else { return Vec::new() };
    let mut bands: Vec<(Mover, Band)> = Vec::new();
    for mover in movers(subject) {
        // Each with equations of its own: other parameters that are 0 then take their terms with them.
        let Some(mut setting) = Setting::new(subject, start, &[mover], stop) else { return Vec::new() };
        bands.push((mover, band(&mut setting, which)));
    }
    let distance =
        |(mover, band): &(Mover, Band)| band.margin().map_or(f64::INFINITY, |(distance, _)| distance / mover.width());
    bands.sort_by(|a, b| distance(a).total_cmp(&distance(b)));
    bands
}

impl<'s> Setting<'s> {
    /// `None` where the state is not stable, or cannot be followed.
    pub(super) fn new(
        subject: &Subject<'_>,
        start: &Equilibrium,
        movers: &[Mover],
        stop: &'s dyn Fn() -> bool,
    ) -> Option<Self> {
        let controls: Vec<ParameterId> = movers.iter().map(|mover| mover.parameter).collect();
        let mut equations = Equations::new(subject, &controls);
        let present: Vec<bool> = (0..start.state.len()).map(|i| start.has(i)).collect();
        let footing = Footing::new(&mut equations, &present)?;
        let watch = Watch::new(&mut equations, &footing.face)?;
        let x: Vec<f64> = footing.face.moving.iter().map(|&i| start.state[i]).collect();
        let inputs: Vec<f64> = x.iter().copied().chain(movers.iter().map(|mover| mover.present)).collect();
        let seen = watch.at(&inputs)?;
        let describer = Describer::new(subject, &controls);
        let movers = movers.to_vec();
        let setting = Self { equations, locator: Locator::new(), describer, footing, watch, movers, x, stop };
        setting.watch.is_stable(&seen).then_some(setting)
    }
}

/// Parameters with a range that are used by the equations, in the file's order.
fn movers(subject: &Subject<'_>) -> Vec<Mover> {
    let mut used = vec![false; subject.model.parameters.len()];
    for node in subject.graph.reachable(&subject.plan.rows) {
        if let Operation::Parameter(i) = subject.graph.operation(node) {
            used[i] = true;
        }
    }
    let mover = |(i, parameter): (usize, &Parameter)| {
        let range = parameter.range.as_ref()?.value;
        let present = subject.plan.values[i];
        // A range that begins at 0 is of something that has no values below.
        let least = if range[0] == 0.0 && present >= 0.0 { 0.0 } else { f64::NEG_INFINITY };
        let limits = [parameter.min.map_or(least, |min| min.max(least)), parameter.max.unwrap_or(f64::INFINITY)];
        (used[i] && range[0] < range[1]).then_some(Mover { parameter: ParameterId(i), present, range, limits })
    };
    subject.model.parameters.iter().enumerate().filter_map(mover).collect()
}

/// The band along the one parameter that moves.
fn band(setting: &mut Setting<'_>, which: usize) -> Band {
    let mover = setting.movers[0];
    let mut band = Band {
        equilibrium: which,
        parameter: mover.parameter,
        present: mover.present,
        ends: [mover.present; 2],
        edges: [Edge::Range; 2],
        thresholds: [None, None],
    };
    for side in 0..2 {
        let sign = if side == 0 { -1.0 } else { 1.0 };
        let room = (sign * (mover.range[side] - mover.present) / mover.width()).max(0.0);
        let at = |t: f64| mover.present + sign * t * mover.width();
        match setting.follow(&[sign], room) {
            // A present value beyond the range has the range's end on one side behind it.
            Course::Reached if room > 0.0 => band.ends[side] = mover.range[side],
            Course::Reached => {}
            Course::NotFollowed { t } => {
                band.ends[side] = at(t);
                band.edges[side] = Edge::NotFollowed;
            }
            Course::Lost { located, around, .. } => {
                let threshold = threshold(setting, &located, around, side == 0);
                band.ends[side] = threshold.at;
                band.edges[side] = Edge::Threshold(side);
                band.thresholds[side] = Some(threshold);
            }
        }
    }
    band
}

/// What was located as a threshold of one parameter; the state that is lost there lies above it or below.
fn threshold(setting: &mut Setting<'_>, located: &Located, around: [Vec<f64>; 2], above: bool) -> Threshold {
    let [before, after] = around;
    let (before, after) = if above { (&after, &before) } else { (&before, &after) };
    let face = &setting.footing.face;
    // A described kink needs the points in rising order of the parameter; nothing else is asked of what is looked for.
    let event = Event { face, sign: Sign::Turn, before, after };
    let described = setting.describer.threshold(&mut setting.equations, &event, located);
    let present = (0..located.state.len()).map(|i| face.moving.contains(&i)).collect();
    let arm = Arm { branch: None, above, kind: None, stable: Some(true), feasible: true, present };
    Threshold { arms: vec![arm], ..described }
}

/// Whether a threshold takes the state away for good, rather than out of the picture.
pub(super) fn is_loss(kind: ThresholdKind, located: &Located, setting: &Setting<'_>) -> bool {
    // Above the box a state is as well as below it; nobody is lost.
    let is_above = |i: usize| located.state[i] >= 0.5 * setting.equations.sides[i][1];
    kind != ThresholdKind::Exit || !located.species.is_some_and(is_above)
}
