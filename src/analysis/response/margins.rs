//! How near a stable state is to being lost: along every parameter with a range, and in all of them together.
//!
//! Each parameter is moved alone, both ways from its present value, and the state followed until it is lost or the range
//! ends (`ray`); `closest` looks for the smallest move of all of them. Start at [`margins`].

use super::closest;
use super::equations::Equations;
use super::footing::{Footing, Line, Standing};
use super::locate::{Located, Locator};
use super::ray::{Course, Ray, scales};
use super::watch::Watch;
use super::{Arm, Band, Edge, Margins, Threshold, ThresholdKind};
use crate::analysis::equilibria::{Budget, Equilibrium};
use crate::analysis::subject::Subject;
use crate::model::{ParameterId, SpeciesId};

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
    let Some(mut setting) = setting(subject, list, which, &stop) else { return Margins::default() };
    let mut bands: Vec<Band> = (0..setting.movers.len()).map(|place| band(&mut setting, which, place)).collect();
    let distance = |band: &Band| {
        let width = |mover: &Mover| if mover.parameter == band.parameter { mover.width() } else { f64::NAN };
        let width = setting.movers.iter().map(width).find(|width| !width.is_nan()).unwrap_or(f64::NAN);
        band.margin().map_or(f64::INFINITY, |(distance, _)| distance / width)
    };
    bands.sort_by(|a, b| distance(a).total_cmp(&distance(b)));
    let closest = closest::closest(&mut setting, which, &bands);
    Margins { bands, closest }
}

/// `None` where there is nothing to be moved, or the state is not stable.
fn setting<'s>(
    subject: &mut Subject<'_>,
    list: &[Equilibrium],
    which: usize,
    stop: &'s dyn Fn() -> bool,
) -> Option<Setting<'s>> {
    let start = list.get(which)?;
    let movers = movers(subject);
    if movers.is_empty() {
        return None;
    }
    let controls: Vec<ParameterId> = movers.iter().map(|mover| mover.parameter).collect();
    let mut equations = Equations::new(subject, &controls);
    let present: Vec<bool> = (0..start.state.len()).map(|i| start.has(i)).collect();
    let footing = Footing::new(&mut equations, &present)?;
    let watch = Watch::new(&mut equations, &footing.face)?;
    let x: Vec<f64> = footing.face.moving.iter().map(|&i| start.state[i]).collect();
    let inputs: Vec<f64> = x.iter().copied().chain(movers.iter().map(|mover| mover.present)).collect();
    let seen = watch.at(&inputs)?;
    let setting = Setting { equations, locator: Locator::new(), footing, watch, movers, x, stop };
    setting.watch.is_stable(&seen).then_some(setting)
}

/// Parameters with a range that are used by the equations, in the file's order.
fn movers(subject: &Subject<'_>) -> Vec<Mover> {
    let mover = |(i, parameter): (usize, &crate::model::Parameter)| {
        let range = parameter.range.as_ref()?.value;
        let limits = [parameter.min.unwrap_or(f64::NEG_INFINITY), parameter.max.unwrap_or(f64::INFINITY)];
        let present = subject.plan.values[i];
        (range[0] < range[1]).then_some(Mover { parameter: ParameterId(i), present, range, limits })
    };
    subject.model.parameters.iter().enumerate().filter_map(mover).collect()
}

/// The band along one parameter.
fn band(setting: &mut Setting<'_>, which: usize, place: usize) -> Band {
    let mover = setting.movers[place];
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
        let mut direction = vec![0.0; setting.movers.len()];
        direction[place] = sign;
        let at = |t: f64| mover.present + sign * t * mover.width();
        match setting.follow(&direction, room) {
            // A present value beyond the range has the range's end on one side behind it.
            Course::Reached if room > 0.0 => band.ends[side] = mover.range[side],
            Course::Reached => {}
            Course::NotFollowed { t } => {
                band.ends[side] = at(t);
                band.edges[side] = Edge::NotFollowed;
            }
            Course::Lost { located, .. } => {
                let threshold = threshold(setting, &located, place, side == 0);
                band.ends[side] = threshold.at;
                band.edges[side] = Edge::Threshold(side);
                band.thresholds[side] = Some(threshold);
            }
        }
    }
    band
}

/// What was located as a threshold of one parameter; the state that is lost there lies above it or below.
fn threshold(setting: &Setting<'_>, located: &Located, place: usize, above: bool) -> Threshold {
    let controls = &located.point[located.point.len() - setting.movers.len()..];
    let face = &setting.footing.face;
    let inputs: Vec<f64> = face.moving.iter().map(|&i| located.state[i]).chain(controls.iter().copied()).collect();
    let seen = setting.watch.at(&inputs);
    let present = (0..located.state.len()).map(|i| face.moving.contains(&i)).collect();
    Threshold {
        kind: located.kind,
        at: controls[place],
        state: located.state.clone(),
        eigenvalues: seen.map(|seen| setting.watch.eigenvalues(&seen)).unwrap_or_default(),
        other_side: None,
        criticality: None,
        species: located.species.map(SpeciesId),
        arms: vec![Arm { branch: None, above, kind: None, stable: Some(true), feasible: true, present }],
        kink: None,
        error: located.error,
    }
}

/// Whether a threshold takes the state away for good, rather than out of the picture.
pub(super) fn is_loss(kind: ThresholdKind, located: &Located, setting: &Setting<'_>) -> bool {
    // Above the box a state is as well as below it; nobody is lost.
    let is_above = |i: usize| located.state[i] >= 0.5 * setting.equations.sides[i][1];
    kind != ThresholdKind::Exit || !located.species.is_some_and(is_above)
}
