//! The complex Schur form of a whole matrix, block by block along its pattern of zeros.
//!
//! Entries are permuted so that the matrix is block triangular ([`super::blocks`]), each block is scaled, balanced and brought
//! to triangular form on its own, and the couplings are carried along. So blocks of order one keep their entry as eigenvalue
//! to the last bit. Eigenvectors by back substitution are the work of [`super::vectors`].

use nalgebra::{Complex, DMatrix};

use super::blocks::strongly_connected;
use super::general;
use super::scale::{Scaled, balance, exponent_of, largest, times_power};
use super::{Unsolved, two};

/// S⁻¹ A S = 2^exponent Q T Qᴴ, where S is a permutation times powers of two.
pub(super) struct Triangular {
    /// Order.
    pub(super) n: usize,
    /// Upper triangular.
    pub(super) t: DMatrix<Complex<f64>>,
    /// Unitary, block diagonal.
    pub(super) q: DMatrix<Complex<f64>>,
    /// Eigenvalues of A, in the order of T's diagonal.
    pub(super) values: Vec<Complex<f64>>,
    /// How far the diagonal entry of T may be off, before a factor of a few ulp: the size of its block.
    pub(super) sizes: Vec<f64>,
    /// The index of A that row k of S⁻¹ A S has.
    pub(super) order: Vec<usize>,
    /// First place and order of each block.
    blocks: Vec<(usize, usize)>,
    /// Entry k of a vector of A is 2^`units`\[k\] times that of S⁻¹ A S.
    pub(super) units: Vec<i32>,
}

/// One diagonal block on its own: 2^exponent Q T Qᴴ after balancing.
struct Block {
    q: DMatrix<Complex<f64>>,
    t: DMatrix<Complex<f64>>,
    exponent: i32,
    units: Vec<i32>,
    /// Its largest entry, of T's size.
    size: f64,
}

impl Triangular {
    /// Of finite entries, row by row.
    pub(super) fn new(entries: &[f64], n: usize) -> Result<Self, Unsolved> {
        let parts = strongly_connected(n, |i, j| entries[i * n + j] != 0.0);
        // Each scaled by itself, so that a block much smaller than the others is as good as alone.
        let blocks = parts.iter().map(|part| Block::new(entries, n, part)).collect::<Result<Vec<_>, _>>()?;
        let exponent = blocks.iter().filter(|block| block.size > 0.0).map(|block| block.exponent).max().unwrap_or(0);
        let mut found = Self {
            n,
            t: DMatrix::zeros(n, n),
            q: DMatrix::zeros(n, n),
            values: Vec::with_capacity(n),
            sizes: Vec::with_capacity(n),
            order: parts.concat(),
            blocks: Vec::with_capacity(parts.len()),
            units: Vec::with_capacity(n),
        };
        for block in &blocks {
            found.add(block, entries, exponent);
        }
        Ok(found)
    }

    /// Q x, block by block, without what is 0.
    pub(super) fn turned(&self, x: &[Complex<f64>]) -> Vec<Complex<f64>> {
        let zero = Complex::new(0.0, 0.0);
        let mut out = vec![zero; self.n];
        for &(at, order) in &self.blocks {
            let places = at..at + order;
            for j in places.clone().filter(|&j| x[j] != zero) {
                let column = &self.q.as_slice()[j * self.n..(j + 1) * self.n];
                for (out, q) in out[places.clone()].iter_mut().zip(&column[places.clone()]) {
                    *out += q * x[j];
                }
            }
        }
        out
    }

