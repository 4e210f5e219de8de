//! The closest edge in all parameters together, against closed forms.

use restpoint::analysis::response::{ClosestEdge, ThresholdKind};

use crate::margins::of;

/// The stationary point of ½(a² + b² + c²) on (r + w_r a)(K + w_K b)/4 = Q + w_Q c, by Newton's method on Lagrange's
/// conditions: distances in widths, and the values of r, K and Q.
fn quota_by_lagrange([r, k, q]: [f64; 3], [wr, wk, wq]: [f64; 3]) -> (f64, [f64; 3]) {
    let mut u = [0.0, 0.0, 0.0, -1e-3];
    for _ in 0..60 {
        let [a, b, c, l] = u;
        let (x, y) = (r + wr * a, k + wk * b);
        let f = [a + l * wr * y / 4.0, b + l * wk * x / 4.0, c - l * wq, x * y / 4.0 - q - wq * c];
        let cross = l * wr * wk / 4.0;
        let jacobian = [
            [1.0, cross, 0.0, wr * y / 4.0],
            [cross, 1.0, 0.0, wk * x / 4.0],
            [0.0, 0.0, 1.0, -wq],
            [wr * y / 4.0, wk * x / 4.0, -wq, 0.0],
        ];
        let step = gauss(jacobian, f);
        (0..4).for_each(|i| u[i] -= step[i]);
    }
    let [a, b, c, _] = u;
    ((a * a + b * b + c * c).sqrt(), [r + wr * a, k + wk * b, q + wq * c])
}

fn gauss(mut a: [[f64; 4]; 4], mut b: [f64; 4]) -> [f64; 4] {
    for k in 0..4 {
        let pivot = (k..4).max_by(|&i, &j| a[i][k].abs().total_cmp(&a[j][k].abs())).unwrap();
        a.swap(k, pivot);
        b.swap(k, pivot);
        for i in k + 1..4 {
            let factor = a[i][k] / a[k][k];
            (k..4).for_each(|j| a[i][j] -= factor * a[k][j]);
            b[i] -= factor * b[k];
        }
    }
    for k in (0..4).rev() {
        let known: f64 = (k + 1..4).map(|j| a[k][j] * b[j]).sum();
        b[k] = (b[k] - known) / a[k][k];
    }
    b
}

fn closest(text: &str) -> (ClosestEdge, usize) {
    of(text).1.closest.unwrap_or_else(|| panic!("no edge\n{text}"))
}

fn is_close(found: f64, expected: f64, relative: f64) -> bool {
    (found - expected).abs() <= relative * expected.abs()
}

/// N' = r N (1 − N/K) − Q, lost on Q = r K/4 (Clark 1990; Dobson 1993 for the method).
#[test]
fn a_quota_in_growth_capacity_and_quota() {
    let check = |unit: f64, [r, k, q]: [f64; 3], ranges: [[f64; 2]; 3], is_within: bool| {
        let text = format!(
            "title: t\ntime: yr\nspecies: {{N: {{upper: {}}}}}\nparameters:\n  r: {{value: {r}, range: {:?}}}\n  \
             K: {{value: {}, range: [{}, {}]}}\n  Q: {{value: {}, range: [{}, {}]}}\nchange: {{N: r*N*(1 - N/K) - Q}}\n",
            4.0 * k * unit,
            ranges[0],
            k * unit,
            ranges[1][0] * unit,
            ranges[1][1] * unit,
            q * unit,
            ranges[2][0] * unit,
            ranges[2][1] * unit,
        );
        let (distance, values) = quota_by_lagrange([r, k, q], ranges.map(|range| range[1] - range[0]));
        let (edge, starts) = closest(&text);
        assert!(is_close(edge.distance, distance, 1e-8), "{edge:?}, not {distance} at {values:?}");
        for ((_, found), (expected, unit)) in edge.values.iter().zip(values.iter().zip([1.0, unit, unit])) {
            assert!(is_close(*found, expected * unit, 1e-8), "{edge:?}, not {values:?}");
        }
        assert!(is_close(edge.state[0], values[1] * unit / 2.0, 1e-8), "{edge:?}");
        assert!(edge.residual <= 1e-10 && starts >= 2, "{edge:?} from {starts}");
        assert_eq!((edge.kind, edge.within_ranges), (ThresholdKind::Fold, is_within), "{edge:?}");
    };
    // In thousands, in ones and in billionths: units change nothing.
    for unit in [1.0, 1e3, 1e-6] {
        check(unit, [0.5, 1000.0, 60.0], [[0.3, 0.7], [600.0, 1400.0], [0.0, 200.0]], true);
        check(unit, [0.5, 1000.0, 30.0], [[0.45, 0.55], [200.0, 1800.0], [0.0, 80.0]], true);
    }
    // Narrow ranges, none of which reaches the edge.
    check(1.0, [0.5, 1000.0, 60.0], [[0.45, 0.6], [900.0, 1100.0], [50.0, 80.0]], false);
}

