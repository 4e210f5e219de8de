//! Pairs of yields that neither of two controls can raise without lowering the other, over stable coexistence.
//!
//! The stable states are solved for on a grid of the two controls; for each of a row of values of the first yield the second
//! is then made as large as it can be (the ε-constraint method: Haimes, Lasdon & Wismer 1971), which finds fronts that are
//! not convex as well. Inside the ranges both yields' slopes are opposite there, at an end of a range only what is left of
//! them. Where the best is only approached at an edge of stability there is no point of the front. Start at [`front`].

use super::advice::has_kept;
use super::equations::Equations;
use super::footing::Footing;
use super::terrain::{Place, Terrain};
use super::watch::Watch;
use super::{Control, FrontPoint, Taking};
use crate::analysis::equilibria::{Budget, Equilibrium, Problem, all};
use crate::analysis::passage::{dot, solve};
use crate::analysis::subject::Subject;
use crate::expr::graph::Operation;

/// Nodes of the grid along either control.
const GRID: usize = 25;
/// Points of the front, its ends included.
const POINTS: usize = 25;
/// Shares of the ranges at which states are searched for, beside those of the present.
const SEARCHED: [f64; 3] = [1.0 / 6.0, 0.5, 5.0 / 6.0];
/// Newton steps for a point.
const STEPS: usize = 40;
/// Half the width of a difference by which a slope's own slope is estimated; it sets the speed, not the result.
const PROBE: f64 = 1e-5;
/// The longest step, as a share of the ranges.
const LONGEST: f64 = 0.1;
/// What is left at a stationary point: sine of the angle between slopes, or share of a yield.
const STATIONARY: f64 = 1e-10;
/// A yield is better by more than this share.
const BETTER: f64 = 1e-9;

/// The front of two controls, by rising yield of the first harvest. Empty unless the plan has two harvests of amounts (or
/// two that a control is in), each of one species. `list` are the equilibria at the present values.
pub fn front(
    subject: &mut Subject<'_>,
    controls: [Control; 2],
    list: &[Equilibrium],
    budget: &Budget<'_>,
) -> Vec<FrontPoint> {
    let mut equations = Equations::new(subject, &controls.map(|control| control.parameter));
    let Some(parts) = two_harvests(&equations) else { return Vec::new() };
    let ranges = controls.map(|control| [control.from, control.to - control.from]);
    let mut found: Vec<(Place, Vec<f64>)> = Vec::new();
    for (present, seeds) in faces(subject, controls, list, budget) {
        if (budget.stop)() {
            break;
        }
        let Some(footing) = Footing::new(&mut equations, &present) else { continue };
        let Some(watch) = Watch::new(&mut equations, &footing.face) else { continue };
        let largest = |&i: &usize| seeds.iter().fold(0.0f64, |most, (_, state)| most.max(state[i].abs()));
        let sized = |size: f64| if size > 0.0 { size } else { 1.0 };
        let scale = footing.face.moving.iter().map(largest).map(sized).chain([1.0]).collect();
        let mut terrain = Terrain::new(&footing, &watch, scale, ranges, parts.clone());
        let grid = Grid::filled(&mut terrain, &seeds, budget);
        let whole = |place: Place| {
            let state = footing.state(&place.x);
            (place, state)
        };
        let is_kept = |(_, state): &(Place, Vec<f64>)| has_kept(subject.model, state);
        found.extend(along(&mut terrain, &grid).into_iter().map(whole).filter(is_kept));
    }
    let places: Vec<Place> = found.iter().map(|(place, _)| place.clone()).collect();
    let room = rooms(&places);
    found.retain(|(place, _)| !places.iter().any(|other| dominates(other, place, room)));
    found.sort_by(|a, b| a.0.yields[0].total_cmp(&b.0.yields[0]));
    found.dedup_by(|a, b| (0..2).all(|i| (a.0.yields[i] - b.0.yields[i]).abs() <= room[i]));
    let point = |(place, state): (Place, Vec<f64>)| FrontPoint {
        at: [0, 1].map(|j| ranges[j][0] + place.share[j] * ranges[j][1]),
        yields: place.yields,
        state,
    };
    found.into_iter().map(point).collect()
}

