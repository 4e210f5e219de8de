//! Functions over whole boxes: nothing that a function takes inside is lost, and the flag says where it is undefined.

use crate::interval_support::Random;
use restpoint::num::elementary;
use restpoint::num::interval::{Interval, saturation, select};
use restpoint::num::quotient::{HIGHEST_DERIVATIVE, Quotient, quotient, quotient_f64};

type Enclosure = fn(Interval, &mut bool) -> Interval;
type Scalar = fn(f64) -> f64;

/// Functions of one number: name, over an interval, at a number (correctly rounded, NaN where undefined).
const FUNCTIONS: [(&str, Enclosure, Scalar); 10] = [
    ("exp", |x, _| x.exp(), elementary::exp),
    ("expm1", |x, _| x.expm1(), elementary::expm1),
    ("tanh", |x, _| x.tanh(), elementary::tanh),
    ("ln", |x, defined| x.ln(defined), |x| if x > 0.0 { elementary::ln(x) } else { f64::NAN }),
    ("log10", |x, defined| x.log10(defined), |x| if x > 0.0 { elementary::log10(x) } else { f64::NAN }),
    ("log1p", |x, defined| x.log1p(defined), |x| if x > -1.0 { elementary::log1p(x) } else { f64::NAN }),
    ("sqrt", |x, defined| x.sqrt(defined), f64::sqrt),
    ("x^5", |x, defined| x.powi(5, defined), |x| elementary::pow(x, 5.0)),
    ("x^-2", |x, defined| x.powi(-2, defined), |x| if x == 0.0 { f64::NAN } else { elementary::pow(x, -2.0) }),
    ("x^-3", |x, defined| x.powi(-3, defined), |x| if x == 0.0 { f64::NAN } else { elementary::pow(x, -3.0) }),
];

/// A correctly rounded value says where the exact one lies, up to a step either way.
#[track_caller]
fn check_holds(name: &str, arguments: &[f64], value: f64, enclosure: Interval) {
    let held = enclosure.lo() <= value.next_up() && value.next_down() <= enclosure.hi();
    assert!(held, "{name} of {arguments:?} = {value:e} is not in {enclosure:?}");
}

#[test]
fn no_value_of_a_function_is_lost() {
    let mut random = Random(11);
    for _ in 0..100_000 {
        let x = random.interval();
        for (name, enclose, scalar) in FUNCTIONS {
            let mut defined = true;
            let enclosure = enclose(x, &mut defined);
            for a in [random.inside(x), x.lo().max(f64::MIN), x.hi().min(f64::MAX)] {
                let value = scalar(a);
                if value.is_nan() {
                    assert!(!defined, "{name} is undefined at {a:e}, but defined over {x:?}");
                } else {
                    check_holds(name, &[a], value, enclosure);
                }
            }
        }
    }
}

#[test]
fn no_power_is_lost() {
    let mut random = Random(12);
    for _ in 0..200_000 {
        let (x, p) = match random.below(3) {
            0 => (random.interval(), random.interval()),
            1 => (random.interval().abs(), random.interval()),
            _ => (random.interval(), Interval::point(random.below(20) as f64 - 10.0)),
        };
        let mut defined = true;
        let enclosure = x.pow(p, &mut defined);
        let (a, b) = (random.inside(x) + 0.0, random.inside(p));
        let undefined = (a < 0.0 && (b.fract() != 0.0 || !p.is_point())) || (a == 0.0 && b < 0.0);
        if undefined {
            assert!(!defined, "{a:e}^{b:e} is undefined, but {x:?}^{p:?} defined");
        } else {
            check_holds("pow", &[a, b], elementary::pow(a, b), enclosure);
        }
    }
}

