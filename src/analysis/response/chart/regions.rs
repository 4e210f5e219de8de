//! Regions between the curves of a chart, and what the certified search finds in them.
//!
//! The middles of a grid's cells are joined to their neighbours where no curve runs between; what hangs together is a region,
//! and one search in its depth says what is there. Further searches, spread over the grid, check that a region is of one
//! kind: where they disagree, curves are missing, every cell of it is searched, and it is divided by what is found.

use std::collections::VecDeque;

use crate::analysis::equilibria::{Budget, Problem, all};
use crate::analysis::linearise::{Kind, Lineariser};
use crate::analysis::response::{ChartCurve, Control, Region, RegionState};
use crate::analysis::subject::Subject;

/// Columns and rows of the grid that is given.
const GIVEN: [usize; 2] = [48, 24];

/// Cells of the grid that is worked on, each way, for one of that; odd, so that the middle one has the same middle.
const FINER: usize = 3;

/// Columns and rows of the grid that is worked on.
const GRID: [usize; 2] = [GIVEN[0] * FINER, GIVEN[1] * FINER];

/// Where a cell is looked at, in widths of it from its middle. Curves of models with round figures run through middles, where
/// nothing is decided; this is near one, and irrational, so that they do not meet it.
const LOOKED_AT: [f64; 2] = [0.5 * std::f64::consts::SQRT_2 - 0.65, 0.1 * std::f64::consts::PI - 0.28];

/// How far from there it is looked at again, in widths of a cell, where that place lies on a curve.
const BESIDE: [f64; 2] = [0.31, -0.23];

/// One cell of so many each way is searched, to check that a region is of one kind.
const CHECKED: usize = 6 * FINER;

/// Points of doubt that are given at once.
const MOST_DOUBTFUL: usize = 4;

/// Components of no more cells that are near to another of the same kind are where that grows narrower than a cell.
const SLIVER: usize = 12;

/// How many cells away the next part may be.
const APART: usize = 2 * FINER;

/// What there is.
pub(super) struct Found {
    pub(super) regions: Vec<Region>,
    pub(super) cells: Vec<Option<usize>>,
    pub(super) grid: [usize; 2],
}

/// Searches at cells; what was found there stays known.
pub(super) struct Searcher<'s> {
    subject: Subject<'s>,
    lineariser: Lineariser,
    controls: [Control; 2],
    values: Vec<f64>,
    known: Vec<Option<Region>>,
}

/// The middle one of those cells that are one of the grid that is given.
fn given_middle(cell: usize) -> usize {
    let place = |k: usize| k / FINER * FINER + FINER / 2;
    place(cell / GRID[0]) * GRID[0] + place(cell % GRID[0])
}

/// The cells of each component, in order.
fn members(owner: &[usize]) -> Vec<Vec<usize>> {
    let count = owner.iter().max().map_or(0, |last| last + 1);
    let mut members = vec![Vec::new(); count];
    owner.iter().enumerate().for_each(|(cell, &component)| members[component].push(cell));
    members
}

impl<'s> Searcher<'s> {
    pub(super) fn new(subject: &Subject<'s>, controls: [Control; 2]) -> Self {
        let parameters = controls.map(|control| control.parameter);
        Self {
            lineariser: Lineariser::open(subject, &parameters),
            values: subject.plan.values.clone(),
            subject: subject.clone(),
            controls,
            known: vec![None; GRID[0] * GRID[1]],
        }
    }

    /// Points at which something else is found than in the depth of the region that the curves make them part of.
    pub(super) fn doubtful(&mut self, curves: &[ChartCurve], budget: &Budget<'_>) -> Vec<[f64; 2]> {
        let owner = Cells::new(&self.controls, curves).components(&|_, _| true);
        let members = members(&owner);
        let others = members.iter().filter_map(|members| self.other_kind(&owner, members, budget));
        let others: Vec<usize> = others.take(MOST_DOUBTFUL).collect();
        others.into_iter().map(|cell| middle(&self.controls, cell)).collect()
    }

