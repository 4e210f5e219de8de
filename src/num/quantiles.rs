//! Quantiles of many numbers: exact of a few, by counts in fixed bins of many, so that memory stays flat.
//!
//! Which of the two is decided by how many numbers are planned, not by how many came: parts of a run that are put
//! together give what the whole would have given, bit for bit.

use super::elementary::{exp, ln};

/// Up to so many planned numbers are kept themselves.
pub const MOST_EXACT: u64 = 200_000;

/// The relative width of a bin.
pub const WIDTH: f64 = 1e-3;
/// ln(1 + width).
const LN_STEP: f64 = 9.995_003_330_835_332e-4;

/// Numbers, of which quantiles are asked.
#[derive(Clone, Debug, PartialEq)]
pub struct Quantiles(Store);

#[derive(Clone, Debug, PartialEq)]
enum Store {
    Exact(Vec<f64>),
    Bins(Bins),
}

impl Quantiles {
    /// Room for as many numbers as are `planned`, in all parts together.
    #[must_use]
    pub fn new(planned: u64) -> Self {
        Self(if planned <= MOST_EXACT { Store::Exact(Vec::new()) } else { Store::Bins(Bins::default()) })
    }

    /// Whether quantiles are exact, rather than good to half the [`WIDTH`] of a bin.
    #[must_use]
    pub fn is_exact(&self) -> bool {
        matches!(self.0, Store::Exact(_))
    }

    /// Takes one more number; infinities have their places at the ends. NaN is nobody's place and is left out.
    pub fn push(&mut self, x: f64) {
        if x.is_nan() {
            return;
        }
        match &mut self.0 {
            // −0 would be sorted before 0.
            Store::Exact(values) => values.push(x + 0.0),
            Store::Bins(bins) => bins.push(x),
        }
    }

    /// Takes all numbers of another part of the same plan.
    ///
    /// # Panics
    /// If the other was made for a plan of another kind.
    pub fn and(&mut self, other: &Self) {
        match (&mut self.0, &other.0) {
            (Store::Exact(values), Store::Exact(more)) => values.extend_from_slice(more),
            (Store::Bins(bins), Store::Bins(more)) => bins.and(more),
            _ => panic_of_plans(),
        }
    }

    /// The numbers in order, to be asked.
    #[must_use]
    pub fn sorted(mut self) -> Sorted {
        if let Store::Exact(values) = &mut self.0 {
            values.sort_unstable_by(f64::total_cmp);
        }
        Sorted(self.0)
    }
}

#[expect(clippy::panic, reason = "a mistake of ours: parts of different plans")]
fn panic_of_plans() {
    panic!("quantiles of exact numbers and of bins are put together");
}

/// Numbers in order.
#[derive(Clone, Debug, PartialEq)]
pub struct Sorted(Store);

impl Sorted {
    /// How many there are.
    #[must_use]
    pub fn count(&self) -> u64 {
        match &self.0 {
            Store::Exact(values) => values.len() as u64,
            Store::Bins(bins) => bins.count,
        }
    }

    /// The value that a share lies below, 0 ≤ share ≤ 1: linear between the neighbours of rank share × (count − 1)
    /// (Hyndman & Fan 1996, type 7). Of bins, at the place of that rank within its bin. `None` of nothing.
    #[must_use]
    #[expect(clippy::cast_sign_loss, reason = "a rank is not negative")]
    pub fn at(&self, share: f64) -> Option<f64> {
        let last = self.count().checked_sub(1)? as f64;
        let rank = (share.clamp(0.0, 1.0) * last).min(last);
        Some(match &self.0 {
            Store::Exact(values) => {
                let (low, high) = (values[rank.floor() as usize], values[rank.ceil() as usize]);
                if low == high { low } else { low + (high - low) * rank.fract() }
            }
            Store::Bins(bins) => bins.at(rank),
        })
    }

    /// The share of the numbers at or below x; of bins, the part of a bin that x lies in counts in proportion. 0 of nothing.
    #[must_use]
    pub fn share(&self, x: f64) -> f64 {
        let below = match &self.0 {
            Store::Exact(values) => values.partition_point(|value| *value <= x) as f64,
            Store::Bins(bins) => bins.below(x),
        };
        below / (self.count() as f64).max(1.0)
    }

    /// The values that part the numbers into `parts` equal shares, rising, without the ends; fewer where they coincide.
    #[must_use]
    pub fn edges(&self, parts: usize) -> Vec<f64> {
        let mut edges: Vec<f64> = (1..parts).filter_map(|k| self.at(k as f64 / parts as f64)).collect();
        edges.dedup();
        edges
    }
}

