//! The chart of two controls: curves of thresholds, points on them, and the regions between.
//!
//! [`chart`] looks for thresholds along lines through the chart, in both directions (`seeds`), follows each as a curve with
//! both controls free (`trace`), locates what is special on it (`corner`), and asks the certified search what the regions
//! between the curves hold (`regions`). Where the search finds that a region is not of one kind, further lines are laid
//! through it; where that finds no curve, it is divided by what was found. All curves are numerical, and one that bounds only
//! what no search has looked at may be missing. Crossings inside a face are no curves of their own in general and are not
//! followed.

mod corner;
mod regions;
mod seeds;
mod trace;

use super::defining::at_face;
use super::equations::{Equations, Face};
use super::locate::describe::Describer;
use super::locate::{Locator, Sign};
use super::{Chart, ChartCurve, ChartPoint, Control, ThresholdKind};
use crate::analysis::equilibria::{Budget, Equilibrium};
use crate::analysis::subject::Subject;
use corner::{Corner, Corners};
use regions::Searcher;
use trace::{End, Ground, Place, Tracer};

/// Curves that are followed.
const MOST_CURVES: usize = 60;

/// Times that further lines are laid where the regions do not fit the curves.
const ROUNDS: usize = 3;

/// A seed this near to a curve, as a share of the distance of two points of it, lies on it.
const ON_CURVE: f64 = 0.2;

/// Points nearer than this share of the chart, and of the state, are one.
const SAME: f64 = 1e-6;

/// A threshold from which a curve is followed.
#[derive(Clone, Debug, PartialEq)]
pub struct Seed {
    /// Who is present on the branch that has it.
    pub present: Vec<bool>,
    /// What changes sign there.
    pub sign: Sign,
    /// The state of all species, nearly.
    pub state: Vec<f64>,
    /// Both controls, nearly.
    pub at: [f64; 2],
}

/// A seed as it is worked off.
struct Start {
    face: Face,
    sign: Sign,
    free: Vec<f64>,
    /// Every unknown of the system, where they are known.
    unknowns: Option<Vec<f64>>,
}

/// A curve in the unknowns of its system.
struct Traced {
    face: Face,
    sign: Sign,
    places: Vec<Place>,
    closed: bool,
}

/// The chart of two controls, of which `list` is the scenario's at their present values.
///
/// Controls are in their units. A chart without curves where a range is empty. Points of curves are roots of the systems that
/// define them (Kuznetsov 2004, ch. 10); what regions hold is certified where the region says that it is complete.
pub fn chart(subject: &Subject<'_>, controls: [Control; 2], list: &[Equilibrium], budget: &Budget<'_>) -> Chart {
    let mut work = Work::new(subject, controls, budget);
    let has_range = |control: &Control| control.from < control.to;
    if !controls.iter().all(has_range) {
        return Chart {
            controls,
            curves: Vec::new(),
            points: Vec::new(),
            regions: Vec::new(),
            cells: Vec::new(),
            grid: [0; 2],
        };
    }
    let mut searcher = Searcher::new(subject, controls);
    let is_inside = controls.iter().all(|control| (control.from..=control.to).contains(&control.present));
    if is_inside {
        let present = controls.map(|control| control.present);
        for which in [0, 1] {
            work.look_along(subject, which, present, Some(list), budget);
        }
    }
    for (which, through) in lines(&controls) {
        work.look_along(subject, which, through, None, budget);
    }
    for _ in 0..ROUNDS {
        let curves = work.curves();
        let known = work.traced.len();
        for through in searcher.doubtful(&curves, budget) {
            for which in [0, 1] {
                work.look_along(subject, which, through, None, budget);
            }
        }
        if work.traced.len() == known || (budget.stop)() {
            break;
        }
    }
    work.finish(searcher, budget)
}

/// Lines across the chart: which control varies, and the point from whose states it is followed both ways.
fn lines(controls: &[Control; 2]) -> Vec<(usize, [f64; 2])> {
    let at = |k: usize, share: f64| controls[k].from + share * (controls[k].to - controls[k].from);
    // Starts that lie apart along the lines as well.
    let places = [(0.12, 0.7), (0.5, 0.3), (0.88, 0.55)];
    let across = places.iter().map(|&(held, start)| (0, [at(0, start), at(1, held)]));
    across.chain(places.iter().map(|&(held, start)| (1, [at(0, held), at(1, start)]))).collect()
}

/// The chart from thresholds that are known, with no further ones looked for.
pub fn chart_from(subject: &Subject<'_>, controls: [Control; 2], seeds: &[Seed], budget: &Budget<'_>) -> Chart {
    let mut work = Work::new(subject, controls, budget);
    work.follow_all(seeds);
    work.finish(Searcher::new(subject, controls), budget)
}

/// What a chart is made with.
struct Work<'w> {
    controls: [Control; 2],
    equations: Equations,
    locator: Locator,
    describer: Describer,
    stop: &'w dyn Fn() -> bool,
    traced: Vec<Traced>,
    points: Vec<(Corner, Face)>,
}

