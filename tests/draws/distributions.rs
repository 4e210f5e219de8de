//! Distributions and random numbers against `tests/data/draws_references.csv`, and parameters drawn by them.

#![expect(clippy::cast_sign_loss, reason = "shares are not negative")]

use restpoint::analysis::uncertain::draw::Sampling;
use restpoint::num::beta::{Beta, Side};
use restpoint::num::gamma::{excess, ln_gamma};
use restpoint::num::philox;
use restpoint::num::sobol::Sobol;
use restpoint::num::{normal, student};

use crate::support::drawn;

/// The lines of a name, without it.
fn references(name: &str) -> Vec<Vec<&'static str>> {
    let lines = include_str!("../data/draws_references.csv").lines().map(|line| line.split(',').collect::<Vec<_>>());
    let found: Vec<Vec<&str>> = lines.filter(|line| line[0] == name).map(|line| line[1..].to_vec()).collect();
    assert!(found.len() > 10, "{name}");
    found
}

fn numbers(name: &str) -> Vec<Vec<f64>> {
    references(name).iter().map(|line| line.iter().map(|text| text.parse().expect("a number")).collect()).collect()
}

fn whole(name: &str) -> Vec<Vec<u64>> {
    references(name).iter().map(|line| line.iter().map(|text| text.parse().expect("whole")).collect()).collect()
}

fn near(found: f64, expected: f64, relative: f64, what: &dyn std::fmt::Debug) {
    let error = (found - expected).abs();
    assert!(
        error <= relative * expected.abs(),
        "{what:?}: {found:e}, not {expected:e}, off by {:e}",
        error / expected.abs()
    );
}

#[test]
fn random_numbers_are_those_of_the_method() {
    for line in whole("philox") {
        let found = philox::block([line[0], line[1]], [line[2], line[3], line[4], line[5]]);
        assert_eq!(found[..], line[6..], "{line:?}");
    }
    assert!(philox::unit(0) > 0.0 && philox::unit(u64::MAX) < 1.0);
    assert_eq!(1.0 - philox::unit(0), philox::unit(u64::MAX));
}

#[test]
fn points_of_the_sequence_are_those_published() {
    let sequence = Sobol::new(512, 1 << 11);
    let longer = Sobol::new(512, 1 << 40);
    for line in whole("sobol") {
        for one in [&sequence, &longer] {
            let found = one.digits(line[0], line[1] as usize);
            assert_eq!(found >> 11 << 11, line[2], "{line:?}");
        }
    }
}

#[test]
fn gamma_functions() {
    for line in numbers("gamma") {
        assert!(
            (ln_gamma(line[0]) - line[1]).abs() <= 4e-15 * line[1].abs().max(1.0),
            "{line:?}: {}",
            ln_gamma(line[0])
        );
    }
    // u²/2 − u³/3 + u⁴/4 − …
    for u in [1e-9, -1e-4, 0.02] {
        near(excess(u), u * u / 2.0 - u * u * u / 3.0 + u.powi(4) / 4.0 - u.powi(5) / 5.0 + u.powi(6) / 6.0, 1e-9, &u);
    }
    near(excess(0.3), 0.3 - 0.3f64.ln_1p(), 1e-14, &0.3);
    near(excess(-0.3), -0.3 - (-0.3f64).ln_1p(), 1e-14, &-0.3);
}

#[test]
fn normal_shares_and_quantiles() {
    for line in numbers("normal") {
        let (z, logarithm) = (line[0], line[1]);
        near(normal::ln_share(z), logarithm, 4e-15, &line);
        near(normal::of_ln_share(logarithm), z, 1e-15 + 1e-15 / (z * z), &line);
        if z > -37.5 {
            let share = normal::share(z);
            // The share has its own error, and exp of the logarithm that of a logarithm of up to 700.
            near(share, logarithm.exp(), 2e-15 + 3e-16 * logarithm.abs(), &line);
            near(normal::share(-z), 1.0 - logarithm.exp(), 4e-16, &line);
            near(normal::quantile(share), z, 4e-15 + 1e-15 / z.abs(), &line);
        }
    }
    assert_eq!(normal::quantile(0.5), 0.0);
    assert_eq!((normal::quantile(0.0), normal::quantile(1.0)), (f64::NEG_INFINITY, f64::INFINITY));
    assert!(normal::quantile(-0.1).is_nan() && normal::quantile(1.1).is_nan());
}

