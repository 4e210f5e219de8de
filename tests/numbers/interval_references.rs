//! Elementary functions and quotients against values computed at thousands of digits: `tests/data/interval_references.py`.

#![expect(clippy::expect_used, clippy::panic, reason = "a broken table is a failed test")]

use crate::interval_support::steps;
use restpoint::num::interval::Interval;
use restpoint::num::quotient::{Quotient, quotient, quotient_f64};

/// One line of the table: the exact value lies between `below` and `above`, which are equal or neighbours.
struct Reference {
    function: String,
    k: u32,
    x: f64,
    p: f64,
    below: f64,
    above: f64,
}

fn references() -> Vec<Reference> {
    let mut table = csv::Reader::from_reader(include_str!("../data/interval_references.csv").as_bytes());
    let read = |row: csv::StringRecord| {
        let number = |i: usize| row[i].parse::<f64>().expect("a number");
        let k = row[1].parse().expect("an order");
        Reference { function: row[0].into(), k, x: number(2), p: number(3), below: number(4), above: number(5) }
    };
    table.records().map(|row| read(row.expect("a row"))).collect()
}

fn of_quotient(name: &str) -> Option<Quotient> {
    Some(match name {
        "expm1/u" => Quotient::Expm1,
        "log1p/u" => Quotient::Log1p,
        "tanh/u" => Quotient::Tanh,
        "powm1/u" => Quotient::Powm1,
        _ => return None,
    })
}

fn enclose(r: &Reference, defined: &mut bool) -> Interval {
    let (x, p) = (Interval::point(r.x), Interval::point(r.p));
    if let Some(q) = of_quotient(&r.function) {
        return quotient(q, r.k, x, p, defined);
    }
    match r.function.as_str() {
        "exp" => x.exp(),
        "ln" => x.ln(defined),
        "log10" => x.log10(defined),
        "expm1" => x.expm1(),
        "log1p" => x.log1p(defined),
        "tanh" => x.tanh(),
        "sqrt" => x.sqrt(defined),
        "pow" => x.pow(p, defined),
        other => panic!("no function {other}"),
    }
}

#[test]
fn the_exact_value_is_inside() {
    for r in references() {
        let mut defined = true;
        let enclosure = enclose(&r, &mut defined);
        let inside = enclosure.lo() <= r.below && r.above <= enclosure.hi();
        assert!(inside && defined, "{} {} of {:e}, {}: {enclosure:?}", r.function, r.k, r.x, r.p);
    }
}

#[test]
fn elementary_bounds_are_one_step_from_sharp() {
    for r in references().iter().filter(|r| of_quotient(&r.function).is_none()) {
        let enclosure = enclose(r, &mut true);
        // Whole powers from 3 to 8 are products of directed products: each factor beyond the first costs at most 1.5 times
        // 2^-52 of the result, which is at most three steps.
        let products = [3.0, 7.0, 8.0].iter().find(|&&p| r.function == "pow" && r.p == p);
        let allowed = products.map_or(1.0, |p| 3.0 * (p - 1.0));
        let spare = steps(enclosure.lo(), r.below).max(steps(enclosure.hi(), r.above));
        assert!(spare as f64 <= allowed, "{} of {:e}, {}: {spare} steps in {enclosure:?}", r.function, r.x, r.p);
    }
}

/// What an error in a quotient is measured against: its size, but near tanh's sign changes the size it has around them.
fn scale(r: &Reference) -> f64 {
    let size = r.below.abs().max(r.above.abs());
    if r.function == "tanh/u" { size.max(0.05) } else { size }
}

/// Rounding alone is 1e-16; at the seams between series and formulas, cancellation costs up to three digits more.
#[test]
fn quotient_bounds_are_tight() {
    for r in references().iter().filter(|r| of_quotient(&r.function).is_some() && r.above < f64::INFINITY) {
        let enclosure = enclose(r, &mut true);
        let relative = enclosure.width() / scale(r).max(f64::MIN_POSITIVE);
        assert!(relative < 1e-12, "{} {} of {:e}, {}: {relative:e} in {enclosure:?}", r.function, r.k, r.x, r.p);
    }
}

#[test]
fn quotients_in_f64_are_accurate() {
    for r in references() {
        let Some(q) = of_quotient(&r.function) else { continue };
        let value = quotient_f64(q, r.k, r.x, r.p);
        let error = (r.below - value).max(value - r.above).max(0.0) / scale(&r).max(f64::MIN_POSITIVE);
        assert!(
            value == r.above || error <= 8.0 * f64::EPSILON,
            "{} {} of {:e}, {}: {value:e}",
            r.function,
            r.k,
            r.x,
            r.p
        );
    }
}
