//! Eigenvalues from closed formulas, mpmath and LAPACK: `tests/data/spectra.py` says how they were made.

#![expect(clippy::expect_used, reason = "a broken table is a failed test")]

use std::fs;
use std::path::Path;

use nalgebra::Complex;
use restpoint::num::eigen::{eigenvalues, spectrum};
use restpoint::num::interval::Interval;
use restpoint::num::verified::{half_plane, unit_circle};
use serde_json::Value;

/// How far a computed eigenvalue may be off, relative to its condition and the size of the balanced matrix.
const CLOSE: f64 = 1e-13;

/// Eigenvalues that rounding may mix, and the condition of their mean.
struct Group {
    values: Vec<Complex<f64>>,
    condition: f64,
}

struct Case {
    name: String,
    n: usize,
    size: f64,
    entries: Vec<f64>,
    groups: Vec<Group>,
}

impl Case {
    fn read(case: &Value) -> Self {
        let number = |value: &Value| value.as_f64().expect("a number");
        let list = |value: &Value| value.as_array().expect("a list").clone();
        let group = |group: &Value| Group {
            values: list(&group["values"])
                .iter()
                .map(|pair| Complex::new(number(&pair[0]), number(&pair[1])))
                .collect(),
            condition: number(&group["condition"]).max(1.0),
        };
        Self {
            name: case["name"].as_str().expect("a name").to_owned(),
            n: list(&case["entries"]).len().isqrt(),
            size: number(&case["size"]),
            entries: list(&case["entries"]).iter().map(number).collect(),
            groups: list(&case["groups"]).iter().map(group).collect(),
        }
    }

    /// How far the mean of a group may be off.
    fn bound(&self, group: &Group) -> f64 {
        CLOSE * group.condition * self.size
    }

    /// How far one of a group of m may be off its mean: the m-th root of the perturbation, relative to the size.
    fn spread(&self, group: &Group) -> f64 {
        let m = group.values.len() as f64;
        self.bound(group) + if m > 1.0 { 2.0 * self.size * (CLOSE * group.condition).powf(1.0 / m) } else { 0.0 }
    }

    /// Each group takes the nearest of what was found: means and signs must agree.
    fn compare(&self, mut found: Vec<Complex<f64>>) {
        assert_eq!(found.len(), self.n, "{}", self.name);
        for group in &self.groups {
            let m = group.values.len();
            let mean = |values: &[Complex<f64>]| values.iter().sum::<Complex<f64>>() / m as f64;
            let centre = mean(&group.values);
            found.sort_by(|a, b| (a - centre).norm().total_cmp(&(b - centre).norm()));
            let taken: Vec<Complex<f64>> = found.drain(..m).collect();
            let told = format!("{}, condition {:e}: {taken:?} for {:?}", self.name, group.condition, group.values);
            assert!((mean(&taken) - centre).norm() <= self.bound(group), "{told}");
            assert!(taken.iter().all(|z| (z - centre).norm() <= self.spread(group)), "{told}");
            if centre.re.abs() > self.spread(group) {
                assert!(taken.iter().all(|z| z.re.signum() == centre.re.signum()), "{told}");
            }
        }
    }

    /// How many lie left of the axis and right of it, inside the unit circle and outside, for certain.
    fn sides(&self) -> [usize; 4] {
        let mut sides = [0; 4];
        for group in &self.groups {
            for z in &group.values {
                // The values of the table are within an ulp, or for LAPACK's within the bound.
                let off = self.bound(group);
                let beyond = [-z.re, z.re, 1.0 - z.norm(), z.norm() - 1.0];
                sides.iter_mut().zip(beyond).for_each(|(side, beyond)| *side += usize::from(beyond > -off));
            }
        }
        sides
    }
}

fn cases() -> Vec<Case> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/data/spectra.json");
    let text = fs::read_to_string(path).expect("the table");
    let table: Value = serde_json::from_str(&text).expect("JSON");
    table.as_array().expect("a list").iter().map(Case::read).collect()
}

#[test]
fn eigenvalues_agree() {
    let cases = cases();
    assert!(cases.len() > 150, "{} cases", cases.len());
    for case in cases {
        case.compare(eigenvalues(&case.entries, case.n).expect("finite"));
        case.compare(spectrum(&case.entries, case.n).expect("finite").values);
    }
}

/// What is proved is true of the table's values, and most of it is proved.
#[test]
fn proofs_agree() {
    let (mut decided, mut all) = (0, 0);
    for case in cases() {
        let matrix: Vec<Interval> = case.entries.iter().map(|&x| Interval::point(x)).collect();
        let [left, right, inside, outside] = case.sides();
        let axis = half_plane(&matrix, case.n).expect("bounded");
        let circle = unit_circle(&matrix, case.n).expect("bounded");
        let told = format!("{}: {axis:?} {circle:?} for {:?}", case.name, case.sides());
        assert!(axis.below <= left && axis.above <= right, "{told}");
        assert!(circle.below <= inside && circle.above <= outside, "{told}");
        decided += axis.below + axis.above;
        all += case.n;
    }
    assert!(10 * decided > 9 * all, "{decided} of {all} decided");
}
