//! Lotka–Volterra communities of whole numbers, solved exactly.

use restpoint::analysis::equilibria::Equilibrium;
use restpoint::analysis::equilibria::linear::Affine;
use restpoint::num::interval::Interval;

use super::Source;
use super::text::ModelText;

/// A community of whole numbers, which f64 holds exactly.
pub struct Whole {
    pub growth: Vec<i64>,
    pub matrix: Vec<i64>,
}

impl Whole {
    /// Effects on others from `low` to `high`, effects on oneself from `−limit` to −1, and growth: of many sizes where only
    /// competition holds it down, else from `low` or −2 to `high`.
    pub fn random(source: &mut Source, n: usize, [low, high]: [i64; 2], limit: i64) -> Self {
        let mut number = |low: i64, high: i64| low + (source.unit() * (high - low + 1) as f64) as i64;
        let growth = (0..n).map(|_| if high == 0 { number(20, 40) } else { number(low.max(-2), high) }).collect();
        let entry = |k: usize| if k / n == k % n { -number(1, limit) } else { number(low, high) };
        Self { growth, matrix: (0..n * n).map(entry).collect() }
    }

    pub fn n(&self) -> usize {
        self.growth.len()
    }

    pub fn affine(&self) -> Affine {
        let points = |numbers: &[i64]| numbers.iter().map(|&x| Interval::point(x as f64)).collect();
        Affine { growth: points(&self.growth), matrix: points(&self.matrix) }
    }

    /// The same as a model, block and all.
    pub fn text(&self) -> ModelText {
        let n = self.n();
        let row = |i: usize| {
            let terms: Vec<String> = (0..n).map(|j| format!("({})*x{j}", self.matrix[i * n + j])).collect();
            format!("x{i}*({} + {})", self.growth[i], terms.join(" + "))
        };
        let rows: Vec<(String, String)> = (0..n).map(|i| (format!("x{i}"), row(i))).collect();
        let rows: Vec<(&str, &str)> = rows.iter().map(|(symbol, row)| (symbol.as_str(), row.as_str())).collect();
        ModelText::new("whole numbers", "1000000", &rows)
    }

    /// The exact solution on a face as numerators and a positive denominator; `None` where it is singular.
    ///
    /// Fraction-free Gauss–Jordan elimination (Bareiss 1968): every division leaves no remainder.
    pub fn solution(&self, present: &[usize]) -> Option<(Vec<i128>, i128)> {
        let n = present.len();
        let row = |&i: &usize| -> Vec<i128> {
            let entries = present.iter().map(|&j| self.matrix[i * self.n() + j]);
            entries.chain([-self.growth[i]]).map(i128::from).collect()
        };
        let mut a: Vec<Vec<i128>> = present.iter().map(row).collect();
        let mut before = 1;
        for k in 0..n {
            let pivot = (k..n).find(|&i| a[i][k] != 0)?;
            a.swap(pivot, k);
            let pivot_row = a[k].clone();
            for row in a.iter_mut().enumerate().filter(|(i, _)| *i != k).map(|(_, row)| row) {
                let factor = row[k];
                for (entry, above) in row.iter_mut().zip(&pivot_row) {
                    *entry = (*entry * pivot_row[k] - factor * above) / before;
                }
            }
            before = pivot_row[k];
        }
        let sign = before.signum();
        Some((a.iter().map(|row| sign * row[n]).collect(), sign * before))
    }

    /// Numerator of the growth per head of an absent species.
    pub fn rate(&self, species: usize, present: &[usize], (numerators, denominator): &(Vec<i128>, i128)) -> i128 {
        let terms = present.iter().zip(numerators).map(|(&j, x)| i128::from(self.matrix[species * self.n() + j]) * x);
        i128::from(self.growth[species]) * denominator + terms.sum::<i128>()
    }

    pub fn faces(&self) -> impl Iterator<Item = Vec<usize>> {
        let n = self.n();
        (0..1usize << n).map(move |face| (0..n).filter(|i| face >> i & 1 == 1).collect())
    }
}

/// Who is present.
pub fn present(equilibrium: &Equilibrium) -> Vec<usize> {
    (0..equilibrium.state.len()).filter(|&i| equilibrium.has(i)).collect()
}
