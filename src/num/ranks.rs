//! Spearman's rank correlation of many pairs: exact of a few, by counts on a grid of many.
//!
//! As with [`quantiles`](super::quantiles), the plan decides which, and parts put together give what the whole would have.

use super::quantiles::MOST_EXACT;

/// Pairs of numbers, of whose ranks the correlation is asked.
#[derive(Clone, Debug, PartialEq)]
pub struct Ranks(Store);

#[derive(Clone, Debug, PartialEq)]
enum Store {
    Exact(Vec<[f64; 2]>),
    Grid(Grid),
}

/// Counts of pairs between rising edges of either number.
#[derive(Clone, Debug, PartialEq)]
struct Grid {
    edges: [Vec<f64>; 2],
    /// Row by row of the first number.
    counts: Vec<u64>,
}

impl Ranks {
    /// Room for as many pairs as are `planned`, in all parts together.
    ///
    /// Where they are many, `edges` of both numbers say what is taken together, such as 63 quantiles of each: with 64 × 64
    /// cells of equal shares a correlation is found within some 1e-3 of the exact one. They must rise, and be the same in all parts.
    #[must_use]
    pub fn new(planned: u64, edges: impl FnOnce() -> [Vec<f64>; 2]) -> Self {
        if planned <= MOST_EXACT {
            return Self(Store::Exact(Vec::new()));
        }
        let edges = edges();
        let counts = vec![0; (edges[0].len() + 1) * (edges[1].len() + 1)];
        Self(Store::Grid(Grid { edges, counts }))
    }

    /// Whether the correlation is exact.
    #[must_use]
    pub fn is_exact(&self) -> bool {
        matches!(self.0, Store::Exact(_))
    }

    /// Takes one more pair; one with a NaN is left out.
    pub fn push(&mut self, x: f64, y: f64) {
        if x.is_nan() || y.is_nan() {
            return;
        }
        match &mut self.0 {
            Store::Exact(pairs) => pairs.push([x, y]),
            Store::Grid(grid) => {
                let place = |edges: &[f64], value: f64| edges.partition_point(|edge| *edge <= value);
                let (i, j) = (place(&grid.edges[0], x), place(&grid.edges[1], y));
                grid.counts[i * (grid.edges[1].len() + 1) + j] += 1;
            }
        }
    }

    /// Takes all pairs of another part of the same plan.
    ///
    /// # Panics
    /// If the other was made for another plan.
    pub fn and(&mut self, other: &Self) {
        match (&mut self.0, &other.0) {
            (Store::Exact(pairs), Store::Exact(more)) => pairs.extend_from_slice(more),
            (Store::Grid(grid), Store::Grid(more)) if grid.edges == more.edges => {
                grid.counts.iter_mut().zip(&more.counts).for_each(|(count, more)| *count += more);
            }
            _ => panic_of_plans(),
        }
    }

    /// Spearman's correlation: Pearson's of the ranks, equal numbers sharing the mean of theirs (Kendall 1948). `None` of
    /// fewer than two pairs, and where all of one number are equal.
    #[must_use]
    pub fn correlation(&self) -> Option<f64> {
        match &self.0 {
            Store::Exact(pairs) => {
                let (x, y) = (ranks(pairs, 0), ranks(pairs, 1));
                pearson(x.into_iter().zip(y).map(|(x, y)| (x, y, 1.0)))
            }
            Store::Grid(grid) => grid.correlation(),
        }
    }
}

#[expect(clippy::panic, reason = "a mistake of ours: parts of different plans")]
fn panic_of_plans() {
    panic!("ranks of different plans are put together");
}

impl Grid {
    fn correlation(&self) -> Option<f64> {
        let width = self.edges[1].len() + 1;
        let rows: Vec<u64> = self.counts.chunks_exact(width).map(|row| row.iter().sum()).collect();
        let columns: Vec<u64> = (0..width).map(|j| self.counts.iter().skip(j).step_by(width).sum()).collect();
        let (x, y) = (shared(&rows), shared(&columns));
        let cells = self.counts.iter().enumerate().filter(|(_, count)| **count > 0);
        pearson(cells.map(|(place, count)| (x[place / width], y[place % width], *count as f64)))
    }
}

/// The mean rank of each of some groups, counted from −half to half of all, so that their mean is 0.
fn shared(counts: &[u64]) -> Vec<f64> {
    let half = counts.iter().sum::<u64>() as f64 / 2.0;
    let mut before = 0.0;
    let mut rank = |count: &u64| {
        let middle = before + *count as f64 / 2.0;
        before += *count as f64;
        middle - half
    };
    counts.iter().map(&mut rank).collect()
}

/// The rank of each pair by one of its numbers, around 0.
fn ranks(pairs: &[[f64; 2]], which: usize) -> Vec<f64> {
    let mut order: Vec<usize> = (0..pairs.len()).collect();
    // −0 and 0 are equal.
    let value = |i: usize| pairs[i][which] + 0.0;
    order.sort_unstable_by(|&i, &j| value(i).total_cmp(&value(j)));
    let equal: Vec<&[usize]> = order.chunk_by(|&i, &j| value(i) == value(j)).collect();
    let counts: Vec<u64> = equal.iter().map(|group| group.len() as u64).collect();
    let mut out = vec![0.0; pairs.len()];
    for (group, rank) in equal.into_iter().zip(shared(&counts)) {
        for &i in group {
            out[i] = rank;
        }
    }
    out
}

/// Pearson's correlation of numbers around 0, each pair with its count.
///
/// Products of ranks are multiples of a quarter, so that up to 200,000 single pairs all sums are exact, in any order.
fn pearson(pairs: impl Iterator<Item = (f64, f64, f64)>) -> Option<f64> {
    let [mut xx, mut yy, mut xy] = [0.0; 3];
    for (x, y, count) in pairs {
        xx += count * x * x;
        yy += count * y * y;
        xy += count * x * y;
    }
    (xx > 0.0 && yy > 0.0).then(|| (xy / (xx.sqrt() * yy.sqrt())).clamp(-1.0, 1.0))
}