#[test]
fn powers_at_their_edges() {
    let (inf, iv) = (f64::INFINITY, Interval::new);
    let check = |x: Interval, p: Interval, expected: Interval, expect_defined: bool| {
        let mut defined = true;
        assert_eq!((x.pow(p, &mut defined), defined), (expected, expect_defined), "{x:?}^{p:?}");
    };
    check(iv(0.0, 4.0), iv(0.5, 0.5), iv(0.0, 2f64.next_up()), true);
    check(iv(0.0, 4.0), Interval::ZERO, Interval::ONE, true);
    check(iv(-3.0, 4.0), Interval::ZERO, Interval::ONE, true);
    check(iv(0.0, 2.0), iv(0.0, 1.0), iv(0.0, 2.0), false);
    check(iv(0.0, 2.0), iv(-1.0, 1.0), iv(0.0, inf), false);
    check(Interval::ZERO, iv(1.5, 2.5), Interval::ZERO, true);
    check(Interval::ZERO, iv(0.0, 1.0), iv(0.0, 1.0), false);
    check(Interval::ZERO, iv(-1.5, -0.5), Interval::EMPTY, false);
    check(Interval::ZERO, Interval::point(-1.0), Interval::EMPTY, false);
    check(iv(-2.0, -1.0), iv(0.5, 1.0), Interval::EMPTY, false);
    check(iv(-2.0, 3.0), Interval::point(2.0), iv(0.0, 9.0), true);
    check(iv(-2.0, 3.0), Interval::point(3.0), iv(-8.0, 27.0), true);
    check(iv(-2.0, 4.0), Interval::point(-2.0), iv(0.0625, inf), false);
    check(iv(-2.0, 4.0), Interval::point(-1.0), Interval::ENTIRE, false);
    check(iv(-2.0, -1.0), Interval::point(-1.0), iv(-1.0, -0.5), true);
    check(iv(-1.0, 1.0), Interval::point(1e300), iv(0.0, 1.0), true);
    check(iv(1.0, inf), iv(-inf, inf), iv(0.0, inf), true);
    check(iv(2.0, 4.0), iv(-1.0, 2.0), iv(0.25, 16.0), true);
}

#[test]
fn exact_values_stay_exact() {
    let point = Interval::point;
    let mut flag = true;
    assert_eq!((point(0.0).exp(), point(0.0).expm1(), point(0.0).tanh()), (point(1.0), point(0.0), point(0.0)));
    assert_eq!((point(1.0).ln(&mut flag), point(0.0).log1p(&mut flag)), (point(0.0), point(0.0)));
    for n in 0..=22 {
        assert_eq!(point(10f64.powi(n)).log10(&mut flag), point(f64::from(n)));
        assert_eq!(point(5.0).powi(n, &mut flag), point(5f64.powi(n)));
    }
    assert_eq!(point(2.0).powi(-1000, &mut flag), point(2f64.powi(-1000)));
    assert!(flag);
}

#[test]
fn saturation_is_sharp_and_loses_nothing() {
    let mut random = Random(13);
    for _ in 0..200_000 {
        let mut any = || {
            let (a, b) = (random.unit() * 4.0, random.unit() * 4.0);
            let zero = random.below(6) == 0;
            Interval::new(if zero { 0.0 } else { a.min(b) }, a.max(b))
        };
        let (s, c, v) = (any(), any(), any());
        let mut defined = true;
        let enclosure = saturation(s, c, v, &mut defined);
        assert!(enclosure.subset_of(s.div(v + c * s, &mut true)), "{s:?} {c:?} {v:?}");
        let (a, b, d) = (random.inside(s), random.inside(c), random.inside(v));
        let value = a / (d + b * a);
        if value.is_finite() && d + b * a > 1e-290 {
            // Three roundings of a value that keeps its sign, clear of underflow: 4 units are plenty.
            let (lo, hi) = (value * (1.0 + 4.0 * f64::EPSILON), value * (1.0 - 4.0 * f64::EPSILON));
            assert!(enclosure.lo() <= lo && hi <= enclosure.hi(), "{a} {b} {d}: {value:e} in {enclosure:?}");
        }
        assert_eq!(defined, v.lo() > 0.0 || (c.lo() > 0.0 && s.lo() > 0.0), "{s:?} {c:?} {v:?}");
    }
}

#[test]
fn saturation_at_its_edges() {
    let (inf, iv) = (f64::INFINITY, Interval::new);
    let check = |[s, c, v]: [Interval; 3], expected: Interval, expect_defined: bool| {
        let mut defined = true;
        assert_eq!((saturation(s, c, v, &mut defined), defined), (expected, expect_defined), "{s:?} {c:?} {v:?}");
    };
    let (zero, one) = (Interval::ZERO, Interval::ONE);
    check([iv(1.0, 3.0), one, one], iv(0.5, 0.75), true);
    check([zero, one, one], zero, true);
    check([iv(0.0, inf), iv(0.5, 1.0), one], iv(0.0, 2.0), true);
    check([iv(0.0, 1.0), iv(0.5, 1.0), iv(0.0, 1.0)], iv(0.0, 2.0), false);
    check([zero, iv(0.5, 1.0), zero], iv(0.0, 2.0), false);
    check([zero, zero, zero], iv(0.0, inf), false);
    check([one, zero, zero], Interval::EMPTY, false);
    check([one, zero, iv(0.0, 2.0)], iv(0.5, inf), false);
    check([iv(1.0, 4.0), iv(0.5, 1.0), zero], iv(1.0, 2.0), true);
    check([iv(-1.0, 1.0), zero, iv(2.0, 4.0)], iv(-0.5, 0.5), true);
    check([iv(1.0, inf), zero, iv(1.0, inf)], iv(0.0, inf), true);
}