/// Takings of either harvest; `None` where there are not two of them.
fn two_harvests(equations: &Equations) -> Option<[Vec<usize>; 2]> {
    let takings = &equations.takings;
    let mut harvests: Vec<(&str, Vec<usize>)> = Vec::new();
    for (place, taking) in takings.iter().enumerate().filter(|(_, taking)| taking.species.is_some()) {
        match harvests.iter_mut().find(|(name, _)| *name == taking.harvest) {
            Some((_, parts)) => parts.push(place),
            None => harvests.push((&taking.harvest, vec![place])),
        }
    }
    if harvests.len() > 2 {
        harvests.retain(|(_, parts)| parts.iter().any(|&place| is_controlled(equations, place)));
    }
    let is_of_one = |(_, parts): &(&str, Vec<usize>)| {
        let species = |taking: &Taking| taking.species;
        parts.iter().all(|&place| species(&takings[place]) == species(&takings[parts[0]]))
    };
    if harvests.len() != 2 || !harvests.iter().all(is_of_one) {
        return None;
    }
    let mut parts = harvests.into_iter().map(|(_, parts)| parts);
    Some([parts.next()?, parts.next()?])
}

/// Whether a control stands in what a taking is.
fn is_controlled(equations: &Equations, place: usize) -> bool {
    let controls = equations.control(0)..=equations.control(1);
    let nodes = equations.graph.reachable(&[equations.given[place]]);
    nodes.iter().any(|&node| matches!(equations.graph.operation(node), Operation::State(i) if controls.contains(&i)))
}

/// A pair of shares of the ranges, and a state there.
type Seed = ([f64; 2], Vec<f64>);

/// States with all kept species at the present values and at a few others, by who is present.
fn faces(
    subject: &mut Subject<'_>,
    controls: [Control; 2],
    list: &[Equilibrium],
    budget: &Budget<'_>,
) -> Vec<(Vec<bool>, Vec<Seed>)> {
    let mut found: Vec<(Vec<bool>, Vec<Seed>)> = Vec::new();
    let mut add = |share: [f64; 2], list: &[Equilibrium], model| {
        for equilibrium in list.iter().filter(|equilibrium| has_kept(model, &equilibrium.state)) {
            let present: Vec<bool> = (0..equilibrium.state.len()).map(|i| equilibrium.has(i)).collect();
            let seed = (share, equilibrium.state.clone());
            match found.iter_mut().find(|(known, _)| *known == present) {
                Some((_, seeds)) => seeds.push(seed),
                None => found.push((present, vec![seed])),
            }
        }
    };
    let share = |control: &Control| (control.present - control.from) / (control.to - control.from);
    add([share(&controls[0]), share(&controls[1])], list, subject.model);
    for first in SEARCHED {
        for second in SEARCHED {
            if (budget.stop)() {
                return found;
            }
            let mut values = subject.plan.values.clone();
            for (control, share) in controls.iter().zip([first, second]) {
                values[control.parameter.0] = control.from + share * (control.to - control.from);
            }
            let problem = Problem { rows: &subject.balance, values: &values, sides: &subject.sides };
            let there = all(&mut subject.graph, &problem, budget).list;
            add([first, second], &there, subject.model);
        }
    }
    found
}

/// Stable states at the nodes of a grid: several where there are several.
struct Grid {
    nodes: Vec<Vec<Place>>,
}

/// States at a node are the same if all abundances agree to this.
const SAME: f64 = 1e-6;

/// States at a node that are kept.
const MOST_STATES: usize = 8;

impl Grid {
    /// From every seed to the nearest node, and from node to node.
    fn filled(terrain: &mut Terrain<'_>, seeds: &[Seed], budget: &Budget<'_>) -> Self {
        let mut grid = Self { nodes: vec![Vec::new(); GRID * GRID] };
        let last = (GRID - 1) as f64;
        let off = |node: usize, share: f64| (node as f64 / last - share).abs();
        let mut open: Vec<(usize, Place)> = Vec::new();
        for (share, state) in seeds {
            let guess: Vec<f64> = terrain.standing.footing.face.moving.iter().map(|&i| state[i]).collect();
            let Some(start) = terrain.at(*share, &guess) else { continue };
            let nearest = |share: f64| (0..GRID).min_by(|&a, &b| off(a, share).total_cmp(&off(b, share))).unwrap_or(0);
            let node = share.map(nearest);
            let Some(place) = walked(terrain, start, node.map(|k| k as f64 / last)) else { continue };
            open.push((node[1] * GRID + node[0], place));
        }
        while let Some((node, place)) = open.pop() {
            if (budget.stop)() {
                break;
            }
            if !grid.keep(node, &place) {
                continue;
            }
            for next in neighbours(node) {
                let share = [(next % GRID) as f64 / last, (next / GRID) as f64 / last];
                if let Some(found) = terrain.beside(&place, share) {
                    open.push((next, found));
                }
            }
        }
        grid
    }

