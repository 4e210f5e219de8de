//! How sure a share, a mean or a quantile over draws is: intervals that hold the true one 95 times in 100.
//!
//! What is counted comes in the groups of the draws' [`Way`]: one group of independent draws, sixteen of randomised
//! points, consecutive batches of a file. `spread` finds how far a mean over draws strays; here that becomes an
//! interval. Groups of parts of a run add.

mod spread;

use crate::num::normal;
use crate::num::quantiles::{Quantiles, Sorted};
use crate::num::student;
use crate::num::sum::Sum;

use super::draw::Way;
use spread::{Spread, spread};

/// Batches of consecutive draws, of which the last digits of correlation between draws are seen.
pub const BATCHES: u64 = 256;

/// The share of the distribution of an estimate below the upper end of an interval.
const UPPER: f64 = 0.975;

/// An interval, and what it rests on.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval95 {
    /// Its lower end.
    pub low: f64,
    /// Its upper end.
    pub high: f64,
    /// As many independent draws would give an interval as narrow.
    pub effective: f64,
    /// By what it was found.
    pub basis: Basis,
}

/// By what an interval was found.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Basis {
    /// Draws are independent: Wilson (1927) for a share, the normal or Student's distribution for a mean.
    Independent,
    /// The differences between independent randomisations, by Student's distribution.
    Randomisations,
    /// The correlations between batches in the order of a file (Geyer 1992).
    Batches,
    /// All groups agree, so that their differences say nothing: as for independent draws, than which even points are no
    /// worse (Owen 1997); of a file, as for the effective number of its draws. For a share of 0 that is 0 to about 4/n.
    NoSpread,
}

/// What was counted in a group.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Counted {
    /// Draws that count.
    pub of: u64,
    /// Those with the outcome.
    pub hits: u64,
}

impl Counted {
    /// Counts one more draw.
    pub fn push(&mut self, hit: bool) {
        self.of += 1;
        self.hits += u64::from(hit);
    }

    /// Adds the counts of another part.
    pub fn and(&mut self, other: &Self) {
        self.of += other.of;
        self.hits += other.hits;
    }
}

/// Sums of a quantity in a group, without rounding.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Moments {
    count: u64,
    sum: Sum,
    squares: Sum,
}

impl Moments {
    /// Takes one more finite number.
    pub fn push(&mut self, x: f64) {
        self.count += 1;
        self.sum.add(x);
        self.squares.add(x * x);
    }

    /// Adds the sums of another part.
    pub fn and(&mut self, other: &Self) {
        self.count += other.count;
        self.sum.and(&other.sum);
        self.squares.and(&other.squares);
    }

    /// How many numbers there are.
    #[must_use]
    pub fn count(&self) -> u64 {
        self.count
    }

    /// Their mean; `None` of nothing.
    #[must_use]
    pub fn mean(&self) -> Option<f64> {
        (self.count > 0).then(|| self.sum.value() / self.count as f64)
    }

    /// The variance of one of them, with n − 1; 0 of fewer than two.
    #[must_use]
    pub fn variance(&self) -> f64 {
        let (n, sum) = (self.count as f64, self.sum.value());
        if self.count < 2 { 0.0 } else { ((self.squares.value() - sum * (sum / n)) / (n - 1.0)).max(0.0) }
    }
}

/// How many there are in a group, and their mean.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Group {
    of: f64,
    mean: f64,
}

/// The interval of a probability. `None` where nothing was counted.
///
/// Wilson's (1927), with the effective number of draws in place of their number, and Student's quantile in place of the
/// normal one where that number is itself estimated, as for surveys (Kott & Carr 1997). So it stays within 0 and 1 and
/// holds for rare outcomes, and for common ones is that of Student over the groups.
#[must_use]
pub fn of_share(way: Way, groups: &[Counted]) -> Option<Interval95> {
    let of: u64 = groups.iter().map(|group| group.of).sum();
    let hits: u64 = groups.iter().map(|group| group.hits).sum();
    let mean = |group: &Counted| if group.of == 0 { 0.0 } else { group.hits as f64 / group.of as f64 };
    let groups: Vec<Group> = groups.iter().map(|group| Group { of: group.of as f64, mean: mean(group) }).collect();
    (of > 0).then(|| around_share(way, &groups, hits as f64 / of as f64))
}

