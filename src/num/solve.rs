//! Linear systems with interval entries: an enclosure of every solution, and the proof that each system has just one.
//!
//! [`solve`] is the way in. An approximate inverse R turns A x = b into a contraction for the error of an approximate
//! solution (Krawczyk 1969; Rump 2010, from memory). Residuals keep all rounding errors (after Dekker 1971), so that the
//! enclosure of a point system is a step or two wide, even of a component that is tiny beside the others. The product
//! R A is formed in plain arithmetic and its rounding errors are bounded as a whole (Higham 2002, ch. 3), which is as
//! fast for 500 unknowns as a multiplication of matrices. Does not say why a system has no proof: see what calls it.

use super::dense::{add_multiple, inverse_unless};
use super::interval::Interval;
use super::round::{div_up, sub_down, two_sum};

/// Steps of iterative refinement; each squares away as many digits as the inverse has.
const REFINEMENTS: usize = 3;

/// Products smaller than this may lose digits of their rounding error to underflow.
const SAFE_PRODUCT: f64 = 1e-270;

/// Encloses the solution x of A x = b for every A in `matrix` (row by row) and every b in `right`; every such A is then
/// proved regular, so there is one solution for each pair.
///
/// The unit of x is that of b over that of A. `None` where regularity is not proved, an entry is unbounded, or `stop`,
/// asked at least once a row, says so.
///
/// # Panics
/// If the matrix does not have as many rows and columns as the right side has entries.
pub fn solve(matrix: &[Interval], right: &[Interval], stop: &dyn Fn() -> bool) -> Option<Vec<Interval>> {
    let n = right.len();
    assert_eq!(matrix.len(), n * n, "entries of a matrix of order {n}");
    if !matrix.iter().chain(right).all(|entry| entry.is_bounded()) {
        return None;
    }
    let scaled = Scaled::new(matrix, right);
    let inverse = inverse_unless(&scaled.middle, n, stop)?;
    let defect = scaled.defect(&inverse, stop)?;
    let approximate = scaled.refined(&inverse, stop)?;
    scaled.enclosed(&approximate, &inverse, &defect, stop)
}

/// Powers of two by which rows and columns are multiplied so that the largest entry of each is near 1; exact, and makes
/// what follows nearly independent of units.
pub fn equilibrate(matrix: &[Interval], n: usize) -> [Vec<f64>; 2] {
    let mut rows = vec![1.0; n];
    let mut columns = vec![1.0; n];
    // Twice, because a column in a unit of its own hides the others' entries from the first look at a row.
    for _ in 0..2 {
        for (row, unit) in matrix.chunks_exact(n.max(1)).zip(&mut rows) {
            *unit = unit_of(
                row.iter().zip(&columns).fold(0.0, |largest, (entry, column)| largest.max(entry.mag() * column)),
            );
        }
        let mut largest = vec![0.0f64; n];
        for (row, unit) in matrix.chunks_exact(n.max(1)).zip(&rows) {
            largest.iter_mut().zip(row).for_each(|(largest, entry)| *largest = largest.max(entry.mag() * unit));
        }
        columns = largest.into_iter().map(unit_of).collect();
    }
    [rows, columns]
}

/// The power of two that takes `size` to [1, 2); 1 for 0, and never near overflow.
pub fn unit_of(size: f64) -> f64 {
    if size > 0.0 {
        let exponent = (size.to_bits() >> 52).clamp(123, 1923);
        f64::from_bits((2046 - exponent) << 52)
    } else {
        1.0
    }
}

/// The system with its rows and columns multiplied by powers of two.
struct Scaled {
    n: usize,
    /// Middles of the entries.
    middle: Vec<f64>,
    /// What each entry may differ from its middle by; empty where none does.
    off: Vec<Interval>,
    right: Vec<Interval>,
    columns: Vec<f64>,
}