#[test]
fn beta_shares_and_quantiles() {
    for line in numbers("beta") {
        let [a, b, x, below, above] = line[..] else { panic!("{line:?}") };
        let beta = Beta::new(a, b);
        let found = beta.shares(x);
        for (found, expected) in [(found.ln_below, below), (found.ln_above, above)] {
            let error = (found - expected).abs();
            let relative = 1e-12 + 1e-15 * expected.abs();
            let fine = error <= relative || (a.min(b) < 0.1 && error * expected.exp() <= 2e-14);
            assert!(fine, "{line:?}: {found}, not {expected}");
        }
        // From the side that decides x.
        let side = if below < above { Side::Below(below) } else { Side::Above(above) };
        let back = beta.quantile(side);
        // What one unit in the last digit of the logarithm is worth.
        let ln_density = (a - 1.0) * x.ln() + (b - 1.0) * (-x).ln_1p() + ln_gamma(a + b) - ln_gamma(a) - ln_gamma(b);
        let unit = below.abs().max(above.abs()) * (below.min(above) - ln_density).exp() / x;
        // Of a shape far below 1, x takes the error of the smaller share many times.
        let small = if a.min(b) < 0.1 { 2e-14 / ln_density.exp() / x } else { 0.0 };
        near(back, x, 1e-12 + 1e-15 * unit + small, &line);
    }
    // Shapes at the ends of f64 give a value, and end.
    for (a, b) in [(1e-300, 1e-300), (1e300, 1e300), (1e-300, 1e300), (1e12, 3.0), (1e10, 1e10)] {
        for share in [1e-300, 0.3, 0.999] {
            let x = Beta::new(a, b).quantile(Side::Below(f64::ln(share)));
            assert!((0.0..=1.0).contains(&x), "{a} {b} {share}: {x}");
        }
    }
    let middle = Beta::new(1e10, 1e10).quantile(Side::Below(-std::f64::consts::LN_2));
    assert!((middle - 0.5).abs() < 1e-12, "{middle}");
}

#[test]
fn student_quantiles() {
    for line in numbers("student") {
        // What is above 1 − 1e-9 is no longer told by the share below.
        if line[2] > 1e-9 {
            near(student::quantile(line[0], 1.0 - line[2]), line[1], 1e-12 + 4e-16 / line[2] / line[1], &line);
        }
        near(student::quantile(line[0], line[2]), -line[1], 2e-12 + 4e-16 / line[1], &line);
    }
    assert!(student::quantile(0.0, 0.975).is_nan() && student::quantile(f64::NAN, 0.975).is_nan());
    near(student::quantile(1e12, 0.975), normal::quantile(0.975), 1e-9, &"many");
}

/// The value below which shares lie, from sixteen Latin hypercubes of a thousand points.
fn check(parameter: &str, expected: &[(f64, f64)]) {
    let mut values = drawn(parameter, Sampling::Latin, 16 * 1000);
    values.sort_by(f64::total_cmp);
    for &(share, value) in expected {
        let at = (share * values.len() as f64) as usize;
        // Each thousandth of a share has sixteen values.
        let (low, high) = (values[at.saturating_sub(16)], values[(at + 16).min(values.len() - 1)]);
        assert!(low <= value && value <= high, "{parameter} at {share}: {low} to {high}, not {value}");
    }
}

/// Closed forms, with the normal quantile 1.2815515655446004 of 0.9.
#[test]
fn parameters_follow_their_distributions() {
    let z = 1.281_551_565_544_600_4;
    check("{value: 5, draw: {normal: {sd: 2}}}", &[(0.1, 5.0 - 2.0 * z), (0.5, 5.0), (0.9, 5.0 + 2.0 * z)]);
    let s = 1.25f64.ln().sqrt();
    check(
        "{value: 3, draw: {lognormal: {cv: 0.5}}}",
        &[(0.1, 3.0 * (-s * z).exp()), (0.5, 3.0), (0.9, 3.0 * (s * z).exp())],
    );
    check("{value: 3, range: [2, 6]}", &[(0.25, 3.0), (0.5, 4.0), (0.75, 5.0)]);
    check("{value: 3, range: [-2, 6], min: 2}", &[(0.25, 3.0), (0.5, 4.0), (0.75, 5.0)]);
    // The triangle over 0 to 4 with its peak at 1: below x ≤ 1 lies x²/4, above x ≥ 1 (4 − x)²/12.
    let triangle = "{value: 1, range: [0, 4], draw: {triangular: {}}";
    check(&format!("{triangle}}}"), &[(0.16, 0.8), (0.25, 1.0), (1.0 - 4.0 / 12.0, 2.0), (1.0 - 1.0 / 12.0, 3.0)]);
    check(&format!("{triangle}, max: 2}}"), &[(0.16 * 1.5, 0.8), (0.25 * 1.5, 1.0)]);
    check("{value: 4, range: [0, 4], draw: {triangular: {}}}", &[(0.25, 2.0)]);
    check("{value: 0, range: [0, 4], draw: {triangular: {}}}", &[(0.75, 2.0)]);
    // Beta of 2 and 1: below x lies x². Of ½ and ½: the arcsine law.
    check("{value: 1, range: [0, 4], draw: {beta: {a: 2, b: 1}}}", &[(0.25, 2.0), (0.81, 3.6)]);
    check("{value: 1, range: [0, 4], draw: {beta: {a: 0.5, b: 0.5}}}", &[(0.5, 2.0), (2.0 / 3.0, 3.0)]);
    check("{value: 4, range: [0, 4], min: 2, draw: {beta: {a: 2, b: 1}}}", &[(11.0 / 25.0, 4.0 * 0.58f64.sqrt())]);
    // Half of a normal distribution: 0.9 of it lie below the normal quantile of 0.95.
    check("{value: 0, min: 0, draw: {normal: {sd: 2}}}", &[(0.9, 2.0 * 1.644_853_626_951_472_7)]);
    check("{value: 0, max: 0, draw: {normal: {sd: 2}}}", &[(0.1, -2.0 * 1.644_853_626_951_472_7)]);
    check("{value: 1, max: 1, draw: {lognormal: {cv: 0.5}}}", &[(0.1, (-s * 1.644_853_626_951_472_7).exp())]);
}