fn around_share(way: Way, groups: &[Group], share: f64) -> Interval95 {
    let count: f64 = groups.iter().map(|group| group.of).sum();
    let bernoulli = share * (1.0 - share);
    let normal = normal::quantile(UPPER);
    let found = spread(way, groups, share).filter(|found| found.variance > 0.0 && bernoulli > 0.0);
    let (effective, quantile, basis) = match (way, found) {
        (Way::Independent, _) => (count, normal, Basis::Independent),
        (Way::Randomised, Some(found)) => (bernoulli / found.variance, found.quantile(), Basis::Randomisations),
        (Way::InOrder { .. }, Some(found)) => {
            ((bernoulli / found.variance).min(count), found.quantile(), Basis::Batches)
        }
        (Way::Randomised, None) => (count, normal, Basis::NoSpread),
        (Way::InOrder { effective }, None) => (effective.min(count), normal, Basis::NoSpread),
    };
    let [low, high] = wilson(share, effective, quantile);
    Interval95 { low, high, effective, basis }
}

/// The shares p with |p − found| ≤ z √(p(1 − p)/n) (Wilson 1927); within 0 and 1, and holding what was found.
fn wilson(found: f64, n: f64, z: f64) -> [f64; 2] {
    let t = z * z / n;
    let middle = found + t / 2.0;
    let half = z * (found * (1.0 - found) / n + t / n / 4.0).sqrt();
    [((middle - half) / (1.0 + t)).clamp(0.0, found), ((middle + half) / (1.0 + t)).clamp(found, 1.0)]
}

/// The interval of a mean. `None` of fewer than two numbers.
///
/// By Student's distribution on both sides; where all numbers are equal it is that number alone.
#[must_use]
pub fn of_mean(way: Way, groups: &[Moments]) -> Option<Interval95> {
    let mut all = Moments::default();
    for group in groups {
        all.and(group);
    }
    let mean = all.mean().filter(|_| all.count > 1)?;
    let count = all.count as f64;
    let alone = Spread { variance: all.variance() / count, freedom: count - 1.0 };
    let of = |group: &Moments| Group { of: group.count as f64, mean: group.mean().unwrap_or(mean) };
    let groups: Vec<Group> = groups.iter().map(of).collect();
    let (found, basis) = match (way, spread(way, &groups, mean).filter(|found| found.variance > 0.0)) {
        (Way::Independent, _) => (alone, Basis::Independent),
        (Way::Randomised, Some(found)) => (found, Basis::Randomisations),
        (Way::InOrder { .. }, Some(found)) => {
            (Spread { variance: found.variance.max(alone.variance), ..found }, Basis::Batches)
        }
        (Way::Randomised | Way::InOrder { .. }, None) => (alone, Basis::NoSpread),
    };
    let half = found.quantile() * found.variance.sqrt();
    let effective = if found.variance > 0.0 { all.variance() / found.variance } else { count };
    Some(Interval95 { low: mean - half, high: mean + half, effective, basis })
}

/// A quantile with its interval. `None` of nothing.
///
/// The interval of the share below the quantile found, taken back to values (Woodruff 1952).
#[must_use]
pub fn of_quantile(way: Way, groups: &[Quantiles], level: f64) -> Option<(f64, Interval95)> {
    let (first, others) = groups.split_first()?;
    let mut all = first.clone();
    for group in others {
        all.and(group);
    }
    let all = all.sorted();
    let value = all.at(level)?;
    let each = groups.iter().map(|group| group.clone().sorted());
    let groups: Vec<Group> =
        each.map(|group: Sorted| Group { of: group.count() as f64, mean: group.share(value) }).collect();
    let shares = around_share(way, &groups, all.share(value));
    // The share found differs from the level by as much as values are discrete.
    let shifted = |share: f64| all.at((level + share - all.share(value)).clamp(0.0, 1.0)).unwrap_or(value);
    let (low, high) = (shifted(shares.low).min(value), shifted(shares.high).max(value));
    Some((value, Interval95 { low, high, ..shares }))
}

impl Spread {
    fn quantile(&self) -> f64 {
        student::quantile(self.freedom, UPPER)
    }
}
