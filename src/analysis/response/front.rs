//! Pairs of yields that neither of two controls can raise without lowering the other, over stable coexistence.
//!
//! The stable states are solved for on a grid of the two controls; for each of a row of values of the first yield the second
//! is then made as large as it can be (the ε-constraint method: Haimes, Lasdon & Wismer 1971), which finds fronts that are
//! not convex as well. Inside the ranges both yields' slopes are opposite there, at an end of a range only what is left of
//! them. Where the best is only approached at an edge of stability there is no point of the front. Start at [`front`].

use super::advice::has_kept;
use super::equations::Equations;
use super::footing::Footing;
use super::harvested::{Harvested, are_of_one_unit};
use super::peak::{Goal, refined, walked};
use super::terrain::{Place, Terrain};
use super::watch::Watch;
use super::{Control, Front, FrontPoint, NoFront, Total};
use crate::analysis::equilibria::{Budget, Equilibrium, Problem, all};
use crate::analysis::subject::Subject;

/// Nodes of the grid along either control.
const GRID: usize = 25;
/// Points of the front, its ends included.
const POINTS: usize = 25;
/// Shares of the ranges at which states are searched for, beside those of the present.
const SEARCHED: [f64; 3] = [1.0 / 6.0, 0.5, 5.0 / 6.0];
/// A control that changes yields and states by no more than this share over its range changes nothing.
const FLAT: f64 = 1e-9;
/// A yield is better by more than this share.
const BETTER: f64 = 1e-9;

/// The front of two controls, and the largest total on it. `list` are the equilibria at the present values.
///
/// # Errors
/// Why there is none: it needs two harvests of amounts (or two that a control is in), each of one species that is to be kept.
pub fn front(
    subject: &mut Subject<'_>,
    controls: [Control; 2],
    list: &[Equilibrium],
    budget: &Budget<'_>,
) -> Result<Front, NoFront> {
    let mut equations = Equations::new(subject, &controls.map(|control| control.parameter));
    let harvested = Harvested::of(&equations, subject.model)?;
    let ranges = controls.map(|control| [control.from, control.to - control.from]);
    let mut search = Search { adds: are_of_one_unit(subject.model, &harvested.takings), ..Search::default() };
    for (present, seeds) in faces(subject, controls, list, budget) {
        if (budget.stop)() {
            break;
        }
        let Some(footing) = Footing::new(&mut equations, &present) else { continue };
        let Some(watch) = Watch::new(&mut equations, &footing.face) else { continue };
        let largest = |&i: &usize| seeds.iter().fold(0.0f64, |most, (_, state)| most.max(state[i].abs()));
        let sized = |size: f64| if size > 0.0 { size } else { 1.0 };
        let scale = footing.face.moving.iter().map(largest).map(sized).chain([1.0]).collect();
        let mut terrain = Terrain::new(&footing, &watch, scale, ranges, harvested.parts.clone());
        let grid = Grid::filled(&mut terrain, &seeds, budget);
        let is_kept = |place: &Place| has_kept(subject.model, &footing.state(&place.x));
        search.add(&mut terrain, &grid, &is_kept);
    }
    let steepest = search.steepest;
    let (points, total) = search.ended(&|place| FrontPoint {
        // Where a control changes nothing any value would do.
        at: [0, 1].map(|j| {
            if steepest[j] > FLAT { ranges[j][0] + place.share[j] * ranges[j][1] } else { controls[j].present }
        }),
        yields: place.yields,
        state: place.state.clone(),
    });
    Ok(Front { takings: harvested.takings, points, total, is_whole: !(budget.stop)() })
}

/// What was found on the faces so far.
#[derive(Default)]
struct Search {
    /// Whether the two yields may be added.
    adds: bool,
    /// Pairs that are best on their face.
    found: Vec<Spot>,
    /// Places of a largest total.
    totals: Vec<Spot>,
    /// The largest total at a node of any grid.
    most: f64,
    /// What either control changes at most, by a share of its range, relative.
    steepest: [f64; 2],
}

/// A place without its face.
#[derive(Clone)]
struct Spot {
    share: [f64; 2],
    yields: [f64; 2],
    /// All species.
    state: Vec<f64>,
}

impl Search {
    fn add(&mut self, terrain: &mut Terrain<'_>, grid: &Grid, is_kept: &dyn Fn(&Place) -> bool) {
        let steepest = |j: usize| grid.places().map(|place| place.steepness(j)).fold(self.steepest[j], f64::max);
        self.steepest = [steepest(0), steepest(1)];
        let mut found = along(terrain, grid);
        let mut totals = Vec::new();
        if let Some(best) = grid.places().filter(|_| self.adds).max_by(|a, b| a.total().total_cmp(&b.total())) {
            self.most = self.most.max(best.total());
            totals.extend(refined(terrain, best, &Goal::Total));
        }
        found.extend(totals.iter().cloned());
        let footing = terrain.standing.footing;
        let spot = |place: Place| Spot { share: place.share, yields: place.yields, state: footing.state(&place.x) };
        self.found.extend(found.into_iter().filter(is_kept).map(spot));
        self.totals.extend(totals.into_iter().filter(is_kept).map(spot));
    }

    /// What no other pair has more of, by rising first yield; and the largest total.
    fn ended(mut self, point: &dyn Fn(&Spot) -> FrontPoint) -> (Vec<FrontPoint>, Total) {
        let pairs: Vec<[f64; 2]> = self.found.iter().map(|spot| spot.yields).collect();
        let room = rooms(pairs.iter().copied());
        self.found.retain(|spot| !pairs.iter().any(|&other| dominates(other, spot.yields, room)));
        self.found.sort_by(|a, b| a.yields[0].total_cmp(&b.yields[0]));
        self.found.dedup_by(|a, b| (0..2).all(|i| (a.yields[i] - b.yields[i]).abs() <= room[i]));
        let sum = |spot: &Spot| spot.yields[0] + spot.yields[1];
        let largest = self.totals.iter().max_by(|a, b| sum(a).total_cmp(&sum(b)));
        let total = match largest {
            _ if !self.adds => Total::OfDifferentUnits,
            Some(spot) if sum(spot) >= self.most * (1.0 - BETTER) => Total::At(point(spot)),
            _ => Total::NotFound,
        };
        (self.found.iter().map(point).collect(), total)
    }
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

/// Differences of either yield that are none.
fn rooms(pairs: impl IntoIterator<Item = [f64; 2]>) -> [f64; 2] {
    let larger = |most: [f64; 2], pair: [f64; 2]| [0, 1].map(|i| most[i].max(pair[i].abs()));
    pairs.into_iter().fold([0.0; 2], larger).map(|most| BETTER * most)
}

/// Whether one pair has more of both yields, or as much of one and more of the other.
fn dominates(a: [f64; 2], b: [f64; 2], room: [f64; 2]) -> bool {
    let is_no_less = (0..2).all(|i| a[i] >= b[i] - room[i]);
    is_no_less && (0..2).any(|i| a[i] > b[i] + room[i])
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
    let room = rooms(grid.places().map(|place| place.yields));
    points.retain(|point| !best.iter().any(|node| dominates(node.yields, point.yields, room)));
    points
}

/// Whether a yield changes with a control anywhere.
fn hangs_on(grid: &Grid, which: usize, control: usize) -> bool {
    let steepest = |j: usize| grid.places().fold(0.0f64, |most, place| most.max(place.slopes[which][j].abs()));
    steepest(control) > BETTER * steepest(1 - control)
}
