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

/// Columns and rows.
const GRID: [usize; 2] = [48, 24];

/// One cell of so many each way is searched, to check that a region is of one kind.
const CHECKED: usize = 6;

/// What there is.
pub(super) struct Found {
    pub(super) regions: Vec<Region>,
    pub(super) cells: Vec<Option<usize>>,
    pub(super) grid: [usize; 2],
}

/// Searches at cells.
struct Searcher<'s> {
    subject: Subject<'s>,
    lineariser: Lineariser,
    controls: [Control; 2],
    values: Vec<f64>,
    known: Vec<Option<Region>>,
}

/// The regions of a chart with these curves.
pub(super) fn find(
    subject: &Subject<'_>,
    controls: &[Control; 2],
    curves: &[ChartCurve],
    budget: &Budget<'_>,
) -> Found {
    let cells = Cells::new(controls, curves);
    let count = GRID[0] * GRID[1];
    let mut searcher = Searcher::new(subject, *controls);
    let mut owner = cells.components(&|_, _| true);
    let mixed: Vec<usize> = members(&owner)
        .iter()
        .enumerate()
        .filter(|(_, members)| !searcher.is_of_one_kind(&owner, members, budget))
        .map(|(component, _)| component)
        .collect();
    if !mixed.is_empty() {
        let found = |cell: usize| searcher.at(cell, budget).map(likeness);
        let mut kinds = vec![None; count];
        for (cell, found) in (0..count).map(found).enumerate().filter(|(cell, _)| mixed.contains(&owner[*cell])) {
            kinds[cell] = found;
        }
        owner = cells.components(&|a, b| kinds[a] == kinds[b]);
    }
    searcher.named(&owner, budget)
}

/// The cells of each component, in order.
fn members(owner: &[usize]) -> Vec<Vec<usize>> {
    let count = owner.iter().max().map_or(0, |last| last + 1);
    let mut members = vec![Vec::new(); count];
    owner.iter().enumerate().for_each(|(cell, &component)| members[component].push(cell));
    members
}

impl<'s> Searcher<'s> {
    fn new(subject: &Subject<'s>, controls: [Control; 2]) -> Self {
        let parameters = controls.map(|control| control.parameter);
        Self {
            lineariser: Lineariser::open(subject, &parameters),
            values: subject.plan.values.clone(),
            subject: subject.clone(),
            controls,
            known: vec![None; GRID[0] * GRID[1]],
        }
    }

    /// What is at the middle of a cell; `None` where the search was stopped.
    fn at(&mut self, cell: usize, budget: &Budget<'_>) -> Option<&Region> {
        if self.known[cell].is_none() {
            self.known[cell] = self.searched(middle(&self.controls, cell), budget);
        }
        self.known[cell].as_ref()
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

    /// Whether the cells of a component that are looked at have the same number and types of equilibria as its deepest.
    fn is_of_one_kind(&mut self, owner: &[usize], members: &[usize], budget: &Budget<'_>) -> bool {
        let Some(first) = self.at(deepest(owner, members), budget).map(likeness) else { return true };
        let checked: Vec<usize> = members.iter().copied().filter(|&cell| is_checked(cell)).collect();
        checked.into_iter().all(|cell| self.at(cell, budget).map(likeness).is_none_or(|found| found == first))
    }

    fn named(&mut self, owner: &[usize], budget: &Budget<'_>) -> Found {
        let mut regions = Vec::new();
        let mut cells = vec![None; owner.len()];
        for members in members(owner) {
            let Some(region) = self.at(deepest(owner, &members), budget).cloned() else { continue };
            members.iter().for_each(|&cell| cells[cell] = Some(regions.len()));
            regions.push(region);
        }
        Found { regions, cells, grid: GRID }
    }
}

fn is_checked(cell: usize) -> bool {
    let middle = CHECKED / 2;
    cell % GRID[0] % CHECKED == middle && cell / GRID[0] % CHECKED == middle
}

/// The controls at the middle of a cell.
fn middle(controls: &[Control; 2], cell: usize) -> [f64; 2] {
    let place = [cell % GRID[0], cell / GRID[0]];
    std::array::from_fn(|k| {
        let Control { from, to, .. } = controls[k];
        from + (to - from) * (place[k] as f64 + 0.5) / GRID[k] as f64
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
                (point[k] - from) / (to - from) * GRID[k] as f64 - 0.5
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
            let mut line = first;
            while line <= last {
                let share = (line - a[other]) / (b[other] - a[other]);
                let at = (a[k] + share * (b[k] - a[k])).floor();
                if at >= 0.0 && at + 1.0 < GRID[k] as f64 {
                    let mut place = [0usize; 2];
                    place[k] = at as usize;
                    place[other] = line as usize;
                    self.cut[place[1] * GRID[0] + place[0]][k] = true;
                }
                line += 1.0;
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