/// Two stocks, each with a quota and a share of the other's: lost where P + Q/2 = 1/4 or P/4 + Q = 1/4, two planes.
#[test]
fn the_nearer_of_two_surfaces() {
    let check = |p: f64, q: f64| {
        let text = format!(
            "title: t\ntime: yr\nspecies: {{x: {{upper: 2}}, y: {{upper: 2}}}}\nparameters:\n  \
             P: {{value: {p}, range: [0, 0.4]}}\n  Q: {{value: {q}, range: [0, 0.5]}}\n\
             change: {{x: x*(1 - x) - P - Q/2, y: y*(1 - y) - Q - P/4}}\n"
        );
        let to_plane = |a: f64, b: f64| (0.25 - a * p - b * q) / (0.4 * a).hypot(0.5 * b);
        let distance = to_plane(1.0, 0.5).min(to_plane(0.25, 1.0));
        let (edge, _) = closest(&text);
        assert!(is_close(edge.distance, distance, 1e-9) && edge.residual <= 1e-10, "{edge:?}, not {distance}");
    };
    check(0.1, 0.02);
    check(0.02, 0.1);
    check(0.12, 0.11);
}

/// Rosenzweig & MacArthur (1963) in K and h: cycles set in on K = 2 x* + 1/(a h), x* = m/(a (e − m h)). The distance by
/// golden section along that curve.
#[test]
fn cycles_are_the_closest_edge() {
    let text = "title: t\ntime: yr\nspecies: {P: {upper: 50}, C: {upper: 50}}\nparameters:\n  \
        h: {value: 0.5, range: [0.3, 0.9]}\n  K: {value: 4.4, range: [3, 6]}\n\
        shorthand: {eaten: 0.8*P/(1 + 0.8*h*P)}\nchange: {P: P*(1 - P/K) - eaten*C, C: 0.6*eaten*C - 0.4*C}\n";
    let square = |h: f64| {
        let k = 0.8 / (0.8 * (0.6 - 0.4 * h)) + 1.0 / (0.8 * h);
        ((h - 0.5) / 0.6).powi(2) + ((k - 4.4) / 3.0).powi(2)
    };
    let (mut low, mut high) = (0.4, 0.8);
    for _ in 0..200 {
        let (a, b) = (high - 0.618 * (high - low), low + 0.618 * (high - low));
        if square(a) < square(b) { high = b } else { low = a }
    }
    let (edge, starts) = closest(text);
    assert_eq!(edge.kind, ThresholdKind::Hopf);
    assert!(is_close(edge.distance, square(low).sqrt(), 1e-9), "{edge:?} for {}", square(low).sqrt());
    assert!(edge.residual <= 1e-10 && starts >= 2, "{edge:?} from {starts}");
}

/// One parameter: the closest edge is the nearer end of its band. N' = N (r − N) − 0.1 c N: lost at c = 10 r.
#[test]
fn one_parameter_alone() {
    let text = "title: t\ntime: yr\nspecies: {N: {upper: 9}}\nparameters: {c: {value: 4, range: [0, 12]}}\n\
        change: {N: N*(1 - N) - 0.1*c*N}\n";
    let (edge, starts) = closest(text);
    assert!(is_close(edge.distance, 0.5, 1e-12) && is_close(edge.values[0].1, 10.0, 1e-12), "{edge:?}");
    assert_eq!((edge.kind, starts, edge.within_ranges), (ThresholdKind::Transcritical, 1, true));
    // Nothing takes the state away.
    let text = "title: t\ntime: yr\nspecies: {N: {upper: 9}}\nparameters: {c: {value: 4, range: [3, 4.5]}}\n\
        change: {N: 1 + exp(c) - N*exp(c)}\n";
    assert_eq!(of(text).1.closest, None);
}
