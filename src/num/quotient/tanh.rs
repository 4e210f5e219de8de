//! Enclosures of tanh(u)/u and its first three derivatives.
//!
//! tanh(u)/u = g(u²) with g(v) = Σ 8/(m²π² + 4v) over odd m > 0 (the partial fractions of tanh). So (−1)ʲ g⁽ʲ⁾ is positive
//! and falls with v, for every j, and
//!
//! ```text
//! q_0 = g,   q_1 = 2u g',   q_2 = 2g' + 4v g'',   q_3 = 12u g'' + 8u³ g'''
//! ```
//!
//! are enclosed with each g⁽ʲ⁾ taken at the two ends of v. Start at [`enclose`].

use crate::num::interval::Interval;

/// g's coefficients, signs left out: 2 (2/π)^(2n+2) Σ m^−(2n+2) over odd m, which are tanh's at 0 (DLMF 4.33.3), rounded
/// to nearest. Each is less than (2/π)² < 0.406 times the one before.
#[expect(clippy::unreadable_literal, reason = "digits to be compared with a table, not to be read")]
const COEFFICIENTS: [f64; 32] = [
    1.0,
    0.3333333333333333,
    0.13333333333333333,
    0.05396825396825397,
    0.021869488536155203,
    0.008863235529902197,
    0.003592128036572481,
    0.0014558343870513183,
    0.000590027440945586,
    0.00023912911424355248,
    9.691537956929451e-05,
    3.927832388331683e-05,
    1.5918905069328964e-05,
    6.451689215655431e-06,
    2.6147711512907546e-06,
    1.0597268320104654e-06,
    4.294911078273806e-07,
    1.7406618963571648e-07,
    7.054636946400968e-08,
    2.859136662305254e-08,
    1.1587644432798853e-08,
    4.6962953982309016e-09,
    1.903336833931276e-09,
    7.713933635359062e-10,
    3.126339545892087e-10,
    1.26705769303054e-10,
    5.135191408039368e-11,
    2.0812146867700473e-11,
    8.434845419094337e-12,
    3.4185140868111557e-12,
    1.385471574294847e-12,
    5.61510479241468e-13,
];

/// |qₖ| never exceeds these: bounds of |f⁽ᵏ⁺¹⁾|/(k + 1) with f' = S = 1 − T², f'' = −2TS, f''' = S (6T² − 2),
/// f'''' = 8TS (2 − 3T²), T = tanh, |T| S ≤ 2/√27 < 0.385.
const LARGEST: [f64; 4] = [1.0, 0.39, 0.67, 1.56];

/// Every value of the k-th derivative of tanh(u)/u over u, k ≤ 3.
///
/// Where the next derivative is proved to have one sign, the two ends decide.
pub(super) fn enclose(k: u32, u: Interval) -> Interval {
    if u.is_empty() {
        return u;
    }
    let by_ends = (1..=2).contains(&k) && u.is_bounded() && !u.is_point();
    let orders = if by_ends { k + 1 } else { k };
    let near = g_at(orders, u.mig());
    let far = if u.is_point() { near } else { g_at(orders, u.mag()) };
    let over = [0, 1, 2, 3].map(|j| near[j].hull(far[j]));
    let value = by_parts(k, u, over);
    if !by_ends {
        return value;
    }
    let slope = by_parts(orders, u, over);
    if !slope.nonnegative() && !(-slope).nonnegative() {
        return value;
    }
    let end = |x: f64| {
        let known = [(u.mig(), near), (u.mag(), far)].into_iter().find(|(at, _)| *at == x.abs());
        by_parts(k, Interval::point(x), known.map_or_else(|| g_at(k, x.abs()), |(_, g)| g))
    };
    value.intersect(end(u.lo()).hull(end(u.hi())))
}

/// qₖ over u, from g and its derivatives over u².
fn by_parts(k: u32, u: Interval, [g0, g1, g2, g3]: [Interval; 4]) -> Interval {
    let times = |factor: f64, x: Interval| Interval::point(factor) * x;
    let value = match k {
        0 => g0,
        1 => times(2.0, u * g1),
        2 => times(2.0, g1) + times(4.0, u.square() * g2),
        _ => times(12.0, u * g2) + times(8.0, u.powi(3, &mut true) * g3),
    };
    let largest = LARGEST[k as usize];
    let value = value.intersect(Interval::new(-largest, largest));
    if k > 0 && u.mig() >= 1.0 { value.intersect(by_recursion(k, u)) } else { value }
}

