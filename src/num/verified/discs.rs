//! Discs around approximate eigenvalues that hold those of every matrix between bounds.
//!
//! With approximate eigenvectors as columns of V and eigenvalues in D, V⁻¹ A V = D + X, X = V⁻¹ (A V − V D), is nearly
//! diagonal, and Gershgorin (1931) puts its eigenvalues into discs of the row sums of |X|: a connected set of m discs holds
//! exactly m. With an approximate inverse R of V and ‖I − R V‖ < 1, |X| is bounded by |R (A V − V D)| (Rump 2010). V is kept
//! real: a complex pair has real and imaginary part of its vector as columns and a block in D, which the unitary matrix
//! \[1 1; i −i\]/√2 makes diagonal afterwards.

use nalgebra::Complex;

use super::product::{Ball, gamma, inflate, moduli_times, underflow};
use super::{Block, Border, Counts, small};
use crate::num::dense::{inverse, product};
use crate::num::eigen::{balanced, spectrum};
use crate::num::interval::Interval;

/// A disc in the plane of eigenvalues.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Disc {
    /// Its centre, in the matrix's unit.
    pub centre: Complex<f64>,
    /// Its radius.
    pub radius: f64,
    /// Discs of one cluster hang together; those of different clusters of one block do not touch.
    pub cluster: usize,
    /// How many eigenvalues the cluster holds, with multiplicity: as many as it has discs.
    pub held: usize,
}

impl Disc {
    /// ± the radius.
    pub(super) fn reach(&self) -> Interval {
        Interval::new(-self.radius, self.radius)
    }

    pub(super) fn touches(&self, other: &Self) -> bool {
        let between = self.centre - other.centre;
        // Rounding of the distance is far below this.
        let distance = between.re.hypot(between.im) * (1.0 - 8.0 * f64::EPSILON);
        distance <= (self.radius + other.radius) * (1.0 + 8.0 * f64::EPSILON)
    }
}

/// Eigenvalues proved on each side: those in clusters all of whose discs lie there.
pub(super) fn count(discs: &[Disc], border: Border) -> Counts {
    let clusters = discs.iter().map(|disc| disc.cluster + 1).max().unwrap_or(0);
    let mut counts = Counts::default();
    for cluster in 0..clusters {
        let members = || discs.iter().filter(|disc| disc.cluster == cluster).map(|disc| border.rank(disc));
        if members().all(|rank| rank.hi() < border.level()) {
            counts.below += members().count();
        } else if members().all(|rank| rank.lo() > border.level()) {
            counts.above += members().count();
        }
    }
    counts
}

/// The discs of one block; `None` where V is too close to singular.
pub(super) fn of(block: &Block) -> Option<Vec<Disc>> {
    if let &[entry] = &block.entries[..] {
        let centre = Complex::new(entry.mid(), 0.0);
        return Some(vec![Disc { centre, radius: entry.radius(), cluster: 0, held: 1 }]);
    }
    if let &[a, b, c, d] = &block.entries[..]
        && let Some(discs) = small::discs_of_two(&[a, b, c, d])
    {
        return Some(discs.to_vec());
    }
    let n = block.n;
    let (entries, unit) = balanced(&block.entries, n);
    if !entries.iter().all(|entry| entry.is_bounded()) {
        return None;
    }
    let ball = Ball::new(&entries);
    let basis = Basis::of(&ball.middle, n)?;
    let sums = basis.row_sums(&ball)?;
    let unit = Interval::point(unit);
    let mut discs = basis.discs(&sums);
    for disc in &mut discs {
        let radius = Interval::point(disc.radius) * unit;
        let [re, im] = [disc.centre.re, disc.centre.im].map(|x| Interval::point(x) * unit);
        disc.centre = Complex::new(re.mid(), im.mid());
        disc.radius = (radius + Interval::point(re.radius()) + Interval::point(im.radius())).hi();
    }
    if discs.iter().any(|disc| !disc.radius.is_finite() || !disc.centre.is_finite()) {
        return None;
    }
    cluster(&mut discs);
    Some(discs)
}

/// Approximate real eigenvectors.
struct Basis {
    n: usize,
    /// Columns; of a pair the real and then the imaginary part.
    v: Vec<f64>,
    /// Pairs in neighbouring places, the one above the axis first.
    values: Vec<Complex<f64>>,
    inverse: Vec<f64>,
}

impl Basis {
    fn of(middle: &[f64], n: usize) -> Option<Self> {
        let found = spectrum(middle, n).ok()?;
        let right = found.vectors?.right;
        let mut basis = Self { n, v: vec![0.0; n * n], values: Vec::with_capacity(n), inverse: Vec::new() };
        // A pair's other half says nothing new.
        for (k, &value) in found.values.iter().enumerate().filter(|(_, value)| value.im >= 0.0) {
            let place = basis.values.len();
            basis.values.push(value);
            (0..n).for_each(|i| basis.v[i * n + place] = right[i * n + k].re);
            if value.im > 0.0 {
                basis.values.push(value.conj());
                (0..n).for_each(|i| basis.v[i * n + place + 1] = right[i * n + k].im);
            }
        }
        basis.inverse = inverse(&basis.v, n)?;
        Some(basis)
    }