    /// Puts a block at the next places of the diagonal, and above it what couples it to those before: Q_iᴴ A_ij Q_j.
    fn add(&mut self, block: &Block, entries: &[f64], exponent: i32) {
        let (n, start, m) = (self.n, self.units.len(), block.units.len());
        let entry = |row: usize, column: usize| entries[self.order[row] * n + self.order[start + column]];
        let power = |row: usize, column: usize| block.units[column] - self.units[row] - exponent;
        // The block's units are free by a factor: no coupling needs to be above 1.
        let sizes =
            (0..start).flat_map(|i| (0..m).filter_map(move |j| exponent_of(entry(i, j)).map(|e| e + power(i, j))));
        let shift = sizes.max().map_or(0, |most| most.max(0));
        let above = DMatrix::from_fn(start, m, |i, j| Complex::new(times_power(entry(i, j), power(i, j) - shift), 0.0));
        let right = above * &block.q;
        for &(at, order) in &self.blocks {
            let left = self.q.view((at, at), (order, order));
            self.t.view_mut((at, start), (order, m)).copy_from(&left.ad_mul(&right.rows(at, order)));
        }
        self.blocks.push((start, m));
        let by = block.exponent - exponent;
        self.t.view_mut((start, start), (m, m)).copy_from(&block.t.map(|z| scaled(z, by)));
        self.q.view_mut((start, start), (m, m)).copy_from(&block.q);
        self.values.extend((0..m).map(|i| scaled(block.t[(i, i)], block.exponent)));
        self.sizes.extend(std::iter::repeat_n(times_power(block.size, by), m));
        self.units.extend(block.units.iter().map(|unit| unit - shift));
    }
}

impl Block {
    fn new(entries: &[f64], n: usize, part: &[usize]) -> Result<Self, Unsolved> {
        let m = part.len();
        let mut block: Vec<f64> = part.iter().flat_map(|&i| part.iter().map(move |&j| entries[i * n + j])).collect();
        let units = balance(&mut block, m);
        let Scaled { entries, exponent } = Scaled::new(&block);
        let (q, t) = complex_schur(&entries, m)?;
        Ok(Self { q, t, exponent, units, size: largest(&entries) })
    }
}

fn scaled(z: Complex<f64>, exponent: i32) -> Complex<f64> {
    Complex::new(times_power(z.re, exponent), times_power(z.im, exponent))
}

/// Q and T.
type Pair = (DMatrix<Complex<f64>>, DMatrix<Complex<f64>>);

/// A = Q T Qᴴ with Q unitary and T triangular, of one balanced block of order n ≥ 1 with entries near 1; a complex pair stands in neighbouring places, exactly conjugate, the one above the axis
/// first.
pub(crate) fn complex_schur(entries: &[f64], n: usize) -> Result<Pair, Unsolved> {
    let complex = |x: f64| Complex::new(x, 0.0);
    let (mut q, mut t) = match n {
        // As they are: the closed form is better than an iteration.
        1 | 2 => (DMatrix::identity(n, n), DMatrix::from_row_slice(n, n, entries).map(complex)),
        _ => {
            let found = general::schur(entries, n)?;
            (found.q.map(complex), found.t.map(complex))
        }
    };
    let mut k = 0;
    while k + 1 < n {
        if t[(k + 1, k)] == complex(0.0) {
            k += 1;
        } else {
            split(&mut q, &mut t, k);
            k += 2;
        }
    }
    Ok((q, t))
}

/// Makes a real block of order two at place k triangular.
fn split(q: &mut DMatrix<Complex<f64>>, t: &mut DMatrix<Complex<f64>>, k: usize) {
    let [a, b, c, d] = [(k, k), (k, k + 1), (k + 1, k), (k + 1, k + 1)].map(|place| t[place].re);
    let [first, second] = two::values(&[a, b, c, d]);
    // Of the two ways to write an eigenvector, the one that cancels less.
    let ways = [[Complex::new(b, 0.0), first - a], [first - d, Complex::new(c, 0.0)]];
    let size = |v: &[Complex<f64>; 2]| v[0].norm().hypot(v[1].norm());
    let way = if size(&ways[0]) >= size(&ways[1]) { ways[0] } else { ways[1] };
    let [u, v] = way.map(|z| z / size(&way));
    // The unitary matrix with columns (u, v) and (−v̄, ū).
    for matrix in [&mut *q, &mut *t] {
        for i in 0..matrix.nrows() {
            let (x, y) = (matrix[(i, k)], matrix[(i, k + 1)]);
            matrix[(i, k)] = x * u + y * v;
            matrix[(i, k + 1)] = y * u.conj() - x * v.conj();
        }
    }
    for j in 0..t.ncols() {
        let (x, y) = (t[(k, j)], t[(k + 1, j)]);
        t[(k, j)] = u.conj() * x + v.conj() * y;
        t[(k + 1, j)] = u * y - v * x;
    }
    t[(k, k)] = first;
    t[(k + 1, k + 1)] = second;
    t[(k + 1, k)] = Complex::new(0.0, 0.0);
}