/// From u qₖ = f⁽ᵏ⁾ − k qₖ₋₁: where u² nears overflow or u is unbounded, the parts say nothing.
fn by_recursion(k: u32, u: Interval) -> Interval {
    let (t, s) = (u.tanh(), squared_secant(u.abs()));
    let twice = |x: Interval| Interval::point(2.0) * x;
    let f = [t, s, -twice(t * s), s * (Interval::point(6.0) * t.square() - Interval::point(2.0))];
    (0..=k).fold(Interval::ZERO, |last, j| (f[j as usize] - Interval::point(f64::from(j)) * last).div(u, &mut true))
}

/// 1/cosh² u for u ≥ 0, which falls with u.
fn squared_secant(u: Interval) -> Interval {
    let at = |u: f64| {
        if u == f64::INFINITY {
            return Interval::ZERO;
        }
        let decay = (Interval::point(-2.0) * Interval::point(u)).exp();
        (Interval::point(4.0) * decay).div((Interval::ONE + decay).square(), &mut true)
    };
    at(u.lo()).hull(at(u.hi()))
}

/// g, g', g'', g''' up to the k-th at u² for one u ≥ 0, which may be ∞; 0 beyond the k-th.
fn g_at(k: u32, u: f64) -> [Interval; 4] {
    let mut g = [Interval::ZERO; 4];
    if u == f64::INFINITY {
        return g;
    }
    let x = Interval::point(u);
    g[0] = if u == 0.0 {
        Interval::ONE
    } else if u < 1e-8 {
        // 1 − u²/3 ≤ g ≤ 1; the quotient would be coarse where u is subnormal.
        Interval::new(1f64.next_down(), 1.0)
    } else {
        x.tanh().div(x, &mut true)
    };
    if u * u < 0.5 {
        (1..=k).for_each(|j| g[j as usize] = g_by_series(j as usize, x.square()));
    } else if k > 0 {
        g_by_recursion(x, &mut g);
    }
    g
}

/// What part of the coefficients a series needs: up to which v, and the last one.
const LAST_FOR: [(f64, usize); 3] = [(0.01, 12), (0.1, 18), (1.0, COEFFICIENTS.len() - 1)];

/// g⁽ʲ⁾(v) = Σ (−1)ⁿ aₙ n (n − 1) … (n − j + 1) v^(n−j) for 0 ≤ v ≤ ½, by Horner's rule.
///
/// From the last coefficient n ≥ 12 on, terms shrink by at most 0.406 · ½ · 13/10 < ⅓, so that all that is left out is less
/// than half of the last term that is in.
fn g_by_series(j: usize, v: Interval) -> Interval {
    let last = LAST_FOR.iter().find(|(most, _)| v.hi() <= *most).map_or(COEFFICIENTS.len() - 1, |(_, last)| *last);
    let term = |n: usize| {
        let a = COEFFICIENTS[n];
        let sign = if n.is_multiple_of(2) { 1.0 } else { -1.0 };
        let falling: f64 = (0..j).map(|i| n as f64 - i as f64).product();
        Interval::point(sign * falling) * Interval::new(a.next_down(), a.next_up())
    };
    let sum = (j..=last).rev().fold(Interval::ZERO, |sum, n| sum * v + term(n));
    let power = (j..last).fold(Interval::ONE, |power, _| power * v);
    let remainder = (term(last) * power).mag();
    sum + Interval::new(-remainder, remainder)
}

/// g' and on from g, for u ≥ √½, by differentiating 2v g' + g = S, S = 1/cosh²(√v), D = d/dv:
/// 2v g⁽ʲ⁾ = D^(j−1) S − (2j − 1) g⁽ʲ⁻¹⁾, with D S = −g S. It loses up to three digits, most at the near end.
fn g_by_recursion(u: Interval, g: &mut [Interval; 4]) {
    let point = Interval::point;
    let twice = point(2.0) * u.square();
    let s = squared_secant(u);
    g[1] = (s - g[0]).div(twice, &mut true);
    let slope = -g[0] * s;
    g[2] = (slope - point(3.0) * g[1]).div(twice, &mut true);
    let curvature = -g[1] * s - g[0] * slope;
    g[3] = (curvature - point(5.0) * g[2]).div(twice, &mut true);
}