    /// The regions of a chart with these curves.
    pub(super) fn regions(&mut self, curves: &[ChartCurve], budget: &Budget<'_>) -> Found {
        let cells = Cells::new(&self.controls, curves);
        let mut owner = cells.components(&|_, _| true);
        let members = members(&owner);
        let is_mixed = |component: &usize| self.other_kind(&owner, &members[*component], budget).is_some();
        let mixed: Vec<usize> = (0..members.len()).filter(is_mixed).collect();
        if !mixed.is_empty() {
            let mut kinds = vec![None; owner.len()];
            for cell in (0..owner.len()).filter(|&cell| mixed.contains(&owner[cell])) {
                // Cells around the middle of one that is given take after it, if no curve runs between.
                let middle = given_middle(cell);
                let looked_at = if owner[middle] == owner[cell] { middle } else { cell };
                kinds[cell] = self.at(looked_at, budget).map(likeness);
            }
            owner = cells.components(&|a, b| kinds[a] == kinds[b]);
        }
        self.join_slivers(&mut owner, budget);
        self.named(&owner, budget)
    }

    /// What is at the middle of a cell; `None` where the search was stopped.
    fn at(&mut self, cell: usize, budget: &Budget<'_>) -> Option<&Region> {
        if self.known[cell].is_none() {
            self.known[cell] = self.off_curves(cell, budget);
        }
        self.known[cell].as_ref()
    }

    /// What is in a cell: at its place, or beside where that place is on a curve.
    fn off_curves(&mut self, cell: usize, budget: &Budget<'_>) -> Option<Region> {
        let found = self.searched(middle(&self.controls, cell), budget)?;
        if !is_critical(&found) {
            return Some(found);
        }
        let beside = self.searched(place(&self.controls, cell, BESIDE), budget);
        Some(beside.filter(|beside| !is_critical(beside)).unwrap_or(found))
    }

    fn searched(&mut self, inside: [f64; 2], budget: &Budget<'_>) -> Option<Region> {
        if (budget.stop)() {
            return None;
        }
        for (control, &value) in self.controls.iter().zip(&inside) {
            self.values[control.parameter.0] = value;
            self.lineariser.set(control.parameter, value);
        }
        let Subject { graph, balance, sides, .. } = &mut self.subject;
        let problem = Problem { rows: balance, values: &self.values, sides };
        let found = all(graph, &problem, budget);
        let states = found.list.iter().map(|equilibrium| RegionState {
            present: (0..equilibrium.state.len()).map(|i| equilibrium.has(i)).collect(),
            kind: self.lineariser.at(equilibrium).ok().map(|linear| linear.kind),
        });
        Some(Region { inside, equilibria: states.collect(), complete: found.complete })
    }

    /// The first cell that is looked at in a component where number or types of equilibria are not those in its depth.
    fn other_kind(&mut self, owner: &[usize], members: &[usize], budget: &Budget<'_>) -> Option<usize> {
        let first = self.at(deepest(owner, members), budget).map(likeness)?;
        let checked: Vec<usize> = members.iter().copied().filter(|&cell| is_checked(cell)).collect();
        checked.into_iter().find(|&cell| {
            let expected = middle(&self.controls, cell);
            // What is found beside a place on a curve may be of the other side.
            let is_other = |found: &Region| found.inside == expected && likeness(found) != first;
            self.at(cell, budget).is_some_and(is_other)
        })
    }

    /// Gives small components to one of the same kind nearby, across curves that leave less than a cell between.
    fn join_slivers(&mut self, owner: &mut [usize], budget: &Budget<'_>) {
        let all = members(owner);
        let mut kinds = Vec::with_capacity(all.len());
        for members in &all {
            let Some(kind) = self.at(deepest(owner, members), budget).map(likeness) else { return };
            kinds.push(kind);
        }
        let mut small: Vec<usize> = (0..all.len()).filter(|&component| all[component].len() <= SLIVER).collect();
        small.sort_by_key(|&component| all[component].len());
        for component in small {
            let mut nearby = all[component].iter().flat_map(|&cell| around(cell)).map(|cell| owner[cell]);
            let own = owner[all[component][0]];
            if let Some(joined) = nearby.find(|&other| other != own && kinds[other] == kinds[own]) {
                owner.iter_mut().filter(|owner| **owner == own).for_each(|owner| *owner = joined);
            }
        }
        renumber(owner);
    }

