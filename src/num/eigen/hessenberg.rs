//! A matrix brought to Hessenberg form by reflections, in one pass over it for each; the similarity itself is forgotten.
//!
//! Meant for [`super::francis`], which finds eigenvalues in that form. Columns are kept in whole vectors of a processor, with
//! zeros below the last row and one column of zeros after the last, so that loops have no ends to look after.
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

/// Numbers in a vector.
const LANES: usize = 8;

/// So many numbers apart, columns would share the same few places of a cache.
const CACHE_STRIDE: usize = 64;

/// A square matrix, column by column.
pub(super) struct Columns {
    /// Order.
    pub(super) n: usize,
    /// Vectors in a column, more than n numbers.
    height: usize,
    vectors: Vec<[f64; LANES]>,
}

impl Columns {
    /// Of entries row by row.
    pub(super) fn new(entries: &[f64], n: usize) -> Self {
        let mut height = n / LANES + 1;
        if (height * LANES).is_multiple_of(CACHE_STRIDE) {
            height += 1;
        }
        let mut vectors = vec![[0.0; LANES]; height * (n + 1)];
        let flat = vectors.as_flattened_mut();
        for (i, row) in entries.chunks_exact(n.max(1)).enumerate() {
            for (j, &entry) in row.iter().enumerate() {
                flat[j * height * LANES + i] = entry;
            }
        }
        Self { n, height, vectors }
    }

    /// The j-th column, whole.
    #[inline(always)]
    fn column(&mut self, j: usize) -> &mut [[f64; LANES]] {
        &mut self.vectors[j * self.height..(j + 1) * self.height]
    }

    #[inline(always)]
    pub(super) fn at(&self, i: usize, j: usize) -> f64 {
        self.vectors.as_flattened()[j * self.height * LANES + i]
    }

    #[inline(always)]
    pub(super) fn put(&mut self, i: usize, j: usize, entry: f64) {
        self.vectors.as_flattened_mut()[j * self.height * LANES + i] = entry;
    }

    /// (I − b v vᵀ) A for a v in rows k to k + 2, in columns k to before `end`.
    #[inline(always)]
    pub(super) fn reflect_rows(&mut self, k: usize, end: usize, Reflection { v, bv }: &Reflection) {
        let stride = self.height * LANES;
        for column in self.vectors.as_flattened_mut()[k * stride..end * stride].chunks_exact_mut(stride) {
            if let Some(x) = column[k..].first_chunk_mut::<3>() {
                let along = v[0] * x[0] + v[1] * x[1] + v[2] * x[2];
                x[0] -= along * bv[0];
                x[1] -= along * bv[1];
                x[2] -= along * bv[2];
            }
        }
    }

    /// A (I − b v vᵀ) for a v in columns k to k + 2, in rows `from` to before `to`, or some more above and below.
    #[inline(always)]
    pub(super) fn reflect_columns(&mut self, k: usize, from: usize, to: usize, Reflection { v, bv }: &Reflection) {
        let (rows, height) = (from / LANES..to.div_ceil(LANES), self.height);
        let (first, rest) = self.vectors[k * height..(k + 3) * height].split_at_mut(height);
        let (second, third) = rest.split_at_mut(height);
        let columns = first[rows.clone()].iter_mut().zip(&mut second[rows.clone()]).zip(&mut third[rows]);
        for ((x, y), z) in columns {
            let mut along = [0.0; LANES];
            for l in 0..LANES {
                along[l] = v[0] * x[l] + v[1] * y[l] + v[2] * z[l];
            }
            for l in 0..LANES {
                x[l] -= along[l] * bv[0];
            }
            for l in 0..LANES {
                y[l] -= along[l] * bv[1];
            }
            for l in 0..LANES {
                z[l] -= along[l] * bv[2];
            }
        }
    }

    /// Qᵀ A Q in its place, with nothing below the first subdiagonal (Householder 1958; Golub & Van Loan 2013, §7.4).
    ///
    /// A reflection I − u uᵀ, |u|² = 2, makes A − u yᵀ − w uᵀ of A, with y = Aᵀ u and w = A u − (uᵀ A u) u. Columns take it
    /// when the next one is being prepared, which needs the same pass for its own y and w.
    #[inline(always)]
    pub(super) fn reduce(&mut self) {
        let (n, height) = (self.n, self.height);
        let mut last = Update::none(height, n);
        let mut next = Update::none(height, n);
        for k in 0..n {
            last.apply(self.column(k), k);
            if k + 2 < n && next.reflect(self.column(k).as_flattened_mut(), k + 1) {
                for j in k + 1..n {
                    last.apply_and_gather(self.column(j), j, &mut next);
                }
                next.close();
            } else {
                (k + 1..n).for_each(|j| last.apply(self.column(j), j));
                next.clear();
            }
            std::mem::swap(&mut last, &mut next);
        }
    }
}

/// What a reflection takes from a matrix: u yᵀ + w uᵀ.
struct Update {
    u: Vec<[f64; LANES]>,
    w: Vec<[f64; LANES]>,
    y: Vec<f64>,
}

impl Update {
    fn none(height: usize, n: usize) -> Self {
        Self { u: vec![[0.0; LANES]; height], w: vec![[0.0; LANES]; height], y: vec![0.0; n] }
    }