impl Scaled {
    fn new(matrix: &[Interval], right: &[Interval]) -> Self {
        let n = right.len();
        let [rows, columns] = equilibrate(matrix, n);
        let entry = |(position, &entry): (usize, &Interval)| {
            entry * Interval::point(rows[position / n]) * Interval::point(columns[position % n])
        };
        let entries: Vec<Interval> = matrix.iter().enumerate().map(entry).collect();
        let middle: Vec<f64> = entries.iter().map(|entry| entry.mid()).collect();
        let off = if entries.iter().all(|entry| entry.is_point()) {
            Vec::new()
        } else {
            entries.iter().zip(&middle).map(|(&entry, &middle)| entry - Interval::point(middle)).collect()
        };
        let right = right.iter().zip(&rows).map(|(&b, &scale)| b * Interval::point(scale)).collect();
        Self { n, middle, off, right, columns }
    }

    /// Upper bounds of Σ_j |I − R A|_ij for each row i; `None` unless all are below 1, which proves every A regular.
    fn defect(&self, inverse: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
        let n = self.n;
        let sums: Vec<f64> = self.middle.chunks_exact(n.max(1)).map(|row| row.iter().map(|x| x.abs()).sum()).collect();
        let radii: Vec<f64> = if self.off.is_empty() {
            vec![0.0; n]
        } else {
            self.off.chunks_exact(n).map(|row| row.iter().map(|off| off.mag()).sum()).collect()
        };
        // γ_n = n u/(1 − n u) with u = EPSILON/2, twice over; the factor `inflate` covers the rounding of these sums.
        let gamma = (n + 2) as f64 * f64::EPSILON;
        let inflate = 1.0 + 4.0 * (n + 4) as f64 * f64::EPSILON;
        let mut bounds = Vec::with_capacity(n);
        let mut product = vec![0.0; n];
        for (i, row) in inverse.chunks_exact(n.max(1)).enumerate() {
            if stop() {
                return None;
            }
            product.fill(0.0);
            for (&r, middle) in row.iter().zip(self.middle.chunks_exact(n)) {
                add_multiple(&mut product, r, middle);
            }
            product[i] -= 1.0;
            let computed: f64 = product.iter().map(|x| x.abs()).sum();
            let unknown: f64 =
                row.iter().zip(sums.iter().zip(&radii)).map(|(r, (s, d))| r.abs() * (gamma * s + d)).sum();
            let underflow = (n * n) as f64 * f64::MIN_POSITIVE;
            bounds.push((computed + unknown + underflow) * inflate);
        }
        bounds.iter().all(|&bound| bound < 1.0).then_some(bounds)
    }

    /// An approximate solution, as good as f64 gives it.
    fn refined(&self, inverse: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
        let middle: Vec<f64> = self.right.iter().map(|b| b.mid()).collect();
        let mut x = product(inverse, &middle);
        for _ in 0..REFINEMENTS {
            let residual: Vec<f64> = self.residual(&x, stop)?.iter().map(|r| r.mid()).collect();
            let before = x.clone();
            x.iter_mut().zip(product(inverse, &residual)).for_each(|(x, step)| *x += step);
            if x == before {
                break;
            }
        }
        x.iter().all(|x| x.is_finite()).then_some(x)
    }