    /// V D, of which a column is a sum of at most two products.
    fn v_times_d(&self) -> Vec<f64> {
        let n = self.n;
        let mut product = vec![0.0; n * n];
        for (k, value) in self.values.iter().enumerate() {
            for i in 0..n {
                // A (x + i y) = (p + i q)(x + i y): A x = p x − q y, A y = q x + p y.
                let partner = if value.im > 0.0 {
                    -value.im * self.v[i * n + k + 1]
                } else if value.im < 0.0 {
                    -value.im * self.v[i * n + k - 1]
                } else {
                    0.0
                };
                product[i * n + k] = value.re * self.v[i * n + k] + partner;
            }
        }
        product
    }

    /// Upper bounds of Σ_j s_j |X_ij| for each row i, where s_j is √2 for columns of pairs and 1 for others.
    fn row_sums(&self, a: &Ball) -> Option<Vec<f64>> {
        let n = self.n;
        let weights: Vec<f64> =
            self.values.iter().map(|value| if value.im == 0.0 { 1.0 } else { ROOT_TWO_UP }).collect();
        let mut residual = product(&a.middle, &self.v, n);
        residual.iter_mut().zip(self.v_times_d()).for_each(|(x, y)| *x -= y);
        // What the residual may be off in the weighted sum of a row.
        let spread = moduli_times(&self.v, &weights);
        let size: Vec<f64> = self.values.iter().zip(&weights).map(|(z, w)| (z.re.abs() + z.im.abs()) * w).collect();
        let turned = moduli_times(&self.v, &size);
        let from_radius = moduli_times(&a.radius, &spread);
        let from_rounding = moduli_times(&a.middle, &spread);
        let residual_sum = moduli_times(&residual, &weights);
        let off: Vec<f64> = (0..n)
            .map(|i| {
                // The pair's block is a product of each column with the size of its partner, of the same size.
                let rounding = gamma(n + 2) * (from_rounding[i] + 2.0 * turned[i] + 2.0 * residual_sum[i]);
                (from_radius[i] + rounding) * inflate(8) + underflow(n * n)
            })
            .collect();
        let carried = moduli_times(&self.inverse, &off);
        let product = moduli_times(&product(&self.inverse, &residual, n), &weights);
        let bounds: Vec<f64> =
            carried.iter().zip(&product).map(|(x, y)| (x + y + underflow(n * n)) * inflate(8)).collect();
        self.through_inverse(&bounds)
    }

    /// From bounds for R (A V − V D) to bounds for V⁻¹ (A V − V D): x_i ≤ y_i + g_i max y/(1 − max g), g = row sums of
    /// |I − R V|.
    fn through_inverse(&self, bounds: &[f64]) -> Option<Vec<f64>> {
        let n = self.n;
        let mut defect = product(&self.inverse, &self.v, n);
        (0..n).for_each(|i| defect[i * n + i] -= 1.0);
        let ones = vec![1.0; n];
        let rounding = moduli_times(&self.inverse, &moduli_times(&self.v, &ones));
        let g: Vec<f64> = moduli_times(&defect, &ones)
            .iter()
            .zip(&rounding)
            .map(|(d, r)| (d + gamma(n + 2) * (r + 1.0 + d) + underflow(n * n)) * inflate(8))
            .collect();
        let largest = |x: &[f64]| x.iter().fold(0.0f64, |a, &b| a.max(b));
        let rest = 1.0 - largest(&g);
        if rest <= 0.0 || !bounds.iter().chain(&g).all(|x| x.is_finite()) {
            return None;
        }
        let reach = largest(bounds) / rest * inflate(8);
        Some(bounds.iter().zip(&g).map(|(y, g)| (y + g * reach) * inflate(8)).collect())
    }

    /// Gershgorin's discs after pairs are made diagonal: the rows of a pair are taken together, over √2.
    fn discs(&self, sums: &[f64]) -> Vec<Disc> {
        let disc = |k: usize| {
            let centre = self.values[k];
            let radius = match () {
                () if centre.im > 0.0 => (sums[k] + sums[k + 1]) * HALF_ROOT_TWO_UP,
                () if centre.im < 0.0 => (sums[k - 1] + sums[k]) * HALF_ROOT_TWO_UP,
                () => sums[k],
            };
            Disc { centre, radius: radius * inflate(4), cluster: 0, held: 0 }
        };
        (0..self.n).map(disc).collect()
    }
}

/// An upper bound of √2.
const ROOT_TWO_UP: f64 = std::f64::consts::SQRT_2 + f64::EPSILON;
/// An upper bound of 1/√2.
const HALF_ROOT_TWO_UP: f64 = std::f64::consts::FRAC_1_SQRT_2 + f64::EPSILON;

/// Numbers the connected sets of discs.
fn cluster(discs: &mut [Disc]) {
    let mut number: Vec<Option<usize>> = vec![None; discs.len()];
    let mut clusters = 0;
    for start in 0..discs.len() {
        if number[start].is_some() {
            continue;
        }
        let mut open = vec![start];
        number[start] = Some(clusters);
        while let Some(i) = open.pop() {
            for j in 0..discs.len() {
                if number[j].is_none() && discs[i].touches(&discs[j]) {
                    number[j] = Some(clusters);
                    open.push(j);
                }
            }
        }
        clusters += 1;
    }
    let held = |cluster: Option<usize>| number.iter().filter(|&&other| other == cluster).count();
    for (disc, &cluster) in discs.iter_mut().zip(&number) {
        disc.cluster = cluster.unwrap_or(0);
        disc.held = held(cluster);
    }
}
