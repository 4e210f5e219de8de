//! Numbers of 32 digits against exact whole arithmetic, identities, and references from `tests/data/double_references.py`.

#![expect(clippy::panic, reason = "a broken table is a failed test")]

use restpoint::expr::function::{FUNCTIONS, Function, Quotient};
use restpoint::expr::tape::number::{Domain, Number};
use restpoint::num::double::Double;
use restpoint::num::interval::Interval;
use restpoint::num::random::Source;

/// A whole number of up to 53 bits.
fn whole(source: &mut Source) -> f64 {
    let bits = source.between(1.0, 53.0).round();
    source.between(-bits.exp2(), bits.exp2()).round()
}

/// Whether `found` holds high + low + something of at most `rest`, and how wide it is.
fn holds(found: Double, high: f64, low: f64, rest: f64) -> (bool, f64) {
    let off = (found - Double::exact(high) - Double::exact(low)).enclosure();
    (!off.intersect(Interval::new(-rest, rest)).is_empty(), off.width())
}

#[test]
fn sums_of_products_are_those_of_whole_numbers() {
    let mut source = Source::new(5);
    for _ in 0..20_000 {
        let [a, b, c, d] = [0; 4].map(|_| whole(&mut source));
        let [x, y, z, w] = [a, b, c, d].map(Double::exact);
        let found = x * y - z * w;
        // |a b| < 2^106, so the difference has at most 107 bits: three f64 hold it.
        let exact = a as i128 * b as i128 - c as i128 * d as i128;
        let high = exact as f64;
        let low = (exact - high as i128) as f64;
        let rest = (exact - high as i128 - low as i128) as f64;
        let (inside, width) = holds(found, high, low, rest.abs());
        let size = (a * b).abs().max((c * d).abs());
        assert!(inside && width <= size * (-100f64).exp2(), "{a} {b} {c} {d}: {found:?}");
    }
}

#[test]
fn quotients_and_roots_give_their_argument_back() {
    let mut source = Source::new(6);
    for _ in 0..20_000 {
        let [a, b] = [0; 2].map(|_| whole(&mut source) * source.between(-300.0, 300.0).round().exp2());
        if b == 0.0 {
            continue;
        }
        let mut defined = true;
        let quotient = Double::exact(a).div(Double::exact(b), &mut defined);
        let (inside, width) = holds(quotient * Double::exact(b), a, 0.0, 0.0);
        assert!(defined && inside && width <= a.abs() * (-98f64).exp2(), "{a} / {b}: {quotient:?}");
        let root = Double::exact(a.abs()).sqrt(&mut defined);
        let (inside, width) = holds(root * root, a.abs(), 0.0, 0.0);
        assert!(defined && inside && width <= a.abs() * (-98f64).exp2(), "√{a}: {root:?}");
        let cube = Double::exact(a.signum() * 3.0 + 0.1).powi(-3, &mut defined);
        let back = Double::exact(1.0).div(cube, &mut defined);
        let base = Double::exact(a.signum() * 3.0 + 0.1);
        let (inside, _) = holds(back - base * base * base, 0.0, 0.0, 0.0);
        assert!(defined && inside, "{back:?}");
    }
}

#[test]
fn what_is_not_defined_is_said_not_to_be() {
    let check = |operation: &dyn Fn(&mut bool) -> Double, expected: bool| {
        let mut defined = true;
        let found = operation(&mut defined);
        assert_eq!(defined, expected, "{found:?}");
    };
    let [zero, one] = [0.0, 1.0].map(Double::exact);
    check(&|defined| one.div(zero, defined), false);
    check(&|defined| zero.div(zero, defined), false);
    check(&|defined| zero.powi(-1, defined), false);
    check(&|defined| (-one).sqrt(defined), false);
    check(&|defined| zero.ln(defined), false);
    check(&|defined| (-one).log1p(defined), false);
    check(&|defined| (-one).pow(Double::exact(0.5), defined), false);
    check(&|defined| zero.pow(Double::exact(-0.5), defined), false);
    check(&|defined| zero.pow(Double::exact(0.5), defined), true);
    check(&|defined| zero.sqrt(defined), true);
    check(&|defined| one.div(one, defined), true);
}

/// Beyond the range of the sharp forms the value is still enclosed: against the interval operations.
#[test]
fn extreme_arguments_are_enclosed() {
    let sizes =
        [0.0, 5e-324, 1e-310, 1e-260, 1e-201, 1e-20, 1.0, 40.0, 299.0, 301.0, 710.0, 1e20, 1e151, 1e308, f64::MAX];
    for a in sizes.iter().flat_map(|&x| [x, -x]) {
        for row in FUNCTIONS {
            let (mut flag, mut same) = (true, true);
            let (found, plain) =
                ((row.double)(Double::exact(a), &mut flag), (row.interval)(Interval::point(a), &mut same));
            let meet = !found.enclosure().intersect(plain).is_empty() || plain.is_empty();
            assert!(meet && flag == same, "{} of {a:e}: {found:?} {plain:?}", row.name);
        }
        for b in sizes.iter().flat_map(|&x| [x, -x]) {
            let [x, y] = [a, b].map(Double::exact);
            let [p, q] = [a, b].map(Interval::point);
            let pairs = [(x + y, p + q), (x - y, p - q), (x * y, p * q)];
            for (found, plain) in pairs.into_iter().chain([(x.div(y, &mut true), p.div(q, &mut true))]) {
                let meet = !found.enclosure().intersect(plain).is_empty() || plain.is_empty();
                assert!(meet, "{a:e} {b:e}: {found:?} {plain:?}");
            }
        }
    }
}

fn value(function: &str, x: Double, p: Double, domain: &mut Domain) -> Double {
    let quotient = |q: Quotient, domain: &mut Domain| x.quotient(q, 0, domain);
    match function {
        "exp" => x.apply(Function::Exp, domain),
        "ln" => x.apply(Function::Ln, domain),
        "log10" => x.apply(Function::Log10, domain),
        "expm1" => x.apply(Function::Expm1, domain),
        "log1p" => x.apply(Function::Log1p, domain),
        "tanh" => x.apply(Function::Tanh, domain),
        "sqrt" => x.apply(Function::Sqrt, domain),
        "pow" => Number::pow(&x, &p, domain),
        "expm1/u" => quotient(Quotient::Expm1, domain),
        "log1p/u" => quotient(Quotient::Log1p, domain),
        "tanh/u" => quotient(Quotient::Tanh, domain),
        "powm1/u" => x.power_quotient(0, &p, domain),
        other => panic!("no function {other}"),
    }
}

#[test]
fn functions_hold_their_references_to_28_digits() {
    let mut table = csv::Reader::from_reader(include_str!("../data/double_references.csv").as_bytes());
    let mut seen = 0;
    for row in table.records() {
        let row = row.expect("a row");
        let number = |i: usize| row[i].parse::<f64>().expect("a number");
        let (x, p, high, low) = (number(1), number(2), number(3), number(4));
        let mut domain = Domain::CLEAN;
        let found = value(&row[0], Double::exact(x), Double::exact(p), &mut domain);
        let (inside, width) = holds(found, high, low, low.abs() * f64::EPSILON + 5e-324);
        assert!(domain.defined && inside, "{} of {x:e}, {p}: {found:?}", &row[0]);
        assert!(width <= 1e-28 * high.abs(), "{} of {x:e}, {p}: {:e}", &row[0], width / high.abs());
        seen += 1;
    }
    assert!(seen > 500, "{seen}");
}