    fn named(&mut self, owner: &[usize], budget: &Budget<'_>) -> Found {
        let mut regions = Vec::new();
        let mut cells = vec![None; owner.len()];
        for members in members(owner) {
            let Some(region) = self.at(deepest(owner, &members), budget).cloned() else { continue };
            for cell in members {
                cells[cell] = Some(regions.len());
            }
            regions.push(region);
        }
        let given = (0..GIVEN[0] * GIVEN[1]).map(|cell| {
            let [i, j] = [cell % GIVEN[0], cell / GIVEN[0]].map(|k| k * FINER + FINER / 2);
            cells[j * GRID[0] + i]
        });
        Found { regions, cells: given.collect(), grid: GIVEN }
    }
}

fn is_checked(cell: usize) -> bool {
    let middle = CHECKED / 2;
    cell % GRID[0] % CHECKED == middle && cell / GRID[0] % CHECKED == middle
}

/// Whether something is undecided by the linear part, as on a curve.
fn is_critical(region: &Region) -> bool {
    region.equilibria.iter().any(|state| matches!(state.kind, Some(Kind::Undecided | Kind::Centre)))
}

/// The controls where a cell is looked at, near its middle.
fn middle(controls: &[Control; 2], cell: usize) -> [f64; 2] {
    place(controls, cell, [0.0; 2])
}

/// The controls at a place of a cell, so many of its widths from there.
fn place(controls: &[Control; 2], cell: usize, off: [f64; 2]) -> [f64; 2] {
    let place = [cell % GRID[0], cell / GRID[0]];
    std::array::from_fn(|k| {
        let Control { from, to, .. } = controls[k];
        from + (to - from) * (place[k] as f64 + 0.5 + LOOKED_AT[k] + off[k]) / GRID[k] as f64
    })
}

/// Who is present, and the type by its dimensions alone, for no threshold lies between a node and a spiral; in an order that
/// does not hang on the states.
type Likeness = Vec<(Vec<bool>, Option<u8>)>;

fn likeness(region: &Region) -> Likeness {
    let dimensions = |kind: Kind| match kind {
        Kind::StableNode | Kind::StableSpiral | Kind::StableStar | Kind::StableImproperNode => 0,
        Kind::Saddle => 1,
        Kind::UnstableNode | Kind::UnstableSpiral | Kind::UnstableStar | Kind::UnstableImproperNode => 2,
        Kind::Centre => 3,
        Kind::Undecided => 4,
    };
    let state = |state: &RegionState| (state.present.clone(), state.kind.map(dimensions));
    let mut all: Likeness = region.equilibria.iter().map(state).collect();
    all.sort();
    all
}

/// The cell of a component that is furthest from any other component and from the edge of the chart; of several the one
/// nearest to the component's middle.
fn deepest(owner: &[usize], members: &[usize]) -> usize {
    let mut depth = vec![usize::MAX; owner.len()];
    let mut queue = VecDeque::new();
    for &cell in members {
        if neighbours(cell).iter().any(|next| next.is_none_or(|next| owner[next] != owner[cell])) {
            depth[cell] = 0;
            queue.push_back(cell);
        }
    }
    while let Some(cell) = queue.pop_front() {
        for next in neighbours(cell).into_iter().flatten() {
            if owner[next] == owner[cell] && depth[next] == usize::MAX {
                depth[next] = depth[cell] + 1;
                queue.push_back(next);
            }
        }
    }
    let coordinates =
        |cell: usize| [(cell % GRID[0]) as f64 / GRID[0] as f64, (cell / GRID[0]) as f64 / GRID[1] as f64];
    let count = members.len().max(1) as f64;
    let mean = |k: usize| members.iter().map(|&cell| coordinates(cell)[k]).sum::<f64>() / count;
    let mean = [mean(0), mean(1)];
    let off = |cell: usize| (coordinates(cell)[0] - mean[0]).hypot(coordinates(cell)[1] - mean[1]);
    let best = members.iter().copied().max_by(|&a, &b| depth[a].cmp(&depth[b]).then(off(b).total_cmp(&off(a))));
    best.unwrap_or_default()
}

