//! Families of models whose equilibria are known exactly, and seeded random models that are merely hard.
//!
//! A [`Family`] is a model file with what is known of its equilibria. Numbers in the files are chosen so that f64 holds
//! them exactly, or the roots are those of the f64 model: the enclosures given are of *its* roots. Siblings make the
//! families, one idea a file: `linear` Lotka–Volterra systems by exact elimination, `placed` polynomial systems with roots
//! put where we want them, `folds` pairs about to merge and merged ones, `continua` lines and planes, `patches`
//! communities with all 3ⁿ roots, `webs` random food webs without known roots, `textbook` small models of ecology.
//! [`scaled`] changes the units of any of them, [`widened`] the search box. [`examples`] has one or more of each, under distinct names. To add one:
//! write it in the sibling that fits, add it to [`examples`], and the tests of `tests/equilibria/families.rs` hold it to its word.

use super::Source;
use super::text::{ModelText, Point};
use restpoint::num::interval::Interval;

pub mod continua;
pub mod folds;
pub mod linear;
pub mod patches;
pub mod placed;
pub mod textbook;
pub mod webs;

/// A model with what is known of its equilibria in its search box; none is on the box's upper sides.
#[derive(Clone, Debug)]
pub struct Family {
    pub name: String,
    pub text: ModelText,
    /// Enclosures of isolated equilibria with an invertible Jacobian (at kinks: all of whose slopes are), one root in each.
    pub simple: Vec<Point>,
    /// Isolated equilibria with a singular Jacobian. Where the rows of those present are singular by themselves (folds) no
    /// search can prove them; a transcritical one is simple among those present.
    pub degenerate: Vec<Point>,
    /// Equilibria by continuity alone: a row or slope is not defined there.
    pub corners: Vec<Point>,
    pub continua: Vec<Continuum>,
    /// Whether there is no equilibrium with no negative coordinate beyond those above, in the box or outside it.
    pub complete: bool,
}

/// Equilibria that are not isolated.
#[derive(Clone, Debug)]
pub struct Continuum {
    pub dimension: usize,
    /// Some of its points.
    pub points: Vec<Point>,
}

impl Family {
    /// A model of which nothing is known.
    pub fn unknown(name: impl Into<String>, text: ModelText) -> Self {
        let (simple, degenerate, corners, continua) = <_>::default();
        Self { name: name.into(), text, simple, degenerate, corners, continua, complete: false }
    }

    /// A model of which all equilibria are known: simple ones, and what the caller adds.
    pub fn complete(name: impl Into<String>, text: ModelText, simple: Vec<Point>) -> Self {
        Self { simple, complete: true, ..Self::unknown(name, text) }
    }

    /// Every point that is listed.
    pub fn points(&self) -> impl Iterator<Item = &Point> {
        let continua = self.continua.iter().flat_map(|continuum| &continuum.points);
        self.simple.iter().chain(&self.degenerate).chain(&self.corners).chain(continua)
    }
}

/// One or more of each family.
pub fn examples() -> Vec<Family> {
    let mut all = textbook::all();
    all.extend((2..=6).map(|n| linear::lotka_volterra(n, 1)));
    all.extend([linear::lotka_volterra_block(4, 2), linear::exponential(3, 1), linear::ricker(3, 1)]);
    all.extend((1..=4).map(|n| placed::cubics(n, 1)));
    all.extend((1..=3).map(|n| placed::expanded_cubics(n, 1)));
    all.extend((1..=6).map(placed::lines_and_circles));
    all.extend(folds::GAPS.iter().flat_map(|&gap| [folds::quota_pair(1, gap), folds::quota_pair(2, gap)]));
    all.extend(folds::GAPS.iter().flat_map(|&gap| (1..=4).map(move |n| folds::hidden_pair(n, gap, 1))));
    all.extend((1..=4).map(|n| folds::hidden_fold(n, 1)));
    all.extend([folds::quota_fold(1), folds::quota_fold(2), folds::semistable(), folds::triple_root()]);
    all.extend(continua::all());
    all.extend((1..=4).map(patches::allee));
    all.extend((2..=4).map(patches::budworm_ring));
    all.extend([webs::four_species(), webs::six_species(), webs::dense_six_species()]);
    all.extend((3..=5).flat_map(|n| [webs::web(n, 1), webs::webx(n, 1)]));
    let rescaled: Vec<Family> = ["Rosenzweig-MacArthur", "line in 2-D", "hidden pair 2, gap 1e-4, seed 1"]
        .iter()
        .filter_map(|name| all.iter().find(|family| family.name == *name))
        .flat_map(|family| [scaled(family, &[6, 6]), scaled(family, &[-6, -6]), scaled(family, &[6, -6])])
        .collect();
    all.extend(rescaled);
    all
}