/// Counts in bins: of −∞, of negative numbers, of 0, of positive numbers, of +∞.
#[derive(Clone, Debug, Default, PartialEq)]
struct Bins {
    count: u64,
    ends: [u64; 2],
    zero: u64,
    /// By the logarithm of the size, of positive and of negative numbers.
    positive: Span,
    negative: Span,
}

impl Bins {
    fn push(&mut self, x: f64) {
        self.count += 1;
        if x.is_infinite() {
            self.ends[usize::from(x > 0.0)] += 1;
        } else if x == 0.0 {
            self.zero += 1;
        } else if x > 0.0 {
            self.positive.add(bin(x), 1);
        } else {
            self.negative.add(bin(-x), 1);
        }
    }

    fn and(&mut self, other: &Self) {
        self.count += other.count;
        self.zero += other.zero;
        self.ends = [self.ends[0] + other.ends[0], self.ends[1] + other.ends[1]];
        self.positive.and(&other.positive);
        self.negative.and(&other.negative);
    }

    /// Every bin that is not empty with its ends, rising.
    fn rising(&self) -> impl Iterator<Item = (f64, f64, u64)> {
        let [least, most] = [f64::NEG_INFINITY, f64::INFINITY];
        let negative = self.negative.filled().rev().map(|(k, count)| (-edge(k + 1), -edge(k), count));
        let positive = self.positive.filled().map(|(k, count)| (edge(k), edge(k + 1), count));
        let all = std::iter::once((least, least, self.ends[0])).chain(negative);
        let all = all.chain(std::iter::once((0.0, 0.0, self.zero))).chain(positive);
        all.chain(std::iter::once((most, most, self.ends[1]))).filter(|(.., count)| *count > 0)
    }

    fn at(&self, rank: f64) -> f64 {
        let (mut before, mut last) = (0.0, f64::NAN);
        for (low, high, count) in self.rising() {
            let within = rank - before;
            // Numbers of a bin are taken to lie evenly in it, the k-th in the middle of the k-th part.
            if within <= count as f64 - 0.5 {
                return if low == high { low } else { low + (high - low) * ((within + 0.5) / count as f64).max(0.0) };
            }
            before += count as f64;
            last = high;
        }
        last
    }

    fn below(&self, x: f64) -> f64 {
        let part = |(low, high, count): (f64, f64, u64)| {
            let share = if x >= high {
                1.0
            } else if x <= low {
                0.0
            } else {
                (x - low) / (high - low)
            };
            share * count as f64
        };
        self.rising().map(part).sum()
    }
}

/// The bin of a positive number: the whole part of its logarithm to the base 1 + [`WIDTH`].
fn bin(x: f64) -> i32 {
    (ln(x) / LN_STEP).floor() as i32
}

/// The lower end of a bin; the upper end of the highest is the greatest number.
fn edge(k: i32) -> f64 {
    exp(f64::from(k) * LN_STEP).min(f64::MAX)
}

/// Counts of a range of bins.
#[derive(Clone, Debug, Default)]
struct Span {
    first: i32,
    counts: Vec<u64>,
}

impl PartialEq for Span {
    fn eq(&self, other: &Self) -> bool {
        self.filled().eq(other.filled())
    }
}

impl Span {
    /// Room grows by what is used: the bins of all f64 would take 11 MB.
    fn add(&mut self, k: i32, count: u64) {
        if self.counts.is_empty() {
            self.first = k;
        } else if k < self.first {
            let more = usize::try_from(self.first - k).unwrap_or(0);
            self.counts.splice(0..0, std::iter::repeat_n(0, more));
            self.first = k;
        }
        let place = usize::try_from(k - self.first).unwrap_or(0);
        if place >= self.counts.len() {
            self.counts.resize(place + 1, 0);
        }
        self.counts[place] += count;
    }

    fn and(&mut self, other: &Self) {
        for (k, count) in other.filled() {
            self.add(k, count);
        }
    }

    #[expect(clippy::cast_possible_wrap, reason = "f64 have under three million bins")]
    fn filled(&self) -> impl DoubleEndedIterator<Item = (i32, u64)> {
        let all = self.counts.iter().enumerate();
        all.filter(|(_, count)| **count > 0).map(|(place, count)| (self.first + place as i32, *count))
    }
}
