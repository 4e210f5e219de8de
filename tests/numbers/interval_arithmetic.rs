//! + − × ÷ √ of intervals against exact arithmetic: no value is lost, exact results stay exact, bounds are near.

use std::cmp::Ordering;

use crate::interval_support::{Random, steps};
use restpoint::num::interval::{Interval, saturation, select};
use restpoint::num::round;

/// A finite number as sign · mantissa · 2^exponent.
fn parts(x: f64) -> (i128, i32) {
    let bits = x.to_bits();
    let (field, fraction) = ((bits >> 52 & 0x7ff) as i32, i128::from(bits & ((1 << 52) - 1)));
    let magnitude = if field == 0 { fraction } else { fraction | 1 << 52 };
    (if x.is_sign_negative() { -magnitude } else { magnitude }, field.max(1) - 1075)
}

/// The sign of a sum of numbers m · 2^e with |m| < 2^108, of which at most two are near the largest in size.
///
/// All are brought to one exponent, 122 bits below the largest; what falls off leaves its sign in the last place. That
/// decides rightly, because two large ones that cancel leave nothing, or far more than the third can have lost.
fn sign_of_sum(terms: &[(i128, i32)]) -> Ordering {
    let top = |&(m, e): &(i128, i32)| e + 128 - m.unsigned_abs().leading_zeros().cast_signed();
    let Some(top) = terms.iter().filter(|t| t.0 != 0).map(top).max() else { return Ordering::Equal };
    let unit = top - 122;
    let aligned = |&(m, e): &(i128, i32)| match (e - unit).clamp(-126, 126) {
        up if up >= 0 => m << up,
        down if m & ((1 << -down) - 1) == 0 => m >> -down,
        down => m.signum() * ((m.abs() >> -down) | 1),
    };
    terms.iter().filter(|t| t.0 != 0).map(aligned).sum::<i128>().cmp(&0)
}

fn sum_against(a: f64, b: f64, bound: f64) -> Ordering {
    match infinite_side(bound) {
        Some(side) => side,
        None => sign_of_sum(&[parts(a), parts(b), parts(-bound)]),
    }
}

fn product_against(a: f64, b: f64, bound: f64) -> Ordering {
    let ((ma, ea), (mb, eb)) = (parts(a), parts(b));
    match infinite_side(bound) {
        Some(side) => side,
        None => sign_of_sum(&[(ma * mb, ea + eb), parts(-bound)]),
    }
}

/// a/b against a bound: a against bound · b, turned round for b < 0.
fn quotient_against(a: f64, b: f64, bound: f64) -> Ordering {
    let order = match infinite_side(bound) {
        Some(side) => return side,
        None => product_against(bound, b, a).reverse(),
    };
    if b < 0.0 { order.reverse() } else { order }
}

/// Any finite number against an infinite bound.
fn infinite_side(bound: f64) -> Option<Ordering> {
    bound.is_infinite().then_some(if bound > 0.0 { Ordering::Less } else { Ordering::Greater })
}

type Exact = fn(f64, f64, f64) -> Ordering;
type Operation = fn(Interval, Interval) -> Interval;

/// The four operations: name, on intervals, exactly, and how many steps beyond the tightest bound it may be.
const OPERATIONS: [(&str, Operation, Exact, u64); 4] = [
    ("+", |a, b| a + b, sum_against, 0),
    ("-", |a, b| a - b, |a, b, bound| sum_against(a, -b, bound), 0),
    ("*", |a, b| a * b, product_against, 1),
    ("/", |a, b| a.div(b, &mut true), quotient_against, 1),
];

#[track_caller]
fn check_inside(name: &str, [a, b]: [f64; 2], result: Interval, exact: Exact) {
    let lost = exact(a, b, result.lo()) == Ordering::Less || exact(a, b, result.hi()) == Ordering::Greater;
    assert!(!lost && !result.is_empty(), "{a:e} {name} {b:e} is not in {result:?}");
}

#[test]
fn no_value_is_lost() {
    let mut random = Random(1);
    for _ in 0..400_000 {
        let (x, y) = (random.interval(), random.interval());
        for (name, operation, exact, _) in OPERATIONS {
            let result = operation(x, y);
            for _ in 0..2 {
                let (a, b) = (random.inside(x), random.inside(y));
                if name != "/" || b != 0.0 {
                    check_inside(name, [a, b], result, exact);
                }
            }
        }
    }
}

#[test]
fn bounds_of_two_numbers_are_near() {
    let mut random = Random(2);
    for _ in 0..300_000 {
        let (a, b) = (random.number(), random.number());
        for (name, operation, exact, slack) in OPERATIONS {
            if name == "/" && b == 0.0 {
                continue;
            }
            let result = operation(Interval::point(a), Interval::point(b));
            check_inside(name, [a, b], result, exact);
            // The error of a sum with the largest f64 can overflow on the way, and steps near the subnormal range are
            // coarse; one step is given away there.
            let at_edge = a.abs() == f64::MAX || b.abs() == f64::MAX || result.mag() < 4.0 * f64::MIN_POSITIVE;
            let slack = slack.max(u64::from(at_edge));
            let inner = |mut x: f64, next: fn(f64) -> f64| {
                (0..=slack).for_each(|_| x = next(x));
                x
            };
            let (above, below) = (inner(result.lo(), f64::next_up), inner(result.hi(), f64::next_down));
            let near = exact(a, b, above) == Ordering::Less && exact(a, b, below) == Ordering::Greater;
            assert!(near, "{a:e} {name} {b:e} in {result:?}");
        }
    }
}