impl<'w> Work<'w> {
    fn new(subject: &Subject<'_>, controls: [Control; 2], budget: &'w Budget<'_>) -> Self {
        let parameters = controls.map(|control| control.parameter);
        Self {
            controls,
            equations: Equations::new(subject, &parameters),
            locator: Locator::new(),
            describer: Describer::new(subject, &parameters),
            stop: budget.stop,
            traced: Vec::new(),
            points: Vec::new(),
        }
    }

    fn look_along(
        &mut self,
        subject: &Subject<'_>,
        which: usize,
        through: [f64; 2],
        list: Option<&[Equilibrium]>,
        budget: &Budget<'_>,
    ) {
        let seeds = seeds::along(subject, &mut self.equations, &self.controls, which, through, list, budget);
        self.follow_all(&seeds);
    }

    fn follow_all(&mut self, seeds: &[Seed]) {
        let mut queue: Vec<Start> = seeds.iter().rev().filter_map(|seed| self.start(seed)).collect();
        while let Some(start) = queue.pop()
            && self.traced.len() < MOST_CURVES
            && !(self.stop)()
        {
            self.follow(start, &mut queue);
        }
    }

    fn start(&mut self, seed: &Seed) -> Option<Start> {
        let face = self.equations.face(&seed.present)?;
        let free = face.moving.iter().map(|&i| seed.state[i]).chain(seed.at).collect();
        Some(Start { face, sign: seed.sign.clone(), free, unknowns: None })
    }

    /// Follows the curve through a start, unless it is known, and adds to the queue what other curves its points lead to.
    fn follow(&mut self, start: Start, queue: &mut Vec<Start>) {
        let Start { face, sign, free, unknowns } = start;
        if self.is_known(&face, &sign, &free) {
            return;
        }
        let place = self.locator.place(&mut self.equations, &face, &sign, 0);
        let corners = matches!(sign, Sign::Turn | Sign::Pair(None)).then(|| Corners::new(&mut self.equations, &face));
        let Some((system, over)) = self.locator.system(place) else { return };
        let ground = self.ground(&face, over);
        let mut tracer = Tracer::new(system, &self.equations.values, ground, self.stop);
        let Some(middle) = tracer.begin(&free, unknowns.as_deref()) else { return };
        if !tracer.is_inside(&middle) {
            return;
        }
        let (places, ends) = both_ways(&mut tracer, middle);
        let mut found = match (&corners, &sign) {
            (Some(corners), Sign::Turn) => corners.on_fold(&self.equations, &face, &mut tracer, &places),
            (Some(_), _) => corner::on_hopf(&mut self.describer, &face, &mut tracer, &places),
            _ => Vec::new(),
        };
        if let (Some(corners), Sign::Pair(None)) = (&corners, &sign) {
            for (end, at_end) in ends.into_iter().zip([[0, 1], [places.len() - 1, places.len().saturating_sub(2)]]) {
                let ends = at_end.map(|k| places.get(k));
                if let (End::Real, [Some(last), Some(before)]) = (end, ends) {
                    found.extend(corners.double_from(&self.equations, &tracer, last.at.clone(), [before, last]));
                }
            }
        }
        for corner in found {
            if corner.kind == ThresholdKind::BogdanovTakens {
                let (free, pair) = (corner.free.clone(), corner.pair.clone());
                queue.push(Start { face: face.clone(), sign: Sign::Pair(None), free: free.clone(), unknowns: pair });
                queue.push(Start { face: face.clone(), sign: Sign::Turn, free, unknowns: None });
            }
            self.keep(corner, &face);
        }
        self.traced.push(Traced { face, sign, places, closed: ends.contains(&End::Closed) });
    }

    fn ground(&self, face: &Face, over: &[usize]) -> Ground {
        let sides = &self.equations.sides;
        Ground {
            ranges: self.controls.map(|control| [control.from, control.to]),
            sides: face.moving.iter().map(|&i| sides[i]).collect(),
            over: over.iter().map(|i| face.moving.iter().position(|moving| moving == i)).collect(),
            far: over.iter().map(|&i| sides[i][1].abs().max(sides[i][0].abs()).max(f64::MIN_POSITIVE)).collect(),
        }
    }

    /// Sizes of abundances and controls in the chart, by which distances are taken.
    fn sizes(&self, face: &Face) -> Vec<f64> {
        let width = |side: &[f64; 2]| (side[1] - side[0]).abs().max(f64::MIN_POSITIVE);
        let species = face.moving.iter().map(|&i| width(&self.equations.sides[i]));
        species.chain(self.controls.iter().map(|control| control.to - control.from)).collect()
    }