    /// b − A x, all rounding errors kept; `None` where it was stopped.
    fn residual(&self, x: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<Interval>> {
        let n = self.n;
        let row = |i: usize| {
            let b = self.right[i];
            let mut sum = Sum { main: b.mid(), rest: b - Interval::point(b.mid()) };
            for (&entry, &x) in self.middle[i * n..(i + 1) * n].iter().zip(x) {
                sum.subtract_product(entry, x);
            }
            if !self.off.is_empty() {
                for (&off, &x) in self.off[i * n..(i + 1) * n].iter().zip(x) {
                    sum.rest -= off * Interval::point(x);
                }
            }
            sum.enclosure()
        };
        (0..n).map(|i| (!stop()).then(|| row(i))).collect()
    }

    /// x ∈ x̃ + R (b − A x̃) + (I − R A)(x − x̃), in the units from before scaling.
    fn enclosed(
        &self,
        approximate: &[f64],
        inverse: &[f64],
        defect: &[f64],
        stop: &dyn Fn() -> bool,
    ) -> Option<Vec<Interval>> {
        let residual = self.residual(approximate, stop)?;
        let step = |row: &[f64]| {
            row.iter().zip(&residual).fold(Interval::ZERO, |sum, (&r, &residual)| sum + Interval::point(r) * residual)
        };
        let steps: Vec<Interval> = inverse.chunks_exact(self.n.max(1)).map(step).collect();
        let largest = steps.iter().fold(0.0f64, |largest, step| largest.max(step.mag()));
        let contraction = defect.iter().fold(0.0f64, |largest, &bound| largest.max(bound));
        let reach = div_up(largest, sub_down(1.0, contraction));
        if !reach.is_finite() {
            return None;
        }
        let component = |i: usize| {
            let unknown = Interval::point(reach) * Interval::new(-defect[i], defect[i]);
            (Interval::point(approximate[i]) + (steps[i] + unknown)) * Interval::point(self.columns[i])
        };
        let enclosure: Vec<Interval> = (0..self.n).map(component).collect();
        enclosure.iter().all(|side| side.is_bounded()).then_some(enclosure)
    }
}

/// A sum that keeps what rounding takes from it.
struct Sum {
    main: f64,
    rest: Interval,
}

impl Sum {
    fn subtract_product(&mut self, a: f64, b: f64) {
        if a == 0.0 || b == 0.0 {
            return;
        }
        let product = a * b;
        let lost = if product.abs() > SAFE_PRODUCT && product.is_finite() {
            Interval::point(a.mul_add(b, -product))
        } else {
            Interval::point(a) * Interval::point(b) - Interval::try_new(product, product).unwrap_or(Interval::ENTIRE)
        };
        let (sum, error) = two_sum(self.main, -product);
        self.main = sum;
        self.rest = self.rest - lost + Interval::try_new(error, error).unwrap_or(Interval::ENTIRE);
    }