/// What is left of a distribution far out, where its share is 1e-498 or less, falls like a power of the distance from 1.
#[test]
fn what_limits_leave_far_out_is_spread() {
    let check = |parameter: &str, low: f64, half: f64, high: f64| {
        let mut values = drawn(parameter, Sampling::Sobol, 4096);
        values.sort_by(f64::total_cmp);
        assert!(values[0] >= low && values[4095] <= high, "{parameter}: {} to {}", values[0], values[4095]);
        let distance = (values[2048] - low) / (half - low);
        assert!((distance - 1.0).abs() < 0.02, "{parameter}: {}", values[2048]);
        values.dedup();
        assert!(values.len() > 4000, "{parameter}: {} values", values.len());
    };
    // Beta of 2 and 500 over 0 to 1 above 0.9: (1 − x)^499 x, with nearly all below 0.92.
    let half = 0.9 + 0.1 * (1.0 - 0.5f64.powf(1.0 / 500.0));
    check("{value: 0.95, range: [0, 1], min: 0.9, draw: {beta: {a: 2, b: 500}}}", 0.9, half, 1.0);
    let half = 0.99 + 0.01 * (1.0 - 0.5f64.powf(1.0 / 5000.0));
    check("{value: 0.995, range: [0, 1], min: 0.99, draw: {beta: {a: 2, b: 5000}}}", 0.99, half, 1.0);
    // A triangle of which the last hundredth is left: half of it lies below 1 − 0.01/√2.
    let half = 1.0 - 0.01 / 2f64.sqrt();
    check("{value: 0.99, range: [0, 1], min: 0.99, draw: {triangular: {}}}", 0.99, half, 1.0);
    // One value alone.
    for value in drawn("{value: 2, min: 2, max: 2, draw: {normal: {sd: 1}}}", Sampling::Latin, 10) {
        assert_eq!(value, 2.0);
    }
}

/// Whatever the file says, a draw is a number within its limits.
#[test]
fn draws_are_finite_and_within_their_limits() {
    let cases = [
        ("{value: 1, draw: {lognormal: {cv: 1e300}}}", f64::MIN, f64::MAX),
        ("{value: 1e308, draw: {normal: {sd: 1e308}}}", f64::MIN, f64::MAX),
        ("{value: 0, range: [-1.7e308, 1.7e308]}", -1.7e308, 1.7e308),
        ("{value: 0, range: [-1.7e308, 1.7e308], draw: {triangular: {}}}", -1.7e308, 1.7e308),
        ("{value: 0, range: [-1.7e308, 1.7e308], draw: {beta: {a: 1e-300, b: 1e300}}}", -1.7e308, 1.7e308),
        ("{value: 0, min: 0, max: 1e-300, draw: {normal: {sd: 1}}}", 0.0, 1e-300),
        ("{value: 1, min: 1, max: 1.0000000000000002, draw: {lognormal: {cv: 0.2}}}", 1.0, 1.000_000_000_000_000_3),
        ("{value: 1e300, min: 1e-300, draw: {lognormal: {cv: 1e-8}}}", 1e-300, f64::MAX),
    ];
    for (parameter, low, high) in cases {
        for sampling in [Sampling::Random, Sampling::Latin, Sampling::Sobol] {
            for value in drawn(parameter, sampling, 200) {
                assert!((low..=high).contains(&value), "{parameter}: {value}");
            }
        }
    }
}