#[test]
fn exact_results_stay_exact() {
    let point = Interval::point;
    for a in -40_i32..=40 {
        for b in -40..=40 {
            let (x, y) = (f64::from(a) / 8.0, f64::from(b));
            assert_eq!(point(x) + point(y), point(x + y), "{x} + {y}");
            assert_eq!(point(x) * point(y), point(x * y), "{x} * {y}");
            assert_eq!(point(x * y).div(point(4.0), &mut true), point(x * y / 4.0), "{x} * {y} / 4");
            if b != 0 {
                assert_eq!(point(x * y).div(point(y), &mut true), point(x), "{x} * {y} / {y}");
            }
        }
        assert_eq!(point(f64::from(a * a)).sqrt(&mut true), point(f64::from(a.abs())));
    }
    let share = Interval::new(0.1, 0.7);
    assert_eq!(Interval::ZERO * share, Interval::ZERO);
    assert_eq!(Interval::ZERO * Interval::ENTIRE, Interval::ZERO);
    assert_eq!(Interval::ONE * share, share);
    assert_eq!(share.div(Interval::ONE, &mut true), share);
}

#[test]
fn signs_survive_underflow_and_bounds_survive_overflow() {
    let (tiny, huge) = (Interval::point(1e-200), Interval::point(1e200));
    assert_eq!(tiny * tiny, Interval::new(0.0, 5e-324));
    assert_eq!(tiny * -tiny, Interval::new(-5e-324, 0.0));
    assert_eq!(tiny.div(huge, &mut true), Interval::new(0.0, 5e-324));
    assert_eq!(huge * huge, Interval::new(f64::MAX, f64::INFINITY));
    assert_eq!(huge * -huge, Interval::new(f64::NEG_INFINITY, f64::MIN));
    assert_eq!(huge.div(-tiny, &mut true), Interval::new(f64::NEG_INFINITY, f64::MIN));
    assert_eq!(Interval::point(f64::MAX) + Interval::point(f64::MAX), Interval::new(f64::MAX, f64::INFINITY));
}

#[test]
fn roots_hold_their_squares() {
    let mut random = Random(3);
    for _ in 0..300_000 {
        let x = random.number().abs();
        let (lo, hi) = (round::sqrt_down(x), round::sqrt_up(x));
        assert!(
            product_against(lo, lo, x) != Ordering::Greater && product_against(hi, hi, x) != Ordering::Less,
            "√{x:e}"
        );
        assert!(steps(lo, hi) <= 2 && lo >= 0.0, "√{x:e} in [{lo:e}, {hi:e}]");
    }
}

#[test]
fn squares_are_products_that_know_it() {
    let mut random = Random(4);
    for _ in 0..200_000 {
        let x = random.interval();
        let a = random.inside(x);
        check_inside("*", [a, a], x.square(), product_against);
        assert!(x.square().nonnegative() && x.square().subset_of(x * x), "{x:?}");
        assert_eq!(x.square(), x.powi(2, &mut true));
    }
}

/// Short numbers make v + c s exact in f64, and the quotient comparable without rounding.
#[test]
fn saturation_bounds_hold_exactly() {
    let mut random = Random(6);
    for _ in 0..200_000 {
        let mut short = || (random.below(1 << 20) + 1) as f64 / 1024.0;
        let (s, c, v) = (short(), short(), short());
        let result = saturation(Interval::point(s), Interval::point(c), Interval::point(v), &mut true);
        check_inside("/", [s, v + c * s], result, quotient_against);
        assert!(steps(result.lo(), result.hi()) <= 2, "{s} / ({v} + {c} {s}) in {result:?}");
    }
}

#[test]
fn division_says_where_it_is_undefined() {
    let (inf, iv) = (f64::INFINITY, Interval::new);
    let check = |a: Interval, b: Interval, expected: Interval, expect_defined: bool| {
        let mut defined = true;
        assert_eq!((a.div(b, &mut defined), defined), (expected, expect_defined), "{a:?} / {b:?}");
    };
    check(iv(6.0, 12.0), iv(2.0, 3.0), iv(2.0, 6.0), true);
    check(iv(6.0, 12.0), iv(-3.0, -2.0), iv(-6.0, -2.0), true);
    check(iv(-6.0, 12.0), iv(2.0, 3.0), iv(-3.0, 6.0), true);
    check(iv(6.0, 12.0), iv(0.0, 3.0), iv(2.0, inf), false);
    check(iv(6.0, 12.0), iv(-3.0, 0.0), iv(-inf, -2.0), false);
    check(iv(-6.0, -3.0), iv(0.0, 3.0), iv(-inf, -1.0), false);
    check(iv(-6.0, -3.0), iv(-3.0, 0.0), iv(1.0, inf), false);
    check(iv(-1.0, 1.0), iv(0.0, 3.0), Interval::ENTIRE, false);
    check(iv(6.0, 12.0), iv(-1.0, 3.0), Interval::ENTIRE, false);
    check(Interval::ZERO, iv(-1.0, 3.0), Interval::ZERO, false);
    check(Interval::ONE, Interval::ZERO, Interval::EMPTY, false);
    check(Interval::ONE, iv(1.0, inf), iv(0.0, 1.0), true);
    check(Interval::ONE, Interval::EMPTY, Interval::EMPTY, true);
    check(iv(1.0, inf), iv(2.0, inf), iv(0.0, inf), true);
}