#[test]
fn a_choice_is_open_where_the_comparison_is() {
    let (iv, x, y) = (Interval::new, Interval::new(1.0, 2.0), Interval::new(4.0, 5.0));
    let check = |a: Interval, b: Interval, expected: Interval, expect_defined: bool| {
        let mut defined = true;
        assert_eq!((select(a, b, x, y, &mut defined), defined), (expected, expect_defined), "{a:?} ≤ {b:?}");
    };
    check(iv(0.0, 1.0), iv(1.0, 2.0), x, true);
    check(iv(3.0, 4.0), iv(1.0, 2.0), y, true);
    check(iv(2.0, 4.0), iv(1.0, 2.0), iv(1.0, 5.0), false);
    check(iv(0.0, 4.0), iv(1.0, 2.0), iv(1.0, 5.0), false);
}

const QUOTIENTS: [Quotient; 4] = [Quotient::Expm1, Quotient::Log1p, Quotient::Tanh, Quotient::Powm1];

/// Boxes against single numbers, which `interval_references` checks against exact values.
#[test]
fn no_value_of_a_quotient_is_lost() {
    let mut random = Random(14);
    for round in 0..40_000 {
        let q = QUOTIENTS[round % 4];
        let k = random.below(u64::from(HIGHEST_DERIVATIVE) + 1) as u32;
        let u = Interval::point(random.between(-1.5, 6.0)) + Interval::new(0.0, random.unit().powi(3) * 4.0);
        let p = match random.below(3) {
            0 => Interval::point(random.below(9) as f64 - 3.0),
            1 => Interval::point(random.between(-3.0, 5.0)),
            _ => Interval::point(random.between(-3.0, 5.0)) + Interval::new(0.0, random.unit()),
        };
        let (u, p) = match random.below(10) {
            0 => (Interval::new(u.lo(), f64::INFINITY), p),
            1 => (random.interval(), p),
            2 => (random.interval(), random.interval()),
            _ => (u, p),
        };
        let mut defined = true;
        let enclosure = quotient(q, k, u, p, &mut defined);
        for a in [u.lo().max(f64::MIN), random.inside(u), u.mid()] {
            let (mut here, b) = (true, random.inside(p));
            let value = quotient(q, k, Interval::point(a), Interval::point(b), &mut here);
            assert!(here || !defined, "{q:?} {k} of {a:e}, {b}: undefined, but defined over {u:?}, {p:?}");
            let lost = value.intersect(enclosure).is_empty() && !value.is_empty();
            assert!(!lost, "{q:?} {k} of {a:e}, {b} in {value:?} is not in {enclosure:?} over {u:?}, {p:?}");
        }
    }
}

/// The f64 value comes by other formulas than the enclosure, and must lie in it up to its own rounding.
#[test]
fn quotients_in_f64_agree_with_their_enclosures() {
    let mut random = Random(16);
    for round in 0..40_000 {
        let q = QUOTIENTS[round % 4];
        let k = random.below(u64::from(HIGHEST_DERIVATIVE) + 1) as u32;
        let size = 10f64.powf(random.between(-20.0, 2.5));
        let u = if random.below(2) == 0 { size } else { (-size).max(-1.0 + random.unit()) };
        let p = match random.below(3) {
            0 => random.below(9) as f64 - 3.0,
            1 => random.below(9) as f64 - 3.0 + random.between(-1.0, 1.0).powi(9),
            _ => random.between(-40.0, 40.0),
        };
        let enclosure = quotient(q, k, Interval::point(u), Interval::point(p), &mut true);
        let value = quotient_f64(q, k, u, p);
        // Around the sign changes of tanh's, what counts is the size on either side.
        let scale = if q == Quotient::Tanh { enclosure.mag().max(0.05) } else { enclosure.mag() };
        let error = (enclosure.lo() - value).max(value - enclosure.hi()) / scale.max(f64::MIN_POSITIVE);
        assert!(error <= 8.0 * f64::EPSILON, "{q:?} {k} of {u:e}, {p}: {value:e} in {enclosure:?}");
    }
}