    #[inline(always)]
    fn clear(&mut self) {
        self.u.fill([0.0; LANES]);
        self.w.fill([0.0; LANES]);
        self.y.fill(0.0);
    }

    /// The reflection that leaves of the rows from `first` on only the first entry; false where the others are 0 as it is.
    #[inline(always)]
    fn reflect(&mut self, column: &mut [f64], first: usize) -> bool {
        self.clear();
        if column[first + 1..].iter().all(|&x| x == 0.0) {
            return false;
        }
        let u = &mut self.u.as_flattened_mut()[first..];
        u.copy_from_slice(&column[first..]);
        column[first] = reflector(u);
        column[first + 1..].fill(0.0);
        true
    }

    #[inline(always)]
    fn apply(&self, column: &mut [[f64; LANES]], j: usize) {
        let (along, across) = (self.y[j], self.u.as_flattened()[j]);
        for ((entry, u), w) in column.iter_mut().zip(&self.u).zip(&self.w) {
            for l in 0..LANES {
                entry[l] -= u[l] * along + w[l] * across;
            }
        }
    }

    /// The same, and what column j contributes to the A u and Aᵀ u of the next.
    #[inline(always)]
    fn apply_and_gather(&self, column: &mut [[f64; LANES]], j: usize, next: &mut Self) {
        let (along, across, weight) = (self.y[j], self.u.as_flattened()[j], next.u.as_flattened()[j]);
        let mut sum = [0.0; LANES];
        let own = column.iter_mut().zip(&self.u).zip(&self.w);
        for (((entry, u), w), (to, from)) in own.zip(next.w.iter_mut().zip(&next.u)) {
            // In copies, so that the compiler sees that they do not overlap.
            let (mut at, mut gathered) = (*entry, *to);
            for l in 0..LANES {
                at[l] -= u[l] * along + w[l] * across;
            }
            for l in 0..LANES {
                gathered[l] += at[l] * weight;
            }
            for l in 0..LANES {
                sum[l] += at[l] * from[l];
            }
            (*entry, *to) = (at, gathered);
        }
        next.y[j] = sum.iter().sum();
    }

    /// Makes w of A u.
    #[inline(always)]
    fn close(&mut self) {
        let both: f64 = self.u.as_flattened().iter().zip(&self.y).map(|(u, y)| u * y).sum();
        for (w, u) in self.w.as_flattened_mut().iter_mut().zip(self.u.as_flattened()) {
            *w -= both * u;
        }
    }
}

/// Makes of a vector the u of the reflection I − u uᵀ, |u|² = 2, that brings it to its first axis; where on that axis. u = 0
/// for a vector of zeros.
#[inline(always)]
fn reflector(u: &mut [f64]) -> f64 {
    let largest = u.iter().fold(0.0f64, |largest, x| largest.max(x.abs()));
    if largest == 0.0 {
        return 0.0;
    }
    for x in u.iter_mut() {
        *x /= largest;
    }
    let length = u.iter().map(|x| x * x).sum::<f64>().sqrt();
    let first = u[0];
    // The sign that does not cancel; then |x ± |x| e|² = 2 |x| (|x| + |x₁|).
    u[0] += length.copysign(first);
    let scale = (length * (length + first.abs())).sqrt();
    for x in u.iter_mut() {
        *x /= scale;
    }
    -length.copysign(first) * largest
}

/// I − b v vᵀ in three dimensions.
pub(super) struct Reflection {
    v: [f64; 3],
    /// b v.
    bv: [f64; 3],
}

/// Squares of lengths that are neither too small nor too large to be told from their sum.
const SAFE: std::ops::Range<f64> = 1e-250..1e250;

impl Reflection {
    /// Brings x to its first axis; and where on that axis. The identity for a vector of zeros.
    #[inline(always)]
    pub(super) fn new(x: [f64; 3]) -> (Self, f64) {
        let square = x[0] * x[0] + x[1] * x[1] + x[2] * x[2];
        if SAFE.contains(&square) {
            return Self::of_length(x, square.sqrt());
        }
        let largest = x[0].abs().max(x[1].abs()).max(x[2].abs());
        if largest == 0.0 {
            return (Self { v: [0.0; 3], bv: [0.0; 3] }, 0.0);
        }
        let x = x.map(|x| x / largest);
        let (found, first) = Self::of_length(x, (x[0] * x[0] + x[1] * x[1] + x[2] * x[2]).sqrt());
        (found, first * largest)
    }

    #[inline(always)]
    fn of_length(x: [f64; 3], length: f64) -> (Self, f64) {
        // The sign that does not cancel; then b = 2/|v|² = 1/(|x| |v₁|).
        let first = x[0] + length.copysign(x[0]);
        let v = [first, x[1], x[2]];
        let b = 1.0 / (length * first.abs());
        (Self { v, bv: v.map(|v| b * v) }, -length.copysign(x[0]))
    }

    /// What is left of the first entry of a vector along the first axis.
    #[inline(always)]
    pub(super) fn kept(&self) -> f64 {
        1.0 - self.v[0] * self.bv[0]
    }
}