    fn is_known(&self, face: &Face, sign: &Sign, free: &[f64]) -> bool {
        let sizes = self.sizes(face);
        let same = |traced: &&Traced| traced.face.moving == face.moving && traced.sign == *sign;
        self.traced.iter().filter(same).any(|traced| {
            traced.places.windows(2).any(|ends| {
                let [a, b] = [&ends[0].at, &ends[1].at];
                let part = |from: &[f64], to: &[f64], j: usize| (to[j] - from[j]) / sizes[j];
                let square: f64 = (0..free.len()).map(|j| part(a, b, j).powi(2)).sum();
                let along: f64 = (0..free.len()).map(|j| part(a, b, j) * part(a, free, j)).sum();
                let share = if square > 0.0 { (along / square).clamp(0.0, 1.0) } else { 0.0 };
                let off = (0..free.len()).map(|j| (part(a, free, j) - share * part(a, b, j)).powi(2)).sum::<f64>();
                off <= ON_CURVE * ON_CURVE * square + SAME * SAME
            })
        })
    }

    /// Keeps a point that is in the chart and not known yet.
    fn keep(&mut self, corner: Corner, face: &Face) {
        let sizes = self.sizes(face);
        let m = face.moving.len();
        let is_inside =
            self.controls.iter().zip(&corner.free[m..]).all(|(control, &c)| control.from <= c && c <= control.to);
        let same = |(other, other_face): &(Corner, Face)| {
            other.kind == corner.kind
                && other_face.moving == face.moving
                && other.free.iter().zip(&corner.free).zip(&sizes).all(|((a, b), size)| (a - b).abs() <= SAME * size)
        };
        if is_inside && !self.points.iter().any(same) {
            self.points.push((corner, face.clone()));
        }
    }

    fn state(&self, face: &Face, free: &[f64]) -> Vec<f64> {
        let mut state = vec![0.0; self.equations.species];
        face.moving.iter().zip(free).for_each(|(&i, &x)| state[i] = x);
        state
    }

    fn curves(&mut self) -> Vec<ChartCurve> {
        let traced = std::mem::take(&mut self.traced);
        let curves = traced.iter().map(|traced| self.curve(traced)).collect();
        self.traced = traced;
        curves
    }

    fn finish(mut self, mut searcher: Searcher<'_>, budget: &Budget<'_>) -> Chart {
        let curves = self.curves();
        let points = self.points.iter().map(|(corner, face)| {
            let m = face.moving.len();
            ChartPoint {
                kind: corner.kind,
                at: [corner.free[m], corner.free[m + 1]],
                state: self.state(face, &corner.free),
                error: corner.error,
            }
        });
        let points = points.collect();
        let regions::Found { regions, cells, grid } = searcher.regions(&curves, budget);
        Chart { controls: self.controls, curves, points, regions, cells, grid }
    }

    fn curve(&mut self, traced: &Traced) -> ChartCurve {
        let m = traced.face.moving.len();
        let [across, upwards] = self.controls;
        let on_chart = |place: &Place| [on_side(place.at[m], across), on_side(place.at[m + 1], upwards)];
        let points: Vec<[f64; 2]> = traced.places.iter().map(on_chart).collect();
        let states: Vec<Vec<f64>> = traced.places.iter().map(|place| self.state(&traced.face, &place.at)).collect();
        let stable =
            points.iter().zip(&states).map(|(at, state)| self.describer.others_attract(state, at) == Some(true));
        ChartCurve {
            kind: kind(&traced.sign, &traced.face, self.equations.step.is_some()),
            bounds_stable: stable.collect(),
            points,
            states,
            closed: traced.closed,
        }
    }
}

/// Nearer to an end of a control's range than this share of it, a curve ends there.
const ON_SIDE: f64 = 1e-13;

/// A value of a control, which is the end of its range where only rounding keeps it from that.
fn on_side(value: f64, control: Control) -> f64 {
    let room = ON_SIDE * (control.to - control.from);
    [control.from, control.to].into_iter().find(|end| (value - end).abs() <= room).unwrap_or(value)
}

/// The places of a curve through one, in order, and how it ends at the first and the last.
fn both_ways(tracer: &mut Tracer<'_>, middle: Place) -> (Vec<Place>, [End; 2]) {
    let (after, last) = tracer.follow(&middle, true);
    if last == End::Closed {
        return (std::iter::once(middle).chain(after).collect(), [last, last]);
    }
    let (before, first) = tracer.follow(&middle, false);
    let places = before.into_iter().rev().map(Place::reversed).chain([middle]).chain(after);
    (places.collect(), [first, last])
}

fn kind(sign: &Sign, face: &Face, is_map: bool) -> ThresholdKind {
    let divided = |i: &usize| face.moving.iter().position(|moving| moving == i).is_some_and(|k| face.is_divided[k]);
    match sign {
        Sign::Turn => ThresholdKind::Fold,
        Sign::Abundance(i) if divided(i) => ThresholdKind::Transcritical,
        Sign::Abundance(_) | Sign::Side(..) => ThresholdKind::Exit,
        Sign::Growth(_) | Sign::Block(_) | Sign::Crossing => ThresholdKind::Transcritical,
        Sign::Pair(_) if is_map => ThresholdKind::NeimarkSacker,
        Sign::Pair(_) => ThresholdKind::Hopf,
        Sign::Flip(_) => ThresholdKind::PeriodDoubling,
        Sign::Kink(_) => ThresholdKind::BorderCollision,
    }
}