#[test]
fn division_in_pieces_leaves_the_gap_out() {
    let (inf, iv) = (f64::INFINITY, Interval::new);
    let check = |a: Interval, b: Interval, first: Interval, second: Option<Interval>| {
        assert_eq!(a.div_pieces(b), (first, second), "{a:?} / {b:?}");
    };
    check(iv(6.0, 12.0), iv(2.0, 3.0), iv(2.0, 6.0), None);
    check(iv(6.0, 12.0), iv(-2.0, 3.0), iv(-inf, -3.0), Some(iv(2.0, inf)));
    check(iv(-12.0, -6.0), iv(-2.0, 3.0), iv(-inf, -2.0), Some(iv(3.0, inf)));
    check(iv(6.0, 12.0), iv(0.0, 3.0), iv(2.0, inf), None);
    check(iv(-12.0, -6.0), iv(0.0, 3.0), iv(-inf, -2.0), None);
    check(iv(6.0, 12.0), iv(-2.0, 0.0), iv(-inf, -3.0), None);
    check(Interval::ONE, Interval::ZERO, Interval::EMPTY, None);
    check(iv(0.0, 1.0), iv(0.0, 1.0), Interval::ENTIRE, None);
    check(Interval::ZERO, Interval::ZERO, Interval::ENTIRE, None);
}

#[test]
fn the_empty_set_stays_empty() {
    let (none, some) = (Interval::EMPTY, Interval::new(-1.0, 2.0));
    for (name, operation, _, _) in OPERATIONS {
        assert_eq!((operation(none, some), operation(some, none)), (none, none), "{name}");
    }
    let mut flag = true;
    let images = [
        none.abs(),
        -none,
        none.square(),
        none.min(some),
        some.max(none),
        none.exp(),
        none.expm1(),
        none.tanh(),
        none.ln(&mut flag),
        none.log10(&mut flag),
        none.log1p(&mut flag),
        none.sqrt(&mut flag),
        none.recip(&mut flag),
        none.powi(3, &mut flag),
        none.powi(-2, &mut flag),
        none.pow(some, &mut flag),
        some.pow(none, &mut flag),
        saturation(none, some, some, &mut flag),
        select(some, none, some, some, &mut flag),
        none.intersect(some),
    ];
    assert!(flag && images.iter().all(|i| *i == none), "{images:?}");
    assert_eq!(none.hull(some), some);
}

#[test]
fn sets_are_sets() {
    let (inf, iv) = (f64::INFINITY, Interval::new);
    let mut random = Random(5);
    for _ in 0..200_000 {
        let (x, y) = (random.interval(), random.interval());
        assert!(x.contains(x.mid()) && x.mid().is_finite(), "{x:?}");
        assert!(x.intersect(y).subset_of(x) && x.subset_of(x.hull(y)) && y.subset_of(x.hull(y)), "{x:?} {y:?}");
        assert!(x.mig() <= x.mag() && x.contains_zero() == (x.mig() == 0.0), "{x:?}");
        let a = random.inside(x);
        assert!(x.mig() <= a.abs() && a.abs() <= x.mag() && x.abs().contains(a.abs()), "{a:e} in {x:?}");
        assert!((a - x.mid()).abs() <= x.radius() && x.radius() <= x.width(), "{a:e} in {x:?}");
        let both = (random.inside(x), random.inside(y));
        assert!(x.min(y).contains(both.0.min(both.1)) && x.max(y).contains(both.0.max(both.1)), "{x:?} {y:?}");
    }
    assert!(iv(1.0, 2.0).interior_of(iv(0.0, 3.0)) && !iv(1.0, 2.0).interior_of(iv(1.0, 3.0)));
    assert!(Interval::ENTIRE.interior_of(Interval::ENTIRE) && iv(1.0, inf).interior_of(iv(0.0, inf)));
    assert!(Interval::EMPTY.interior_of(iv(0.0, 1.0)) && !iv(0.0, 1.0).interior_of(Interval::EMPTY));
    for (lo, hi) in [(f64::NAN, 1.0), (1.0, f64::NAN), (2.0, 1.0), (inf, inf), (-inf, -inf)] {
        assert_eq!(Interval::try_new(lo, hi), None);
    }
    assert_eq!(Interval::try_new(-inf, inf), Some(Interval::ENTIRE));
}