    /// Whether a state is new at a node.
    fn keep(&mut self, node: usize, place: &Place) -> bool {
        let known = &mut self.nodes[node];
        let is_same =
            |other: &Place| other.x.iter().zip(&place.x).all(|(a, b)| (a - b).abs() <= SAME * a.abs().max(b.abs()));
        if known.len() >= MOST_STATES || known.iter().any(is_same) {
            return false;
        }
        known.push(place.clone());
        true
    }

    fn places(&self) -> impl Iterator<Item = &Place> {
        self.nodes.iter().flatten()
    }
}

/// Up to four nodes.
fn neighbours(node: usize) -> impl Iterator<Item = usize> {
    let (column, row) = (node % GRID, node / GRID);
    let left = (column > 0).then(|| node - 1);
    let right = (column + 1 < GRID).then_some(node + 1);
    let below = (row > 0).then(|| node - GRID);
    let above = (row + 1 < GRID).then_some(node + GRID);
    [left, right, below, above].into_iter().flatten()
}

/// From a place to other controls in short steps; `None` where the state is lost on the way.
fn walked(terrain: &mut Terrain<'_>, mut place: Place, goal: [f64; 2]) -> Option<Place> {
    for k in 1..=8u8 {
        let left = 1.0 / f64::from(9 - k);
        let share = [0, 1].map(|j| place.share[j] + left * (goal[j] - place.share[j]));
        place = terrain.beside(&place, if k == 8 { goal } else { share })?;
    }
    Some(place)
}

/// Differences of either yield that are none.
fn rooms<'p>(places: impl IntoIterator<Item = &'p Place>) -> [f64; 2] {
    let larger = |most: [f64; 2], place: &Place| [0, 1].map(|i| most[i].max(place.yields[i].abs()));
    places.into_iter().fold([0.0; 2], larger).map(|most| BETTER * most)
}

/// Whether one has more of both yields, or as much of one and more of the other.
fn dominates(a: &Place, b: &Place, room: [f64; 2]) -> bool {
    let is_no_less = (0..2).all(|i| a.yields[i] >= b.yields[i] - room[i]);
    is_no_less && (0..2).any(|i| a.yields[i] > b.yields[i] + room[i])
}

/// Points of the front near the best nodes of a grid.
fn along(terrain: &mut Terrain<'_>, grid: &Grid) -> Vec<Place> {
    let mut best: Vec<&Place> = grid.places().collect();
    best.sort_by(|a, b| b.yields[0].total_cmp(&a.yields[0]).then(b.yields[1].total_cmp(&a.yields[1])));
    let mut most = f64::NEG_INFINITY;
    best.retain(|place| {
        let is_best = place.yields[1] > most;
        most = most.max(place.yields[1]);
        is_best
    });
    let (Some(high), Some(low)) = (best.first(), best.last()) else { return Vec::new() };
    let mut points = Vec::new();
    for (place, which) in [(high, 0), (low, 1)] {
        let by = [0, 1].map(|j| if hangs_on(grid, which, j) { which } else { 1 - which });
        points.extend(refined(terrain, place, &Goal::Most { which, by }));
    }
    let [from, to] = [low.yields[0], high.yields[0]];
    for k in 0..POINTS {
        let goal = from + (to - from) * k as f64 / (POINTS - 1) as f64;
        let off = |place: &&&Place| (place.yields[0] - goal).abs();
        let Some(start) = best.iter().min_by(|a, b| off(a).total_cmp(&off(b))) else { continue };
        points.extend(refined(terrain, start, &Goal::Given { first: goal, size: from.abs().max(to.abs()) }));
    }
    // What a node of the grid has more of is no point of the front.
    let room = rooms(grid.places());
    points.retain(|point| !best.iter().any(|node| dominates(node, point, room)));
    points
}

/// Whether a yield changes with a control anywhere.
fn hangs_on(grid: &Grid, which: usize, control: usize) -> bool {
    let steepest = |j: usize| grid.places().fold(0.0f64, |most, place| most.max(place.slopes[which][j].abs()));
    steepest(control) > BETTER * steepest(1 - control)
}

/// What a point is to be.
enum Goal {
    /// The largest of a yield.
    Most {
        /// Which.
        which: usize,
        /// The yield whose slope by either control is to be 0: this one, or the other where this does not hang on it.
        by: [usize; 2],
    },
    /// The largest second yield where the first is this; and the size that differences of it are measured by.
    Given { first: f64, size: f64 },
}

