//! Points in the unit cube, each by its number alone.
//!
//! Parts of a run need nothing of each other, and nothing is stored that grows with the number of points.

use crate::num::permutation::Permutation;
use crate::num::philox;
use crate::num::sobol::{MOST_DIMENSIONS, Sobol};

use super::{RANDOMISATIONS, Sampling};

/// What the random numbers of one seed are for; each use has a key of its own.
const PLACES: u64 = 1;
const ORDERS: u64 = 2;
const SCRAMBLES: u64 = 3;

/// Points of some dimensions.
#[derive(Clone, Debug)]
pub(super) struct Points {
    seed: u64,
    arranged: Arranged,
}

#[derive(Clone, Debug)]
enum Arranged {
    Random,
    /// For each randomisation: its points, and an order of strata for each dimension.
    Latin(Vec<(u64, Vec<Permutation>)>),
    /// One for each randomisation.
    Sobol(Vec<Sobol>),
}

impl Points {
    pub(super) fn new(sampling: Sampling, seed: u64, count: u64, dimensions: usize) -> Self {
        let arranged = match sampling {
            Sampling::Random => Arranged::Random,
            Sampling::Latin => {
                Arranged::Latin((0..RANDOMISATIONS).map(|r| orders(seed, r, count, dimensions)).collect())
            }
            Sampling::Sobol => {
                let plain = Sobol::new(dimensions.min(MOST_DIMENSIONS), count.div_ceil(RANDOMISATIONS));
                Arranged::Sobol((0..RANDOMISATIONS).map(|r| plain.clone().scrambled(series(seed, r))).collect())
            }
        };
        Self { seed, arranged }
    }

    /// The point of that number, coordinate by coordinate; of a later attempt, one that is random in the whole cube.
    #[inline]
    pub(super) fn point(&self, index: u64, attempt: u64) -> Point<'_> {
        Point { points: self, index, attempt, block: u64::MAX, bits: [0; 4] }
    }
}

/// The orders of the strata of one randomisation. Of `count` draws it has every sixteenth.
fn orders(seed: u64, r: u64, count: u64, dimensions: usize) -> (u64, Vec<Permutation>) {
    let size = count / RANDOMISATIONS + u64::from(r < count % RANDOMISATIONS);
    let key = |j: u64| philox::block([seed, ORDERS], [r, j / 4, 0, 0])[(j % 4) as usize];
    (size, (0..dimensions as u64).map(|j| Permutation::new(key(j), size)).collect())
}

/// Random numbers one after the other.
fn series(seed: u64, r: u64) -> impl FnMut() -> u64 {
    let mut next = 0;
    move || {
        let bits = philox::block([seed, SCRAMBLES], [r, next / 4, 0, 0])[(next % 4) as usize];
        next += 1;
        bits
    }
}

/// One point; remembers the random numbers of the last four coordinates.
pub(super) struct Point<'p> {
    points: &'p Points,
    index: u64,
    attempt: u64,
    block: u64,
    bits: [u64; 4],
}

impl Point<'_> {
    /// A coordinate, above 0 and below 1.
    #[inline]
    pub(super) fn at(&mut self, dimension: usize) -> f64 {
        let (r, place) = ((self.index % RANDOMISATIONS) as usize, self.index / RANDOMISATIONS);
        match &self.points.arranged {
            Arranged::Latin(all) if self.attempt == 0 => {
                let (size, orders) = &all[r];
                let stratum = orders[dimension].at(place) as f64;
                ((stratum + self.random(dimension)) / *size as f64).min(1.0 - f64::EPSILON)
            }
            Arranged::Sobol(all) if self.attempt == 0 && dimension < all[r].dimensions() => {
                philox::unit(all[r].digits(place, dimension))
            }
            _ => self.random(dimension),
        }
    }

    fn random(&mut self, dimension: usize) -> f64 {
        let (block, place) = (dimension as u64 / 4, dimension % 4);
        if block != self.block {
            self.bits = philox::block([self.points.seed, PLACES], [self.index, block, self.attempt, 0]);
            self.block = block;
        }
        philox::unit(self.bits[place])
    }
}
