//! Points that fill a cube evenly: Sobol' sequences, scrambled so that their error can be judged.
//!
//! [`Sobol`] is one sequence: point by point by number, in any order. `directions.txt` has the direction numbers of
//! dimensions 2 to 512 as published by Joe & Kuo (2008, "new-joe-kuo-6"): a line a dimension, the inner coefficients of the
//! primitive polynomial as a number, then the initial values m_1, m_2, …; there are as many as its degree.

const DIRECTIONS: &str = include_str!("directions.txt");

/// Dimensions that a sequence can have.
pub const MOST_DIMENSIONS: usize = 512;

const BITS: usize = u64::BITS as usize;

/// A digital sequence in base 2 in some dimensions.
///
/// Coordinate j of point i is a XOR of direction numbers, those of the bits of the Gray code of i (Antonov & Saleev 1979):
/// every block of 2^k points from a multiple of 2^k is a net. 64 binary digits of up to 2^64 points.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Sobol {
    /// Direction numbers of each dimension: for the bits of the index from the lowest.
    columns: Vec<u64>,
    /// Bits of an index.
    depth: usize,
    /// One a dimension, XORed to every point.
    shift: Vec<u64>,
}

impl Sobol {
    /// The first `count` points in so many dimensions, as published, without any scrambling; the first is the origin.
    ///
    /// # Panics
    /// If there are more than [`MOST_DIMENSIONS`].
    #[must_use]
    pub fn new(dimensions: usize, count: u64) -> Self {
        assert!(dimensions <= MOST_DIMENSIONS, "{dimensions} dimensions");
        let depth = (u64::BITS - count.saturating_sub(1).leading_zeros()).max(1) as usize;
        let columns = all_directions().take(dimensions).flat_map(|all| all.into_iter().take(depth)).collect();
        Self { columns, depth, shift: vec![0; dimensions] }
    }

    /// The same points under a random linear scrambling and a random digital shift, by random `bits`.
    ///
    /// Every coordinate's digits are multiplied by a random lower triangular matrix with ones on its diagonal (Matoušek
    /// 1998) and shifted: each point is uniform in the cube, and nets stay nets, so that means of independent scramblings
    /// are independent and unbiased (Owen 1995). Asks for 65 numbers a dimension, in their order.
    #[must_use]
    pub fn scrambled(mut self, mut bits: impl FnMut() -> u64) -> Self {
        for (shift, columns) in self.shift.iter_mut().zip(self.columns.chunks_exact_mut(self.depth)) {
            // Digit r, from the highest, is a sum of itself and of random ones of the digits above it.
            let rows: Vec<u64> = (0..BITS).map(|r| top(r) & bits() | 1 << (BITS - 1 - r)).collect();
            for column in columns {
                let digit = |r: usize| u64::from((rows[r] & *column).count_ones() & 1) << (BITS - 1 - r);
                *column = (0..BITS).fold(0, |sum, r| sum | digit(r));
            }
            *shift = bits();
        }
        self
    }

    /// How many dimensions there are.
    #[must_use]
    pub fn dimensions(&self) -> usize {
        self.shift.len()
    }

    /// The binary digits after the point of one coordinate of point `index`, the highest first; index < the count given.
    ///
    /// # Panics
    /// If there is no such dimension.
    #[inline]
    #[must_use]
    pub fn digits(&self, index: u64, dimension: usize) -> u64 {
        let columns = &self.columns[dimension * self.depth..][..self.depth];
        let gray = index ^ (index >> 1);
        let chosen = |(k, column): (usize, &u64)| column & (gray >> k & 1).wrapping_neg();
        columns.iter().enumerate().fold(self.shift[dimension], |sum, each| sum ^ chosen(each))
    }
}

/// The `r` highest bits.
fn top(r: usize) -> u64 {
    if r == 0 { 0 } else { u64::MAX << (BITS - r) }
}

/// The direction numbers of every dimension, 64 each, the first being those of van der Corput.
fn all_directions() -> impl Iterator<Item = [u64; BITS]> {
    let first = std::array::from_fn(|k| 1u64 << (BITS - 1 - k));
    std::iter::once(first).chain(DIRECTIONS.lines().map(directions))
}

/// The recurrence of Bratley & Fox (1988) for one line of the table.
fn directions(line: &str) -> [u64; BITS] {
    let mut numbers = line.split(' ').map(|number| number.parse().unwrap_or(0u64));
    let inner = numbers.next().unwrap_or(0);
    let mut v = [0; BITS];
    let mut degree = 0;
    for m in numbers {
        v[degree] = m << (BITS - 1 - degree);
        degree += 1;
    }
    for k in degree..BITS {
        let ends = v[k - degree] ^ (v[k - degree] >> degree);
        let between = (1..degree).filter(|j| inner >> (degree - 1 - j) & 1 == 1);
        v[k] = between.fold(ends, |sum, j| sum ^ v[k - j]);
    }
    v
}