/// The stationary point near a place: inside the ranges, or on the end of one that it is led to.
fn refined(terrain: &mut Terrain<'_>, start: &Place, goal: &Goal) -> Option<Place> {
    let mut held: [Option<f64>; 2] =
        start.share.map(|share| if share == 0.0 || share == 1.0 { Some(share) } else { None });
    // Free first: the nearest node may lie at an end of a range by chance.
    for free in [[true, true], [held[0].is_none(), held[1].is_none()]] {
        if let Some(found) = newton(terrain, start, goal, free)
            && is_best(&found, goal, free)
        {
            return Some(found);
        }
    }
    for j in 0..2 {
        held[j].get_or_insert(start.share[j].round());
        let mut free = [true; 2];
        free[j] = false;
        let Some(end) = held[j] else { continue };
        let mut share = start.share;
        share[j] = end;
        if let Some(start) = walked(terrain, start.clone(), share)
            && let Some(found) = newton(terrain, &start, goal, free)
            && is_best(&found, goal, free)
        {
            return Some(found);
        }
    }
    None
}

/// What is to be 0: one number a free control, each without unit.
fn residual(place: &Place, goal: &Goal, free: [bool; 2]) -> Vec<f64> {
    let size = |slopes: &[f64; 2]| dot(slopes, slopes).sqrt().max(f64::MIN_POSITIVE);
    match goal {
        Goal::Most { by, .. } => {
            // Measured by the yield, for at a largest one the slope itself is 0.
            let share = |j: usize| place.slopes[by[j]][j] / place.yields[by[j]].abs().max(f64::MIN_POSITIVE);
            (0..2).filter(|&j| free[j]).map(share).collect()
        }
        Goal::Given { first, size: whole } => {
            let mut all = vec![(place.yields[0] - first) / whole];
            if free == [true, true] {
                let [a, b] = &place.slopes;
                all.push((a[0] * b[1] - a[1] * b[0]) / (size(a) * size(b)));
            }
            all
        }
    }
}

/// Newton's method on the free controls, with slopes of residuals by differences: these set how fast it goes and nothing
/// else, for the residuals themselves are exact.
fn newton(terrain: &mut Terrain<'_>, start: &Place, goal: &Goal, free: [bool; 2]) -> Option<Place> {
    let places: Vec<usize> = (0..2).filter(|&j| free[j]).collect();
    let mut here = start.clone();
    let mut least = f64::INFINITY;
    for _ in 0..STEPS {
        let now = residual(&here, goal, free);
        let size = now.iter().fold(0.0f64, |most, x| most.max(x.abs()));
        // Once good, as long as it gets better.
        if (size <= STATIONARY && size >= 0.5 * least) || size == 0.0 || (places.is_empty() && size <= STATIONARY) {
            return Some(here);
        }
        if now.len() != places.len() || !size.is_finite() {
            return None;
        }
        least = least.min(size);
        let n = places.len();
        let mut matrix = vec![0.0; n * n];
        for (column, &j) in places.iter().enumerate() {
            let mut share = here.share;
            let step = if share[j] + PROBE <= 1.0 { PROBE } else { -PROBE };
            share[j] += step;
            let beside = terrain.beside(&here, share)?;
            let moved = residual(&beside, goal, free);
            (0..n).for_each(|i| matrix[i * n + column] = (moved[i] - now[i]) / step);
        }
        let mut step: Vec<f64> = now.iter().map(|x| -x).collect();
        solve(&mut matrix, &mut step)?;
        let longest = step.iter().fold(0.0f64, |most, x| most.max(x.abs()));
        let cut = (LONGEST / longest).min(1.0);
        let mut share = here.share;
        places.iter().zip(&step).for_each(|(&j, part)| share[j] += cut * part);
        if !share.iter().all(|share| (-0.5 * LONGEST..=1.0 + 0.5 * LONGEST).contains(share)) {
            return None;
        }
        here = terrain.beside(&here, share)?;
    }
    None
}

/// Whether a stationary point is within the ranges and largest, not least: yields trade against each other, and at an end of
/// a range what lies inside has less.
fn is_best(place: &Place, goal: &Goal, free: [bool; 2]) -> bool {
    if !place.share.iter().all(|share| (0.0..=1.0).contains(share)) {
        return false;
    }
    let [a, b] = &place.slopes;
    let inward = |j: usize| if place.share[j] == 0.0 { 1.0 } else { -1.0 };
    let held = (0..2).filter(|&j| !free[j]);
    match goal {
        Goal::Most { which, .. } => held.into_iter().all(|j| place.slopes[*which][j] * inward(j) <= 0.0),
        Goal::Given { .. } if free == [true, true] => dot(a, b) <= 0.0,
        Goal::Given { .. } => {
            // b + λ a is 0 along the free control for some λ ≥ 0, and leads out of the range along the other.
            let Some(along) = (0..2).find(|&j| free[j]) else { return true };
            let share = -b[along] / a[along];
            share >= 0.0 && held.into_iter().all(|j| (b[j] + share * a[j]) * inward(j) <= 0.0)
        }
    }
}