/// Where the quotient is monotone in u, a box gives what its ends give.
#[test]
fn monotone_quotients_are_sharp() {
    let mut random = Random(15);
    let p = Interval::point(2.5);
    for _ in 0..500 {
        let (a, b) = (random.between(-0.9, 5.0), random.between(-0.9, 5.0));
        for q in [Quotient::Expm1, Quotient::Log1p, Quotient::Powm1] {
            for k in 0..=HIGHEST_DERIVATIVE {
                let at = |x: f64| quotient(q, k, Interval::point(x), p, &mut true);
                let over = quotient(q, k, Interval::new(a.min(b), a.max(b)), p, &mut true);
                // One outward rounding more or less, on either side, from the constant in front.
                let wider = |x: Interval| Interval::new(x.lo().next_down().next_down(), x.hi().next_up().next_up());
                assert!(over.subset_of(wider(at(a).hull(at(b)))), "{q:?} {k} over {a} {b}: {over:?}");
            }
        }
    }
}

/// At u = −1 the second derivative is 2 for p > 2, 0 for p = 0, 1, 2, and unbounded elsewhere.
#[test]
fn the_end_of_the_power_quotient_depends_on_the_exponent() {
    let check = |lo: f64, hi: f64, expected: Interval, expect_defined: bool| {
        let mut defined = true;
        let value = quotient(Quotient::Powm1, 2, Interval::point(-1.0), Interval::new(lo, hi), &mut defined);
        assert_eq!((value, defined), (expected, expect_defined), "p in [{lo}, {hi}]");
    };
    check(2.5, 3.5, Interval::point(2.0), true);
    check(2.0, 2.0, Interval::ZERO, true);
    check(1.5, 3.5, Interval::new(0.0, 2.0), false);
    check(1.5, 2.0, Interval::ZERO, false);
    check(1.2, 1.8, Interval::EMPTY, false);
}

#[test]
fn quotients_end_with_their_domain() {
    let (inf, iv, point) = (f64::INFINITY, Interval::new, Interval::point);
    let check = |q: Quotient, k: u32, u: Interval, p: f64, expected: Interval, expect_defined: bool| {
        let mut defined = true;
        assert_eq!(
            (quotient(q, k, u, point(p), &mut defined), defined),
            (expected, expect_defined),
            "{q:?} {k} {u:?} {p}"
        );
    };
    check(Quotient::Log1p, 0, iv(-1.0, 0.0), 0.0, iv(1.0, inf), false);
    check(Quotient::Log1p, 1, iv(-2.0, 0.0), 0.0, iv(-inf, -0.5), false);
    check(Quotient::Log1p, 0, iv(-2.0, -1.0), 0.0, Interval::EMPTY, false);
    check(Quotient::Powm1, 0, point(-1.0), 2.0, Interval::ONE, true);
    check(Quotient::Powm1, 2, point(-1.0), 4.0, point(2.0), true);
    check(Quotient::Powm1, 0, iv(-1.0, 0.0), 2.0, iv(1.0, 2.0), true);
    check(Quotient::Powm1, 1, iv(-1.0, 0.0), 1.0, Interval::ZERO, true);
    check(Quotient::Powm1, 1, point(-1.0), 0.5, Interval::EMPTY, false);
    check(Quotient::Powm1, 1, iv(-1.0, 0.0), 0.5, iv(-inf, -0.125), false);
    check(Quotient::Powm1, 0, iv(-3.0, -2.0), 2.0, Interval::EMPTY, false);
    check(Quotient::Powm1, 0, Interval::EMPTY, 2.0, Interval::EMPTY, true);
    check(Quotient::Expm1, 1, Interval::EMPTY, 0.0, Interval::EMPTY, true);
    check(Quotient::Expm1, 0, Interval::ENTIRE, 0.0, iv(0.0, inf), true);
    check(Quotient::Tanh, 0, Interval::ENTIRE, 0.0, iv(0.0, 1.0), true);
}