    fn enclosure(&self) -> Interval {
        match Interval::try_new(self.main, self.main) {
            Some(main) => main + self.rest,
            None => Interval::ENTIRE,
        }
    }
}

fn product(matrix: &[f64], x: &[f64]) -> Vec<f64> {
    matrix.chunks_exact(x.len().max(1)).map(|row| row.iter().zip(x).map(|(a, x)| a * x).sum()).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn points(entries: &[f64]) -> Vec<Interval> {
        entries.iter().map(|&entry| Interval::point(entry)).collect()
    }

    /// The solution by hand, and how wide its enclosure may be, relative to it; `None` where there is no proof.
    fn check(matrix: &[f64], right: &[f64], expected: Option<(&[f64], f64)>) {
        let found = solve(&points(matrix), &points(right), &|| false);
        match (&found, expected) {
            (Some(found), Some((solution, width))) => {
                for (side, &x) in found.iter().zip(solution) {
                    assert!(side.contains(x) && side.width() <= width * x.abs(), "{found:?} for {solution:?}");
                }
            }
            _ => assert_eq!(found.is_none(), expected.is_none(), "{matrix:?}: {found:?}"),
        }
    }

    #[test]
    fn solutions_by_hand_are_enclosed() {
        check(&[], &[], Some((&[], 0.0)));
        check(&[4.0], &[1.0], Some((&[0.25], 0.0)));
        check(&[2.0, 1.0, 1.0, 1.0], &[3.0, 2.0], Some((&[1.0, 1.0], 0.0)));
        // A component that is exactly 0 stays so.
        check(&[2.0, 1.0, 1.0, 1.0], &[1.0, 1.0], Some((&[0.0, 1.0], 0.0)));
        // The same as the second in units that differ by 2^±300.
        let unit = 300f64.exp2();
        check(&[2.0 * unit, 1.0 / unit, unit, 1.0 / unit], &[3.0, 2.0], Some((&[1.0 / unit, unit], 0.0)));
        let small = (-60f64).exp2();
        check(&[1.0, 1.0, 1.0 + (-20f64).exp2(), 1.0], &[1.0, 1.0], Some((&[0.0, 1.0], 0.0)));
        // A component 2^-60 beside 1: x + y and x − y, of which f64 keeps 1 and −1; so 2^60 x + y, 2^60 x − y.
        check(&[1.0 / small, 1.0, 1.0 / small, -1.0], &[2.0, 0.0], Some((&[small, 1.0], 0.0)));
        check(&[3.0 / small, 1.0, 1.0 / small, -1.0], &[4.0, 0.0], Some((&[small, 1.0], 5e-16)));
    }

    #[test]
    fn singular_matrices_are_never_proved_regular() {
        check(&[0.0], &[1.0], None);
        check(&[1.0, 2.0, 2.0, 4.0], &[1.0, 2.0], None);
        check(&[1.0, 0.0, 0.0, 0.0], &[1.0, 0.0], None);
        // Rank 2 by hand: the third row is the sum of the first two.
        check(&[0.5, 0.25, 0.75, 0.125, 1.5, 0.5, 0.625, 1.75, 1.25], &[1.0, 1.0, 2.0], None);
    }

    #[test]
    fn every_matrix_between_the_bounds_is_solved() {
        // x = b/a for a in [1, 1.25], b in [1, 2]: from 0.8 to 2.
        let found = solve(&[Interval::new(1.0, 1.25)], &[Interval::new(1.0, 2.0)], &|| false).expect("regular");
        assert!(Interval::new(0.8, 2.0).subset_of(found[0]) && found[0].width() < 3.0, "{found:?}");
        // A matrix between the bounds is singular.
        assert_eq!(solve(&[Interval::new(-1.0, 3.0)], &[Interval::ONE], &|| false), None);
    }

    /// Whole x, and A and A x in steps of 1/1024: exact, and somewhere between bounds that are at most two steps apart.
    #[test]
    fn every_system_between_the_bounds_has_its_solution_enclosed() {
        let mut source = crate::num::random::Source::new(7);
        let mut solved = 0;
        for seed in 0..300 {
            let n = 1 + seed % 9;
            let step = 1.0 / 1024.0;
            let x: Vec<f64> = (0..n).map(|_| source.between(-20.0, 20.0).round()).collect();
            let matrix: Vec<f64> = (0..n * n).map(|_| source.between(-1024.0, 1024.0).round() * step).collect();
            let right = product(&matrix, &x);
            let mut around = |value: f64| {
                let [below, above] = [source.unit().round() * step, source.unit().round() * step];
                Interval::new(value - below, value + above)
            };
            let (bounds, rights): (Vec<_>, Vec<_>) =
                (matrix.iter().map(|&a| around(a)).collect(), right.iter().map(|&b| Interval::point(b)).collect());
            if let Some(found) = solve(&bounds, &rights, &|| false) {
                solved += 1;
                assert!(found.iter().zip(&x).all(|(side, &x)| side.contains(x)), "seed {seed}: {found:?} {x:?}");
            }
        }
        assert!(solved > 250, "{solved}");
    }

    /// Hilbert's matrix times the least common denominator has whole entries; with b its row sums, x is all ones.
    #[test]
    fn ill_conditioned_solutions_are_as_narrow_as_well_conditioned_ones() {
        let n = 9;
        let denominator = 12_252_240.0;
        let matrix: Vec<f64> = (0..n * n).map(|k| denominator / (k / n + k % n + 1) as f64).collect();
        assert!(matrix.iter().all(|entry| entry.fract() == 0.0));
        let right: Vec<f64> = matrix.chunks(n).map(|row| row.iter().sum()).collect();
        check(&matrix, &right, Some((&[1.0; 9], 3e-16)));
    }
}
