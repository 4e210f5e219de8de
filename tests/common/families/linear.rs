//! Lotka–Volterra systems, and others with the same equilibria, solved on every face over the whole numbers.
//!
//! Growth rates and interactions are multiples of 1/32, so f64 holds them exactly and elimination over 128-bit integers
//! is exact (it panics rather than overflow). Draws with a singular face, or with an equilibrium at which an absent
//! species just fails to invade, are drawn again, so that all equilibria are isolated and simple.

use super::{Family, combination, model, ratio, symbols, whole};
use crate::common::Source;
use crate::common::text::Point;
use restpoint::num::interval::Interval;

/// Entries are whole numbers over this.
const UNIT: f64 = 32.0;

/// `x_i (r_i + Σ_j a_ij x_j)`, times [`UNIT`].
struct Community {
    growth: Vec<i128>,
    matrix: Vec<Vec<i128>>,
}

impl Community {
    /// Self-limited species, most pairs in competition, one effect in four a benefit.
    fn draw(n: usize, source: &mut Source) -> Self {
        let growth = (0..n).map(|_| whole(source, 16, 64)).collect();
        let entry = |i: usize, j: usize, s: &mut Source| if i == j { whole(s, -64, -24) } else { whole(s, -24, 8) };
        let matrix = (0..n).map(|i| (0..n).map(|j| entry(i, j, source)).collect()).collect();
        Self { growth, matrix }
    }

    /// All equilibria with no negative coordinate; `None` where one is not isolated and simple.
    fn equilibria(&self) -> Option<Vec<Point>> {
        let n = self.growth.len();
        let mut found = Vec::new();
        for face in 0..1usize << n {
            let present: Vec<usize> = (0..n).filter(|i| face >> i & 1 == 1).collect();
            let row = |&i: &usize| present.iter().map(|&j| self.matrix[i][j]).chain([-self.growth[i]]).collect();
            let (determinant, numerators) = solve(present.iter().map(row).collect())?;
            // A zero coordinate is a species that just fails to invade the smaller face.
            if numerators.contains(&0) {
                return None;
            }
            if numerators.iter().all(|&numerator| (numerator > 0) == (determinant > 0)) {
                let mut point = vec![Interval::ZERO; n];
                for (&i, &numerator) in present.iter().zip(&numerators) {
                    point[i] = ratio(numerator, determinant);
                }
                found.push(point);
            }
        }
        Some(found)
    }

    /// `r_i + Σ_j a_ij x_j`
    fn per_capita(&self, i: usize) -> String {
        let names = [vec![String::new()], symbols(self.growth.len())].concat();
        let entries = [vec![self.growth[i]], self.matrix[i].clone()].concat();
        combination(&entries.iter().map(|&entry| entry as f64 / UNIT).collect::<Vec<_>>(), &names)
    }
}

/// Solves a square system with its right-hand side as last column: the determinant, and that times each unknown. `None`
/// where it is singular. Fraction-free elimination: Bareiss 1968, from memory.
fn solve(mut rows: Vec<Vec<i128>>) -> Option<(i128, Vec<i128>)> {
    let n = rows.len();
    let mut previous = 1;
    for k in 0..n {
        let pivot = (k..n).find(|&i| rows[i][k] != 0)?;
        rows.swap(k, pivot);
        // A swap changes the determinant's sign, and one of the two rows' sign changes it back.
        if pivot != k {
            rows[pivot].iter_mut().for_each(|entry| *entry = -*entry);
        }
        let by = rows[k].clone();
        for (_, row) in rows.iter_mut().enumerate().filter(|(i, _)| *i != k) {
            let factor = row[k];
            for (entry, pivot_entry) in row.iter_mut().zip(&by) {
                *entry = (*entry * by[k] - factor * pivot_entry) / previous;
            }
        }
        previous = by[k];
    }
    Some((previous, rows.iter().map(|row| row[n]).collect()))
}

/// A community of which all equilibria are simple, with them.
fn community(n: usize, seed: u64) -> (Community, Vec<Point>) {
    let mut source = Source::new(seed);
    let drawn = (0..100).find_map(|_| {
        let community = Community::draw(n, &mut source);
        community.equilibria().map(|equilibria| (community, equilibria))
    });
    drawn.unwrap_or_else(|| panic!("no simple community of {n} for seed {seed}"))
}

/// A power of ten beyond every coordinate.
fn beyond(points: &[Point]) -> String {
    let largest = points.iter().flatten().fold(1.0, |largest: f64, x| largest.max(x.hi()));
    10.0_f64.powf(largest.log10().floor() + 1.0).to_string()
}

fn family(kind: &str, n: usize, seed: u64, row: impl Fn(&Community, usize, &str) -> String) -> Family {
    let name = format!("{kind} {n}, seed {seed}");
    let (community, equilibria) = community(n, seed);
    let rows: Vec<_> = symbols(n).iter().enumerate().map(|(i, x)| row(&community, i, x)).collect();
    Family::complete(&name, model(&name, &beyond(&equilibria), &rows), equilibria)
}

/// A random Lotka–Volterra system in formulas.
pub fn lotka_volterra(n: usize, seed: u64) -> Family {
    family("Lotka-Volterra", n, seed, |community, i, x| format!("{x}*({})", community.per_capita(i)))
}

/// The same system in a `lotka_volterra` block.
pub fn lotka_volterra_block(n: usize, seed: u64) -> Family {
    let (mut family, (community, _)) = (lotka_volterra(n, seed), community(n, seed));
    let symbols = symbols(n);
    let map = |entries: &[i128]| {
        let entry = |(symbol, &entry): (&String, &i128)| format!("{symbol}: {}", entry as f64 / UNIT);
        format!("{{{}}}", symbols.iter().zip(entries).map(entry).collect::<Vec<_>>().join(", "))
    };
    let rows: Vec<_> = symbols.iter().zip(&community.matrix).map(|(x, row)| format!("{x}: {}", map(row))).collect();
    family.name += ", block";
    family.text.rows.clear();
    family.text.block = Some(format!("{{growth: {}, matrix: {{{}}}}}", map(&community.growth), rows.join(", ")));
    family
}

/// Growth that saturates: `x_i (1 − exp(−(r_i + Σ_j a_ij x_j)))`, which vanishes where the Lotka–Volterra system does.
pub fn exponential(n: usize, seed: u64) -> Family {
    family("exponential competition", n, seed, |community, i, x| {
        format!("{x}*(1 - exp(-({})))", community.per_capita(i))
    })
}

/// The map `x_i exp(r_i + Σ_j a_ij x_j)`, whose fixed points are the Lotka–Volterra system's equilibria.
pub fn ricker(n: usize, seed: u64) -> Family {
    let row = |community: &Community, i: usize, x: &str| format!("{x}*exp({})", community.per_capita(i));
    let mut family = family("Ricker competition", n, seed, row);
    family.text.discrete = true;
    family
}