/// Components numbered in the order of their first cells, without gaps.
fn renumber(owner: &mut [usize]) {
    let mut names: Vec<Option<usize>> = vec![None; owner.len()];
    let mut count = 0;
    for component in owner {
        let name = *names[*component].get_or_insert_with(|| {
            count += 1;
            count - 1
        });
        *component = name;
    }
}

/// The cells around one, the nearest first.
fn around(cell: usize) -> Vec<usize> {
    let [i, j] = [cell % GRID[0], cell / GRID[0]];
    let rows = j.saturating_sub(APART)..=(j + APART).min(GRID[1] - 1);
    let columns = i.saturating_sub(APART)..=(i + APART).min(GRID[0] - 1);
    let mut cells: Vec<usize> = rows.flat_map(|j| columns.clone().map(move |i| j * GRID[0] + i)).collect();
    cells.retain(|&other| other != cell);
    cells.sort_by_key(|other| (other % GRID[0]).abs_diff(i).max((other / GRID[0]).abs_diff(j)));
    cells
}

/// Left, right, below and above; `None` beyond the edge.
fn neighbours(cell: usize) -> [Option<usize>; 4] {
    let [i, j] = [cell % GRID[0], cell / GRID[0]];
    [
        (i > 0).then(|| cell - 1),
        (i + 1 < GRID[0]).then(|| cell + 1),
        (j > 0).then(|| cell - GRID[0]),
        (j + 1 < GRID[1]).then(|| cell + GRID[0]),
    ]
}

/// Which neighbours hang together.
struct Cells {
    /// Whether a curve runs between a cell's middle and that of the next column, and of the next row.
    cut: Vec<[bool; 2]>,
}

impl Cells {
    fn new(controls: &[Control; 2], curves: &[ChartCurve]) -> Self {
        let mut cells = Self { cut: vec![[false; 2]; GRID[0] * GRID[1]] };
        let place = |point: &[f64; 2]| -> [f64; 2] {
            std::array::from_fn(|k| {
                let Control { from, to, .. } = controls[k];
                (point[k] - from) / (to - from) * GRID[k] as f64 - 0.5 - LOOKED_AT[k]
            })
        };
        for curve in curves {
            let points: Vec<[f64; 2]> = curve.points.iter().map(place).collect();
            points.windows(2).for_each(|ends| cells.add(ends[0], ends[1]));
        }
        cells
    }

    /// Marks what a straight piece of a curve cuts, in coordinates in which the middles are whole numbers.
    fn add(&mut self, a: [f64; 2], b: [f64; 2]) {
        for k in [0, 1] {
            // Lines of middles along coordinate k, at whole numbers of the other one.
            let other = 1 - k;
            let (low, high) = (a[other].min(b[other]), a[other].max(b[other]));
            let first = low.ceil().max(0.0);
            let last = (high.ceil() - 1.0).min(GRID[other] as f64 - 1.0);
            for line in (0..GRID[other]).filter(|&line| (first..=last).contains(&(line as f64))) {
                let share = (line as f64 - a[other]) / (b[other] - a[other]);
                let at = a[k] + share * (b[k] - a[k]);
                // The middle before it.
                if let Some(before) = (0..GRID[k] - 1).find(|&i| (i as f64..(i + 1) as f64).contains(&at)) {
                    let mut place = [line; 2];
                    place[k] = before;
                    self.cut[place[1] * GRID[0] + place[0]][k] = true;
                }
            }
        }
    }

    /// The component of each cell, numbered in the order of their first cells; neighbours also need to be alike.
    fn components(&self, alike: &dyn Fn(usize, usize) -> bool) -> Vec<usize> {
        let mut owner = vec![usize::MAX; self.cut.len()];
        let mut count = 0;
        for first in 0..owner.len() {
            if owner[first] != usize::MAX {
                continue;
            }
            owner[first] = count;
            let mut stack = vec![first];
            while let Some(cell) = stack.pop() {
                for next in neighbours(cell).into_iter().flatten() {
                    if owner[next] == usize::MAX && !self.is_cut(cell, next) && alike(cell, next) {
                        owner[next] = count;
                        stack.push(next);
                    }
                }
            }
            count += 1;
        }
        owner
    }

    fn is_cut(&self, a: usize, b: usize) -> bool {
        let (low, high) = (a.min(b), a.max(b));
        self.cut[low][usize::from(high - low != 1)]
    }
}