/// The family in a box `factor` times as large.
pub fn widened(family: &Family, factor: f64) -> Family {
    let mut wide = Family { name: format!("{}, box times {factor}", family.name), ..family.clone() };
    for (_, _, upper) in &mut wide.text.species {
        *upper = (upper.parse::<f64>().unwrap() * factor).to_string();
    }
    wide
}

/// The family in other units: species i counted in units of 10^−exponents\[i\], each 0, 6 or −6.
pub fn scaled(family: &Family, exponents: &[i32]) -> Family {
    let mut text = family.text.clone();
    let old = std::mem::take(&mut text.shorthand);
    for (i, &exponent) in exponents.iter().enumerate() {
        let (symbol, lower, upper) = &mut text.species[i];
        let counted = format!("{symbol}_counted");
        let (meaning, row) = match exponent {
            6 => (format!("{counted}/1000000"), format!("1000000*({})", text.rows[i])),
            -6 => (format!("1000000*{counted}"), format!("({})/1000000", text.rows[i])),
            _ => (counted.clone(), text.rows[i].clone()),
        };
        text.shorthand.push((std::mem::replace(symbol, counted), meaning));
        text.rows[i] = row;
        for side in [lower, upper] {
            *side = format!("{side}e{exponent}");
        }
    }
    text.shorthand.extend(old);
    let million = Interval::point(1e6);
    let point = |point: &Point| -> Point {
        let coordinate = |(&x, &exponent): (&Interval, &i32)| match exponent {
            6 => x * million,
            -6 => x.div(million, &mut true),
            _ => x,
        };
        point.iter().zip(exponents).map(coordinate).collect()
    };
    let points = |points: &[Point]| points.iter().map(point).collect::<Vec<_>>();
    let continua = family.continua.iter();
    Family {
        name: format!("{}, scaled {exponents:?}", family.name),
        text,
        simple: points(&family.simple),
        degenerate: points(&family.degenerate),
        corners: points(&family.corners),
        continua: continua.map(|c| Continuum { dimension: c.dimension, points: points(&c.points) }).collect(),
        complete: family.complete,
    }
}

/// Exact numbers as a point.
pub fn exactly(x: &[f64]) -> Point {
    x.iter().map(|&x| Interval::point(x)).collect()
}

/// The quotient of two whole numbers.
pub fn ratio(numerator: i128, denominator: i128) -> Interval {
    let whole = |n: i128| {
        let nearest = n as f64;
        if nearest as i128 == n {
            Interval::point(nearest)
        } else {
            Interval::new(nearest.next_down(), nearest.next_up())
        }
    };
    whole(numerator).div(whole(denominator), &mut true)
}

/// A whole number from `low` to `high`.
pub fn whole(source: &mut Source, low: i128, high: i128) -> i128 {
    low + (source.unit() * (high - low + 1) as f64) as i128
}

/// A place among `n`.
pub fn index(source: &mut Source, n: usize) -> usize {
    usize::try_from(whole(source, 0, n as i128 - 1)).unwrap()
}

/// Symbols x1, x2, ….
pub fn symbols(n: usize) -> Vec<String> {
    (1..=n).map(|i| format!("x{i}")).collect()
}

/// A model of these rows for species x1, x2, …, all within [0, `upper`].
pub fn model(title: &str, upper: &str, rows: &[String]) -> ModelText {
    let symbols = symbols(rows.len());
    let rows: Vec<_> = symbols.iter().zip(rows).map(|(symbol, row)| (symbol.as_str(), row.as_str())).collect();
    ModelText::new(title, upper, &rows)
}

/// Σ coefficient · name, as a formula; the empty name stands for 1. 0 where all coefficients are.
pub fn combination(coefficients: &[f64], names: &[String]) -> String {
    let mut formula = String::new();
    for (&coefficient, name) in coefficients.iter().zip(names).filter(|(coefficient, _)| **coefficient != 0.0) {
        let sign = if coefficient < 0.0 { "-" } else { "+" };
        formula += if formula.is_empty() { sign.trim_start_matches('+') } else { sign };
        let size = coefficient.abs().to_string();
        match (size.as_str(), name.as_str()) {
            ("1", name) if !name.is_empty() => formula += name,
            (size, "") => formula += size,
            (size, name) => formula.extend([size, "*", name]),
        }
    }
    if formula.is_empty() { "0".to_owned() } else { formula }
}

/// Every choice of one of `options` for each of `n` places.
pub fn choices(options: usize, n: usize) -> impl Iterator<Item = Vec<usize>> {
    (0..options.pow(n as u32)).map(move |code| (0..n).map(|place| code / options.pow(place as u32) % options).collect())
}
