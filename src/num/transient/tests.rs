//! Peaks with closed forms, and what has none.

use super::*;

fn check(found: Option<Peak>, factor: f64, time: f64) {
    let found = found.expect("stable");
    let near = |x: f64, y: f64, relative: f64| (x - y).abs() <= relative * y.abs();
    assert!(near(found.factor, factor, 2.0 * RELATIVE), "{found:?}, not {factor} at {time}");
    assert!(near(found.time, time, 1e-7), "{found:?}, not {factor} at {time}");
}

fn flow(a: &[f64], n: usize) -> Option<Peak> {
    flow_peak(a, n, &|| false)
}

fn map(a: &[f64], n: usize) -> Option<Peak> {
    map_peak(a, n, &|| false)
}

#[test]
fn nothing_grows_where_the_symmetric_part_attracts() {
    check(flow(&[-3.0], 1), 1.0, 0.0);
    check(flow(&[-1.0, 1.0, -1.0, -1.0], 2), 1.0, 0.0);
    // Symmetric part just singular.
    check(flow(&[-1.0, 2.0, 0.0, -1.0], 2), 1.0, 0.0);
    check(map(&[0.9], 1), 1.0, 0.0);
    check(map(&[0.0, 1.0, 0.0, 0.0], 2), 1.0, 0.0);
}

/// [[−1, g], [0, −1]]: exp(At) = e^−t [[1, gt], [0, 1]], of norm e^−t (gt/2 + √(1 + g²t²/4)) = e^(asinh(gt/2) − t), so
/// that the slope is 0 where √(1 + g²t²/4) = g/2.
#[test]
fn one_hump_by_hand() {
    for g in [2.5f64, 10.0, 1e3, 1e6] {
        let time = 2.0 / g * (g * g / 4.0 - 1.0).sqrt();
        check(flow(&[-1.0, g, 0.0, -1.0], 2), ((g * time / 2.0).asinh() - time).exp(), time);
        // In other time units.
        check(flow(&[-1e-3, g * 1e-3, 0.0, -1e-3], 2), ((g * time / 2.0).asinh() - time).exp(), time * 1e3);
    }
}

/// Two blocks: the first hump comes early and is the lower one; or the higher one.
#[test]
fn the_higher_of_two_humps() {
    let hump = |g: f64| -> (f64, f64) {
        let time = 2.0 / g * (g * g / 4.0 - 1.0).sqrt();
        (((g * time / 2.0).asinh() - time).exp(), time)
    };
    for (fast, slow) in [(30.0, 31.0), (31.0, 30.0), (40.0, 40.001)] {
        let scale = 1e5;
        let mut a = vec![0.0; 16];
        (a[0], a[1], a[5]) = (-scale, fast * scale, -scale);
        (a[10], a[11], a[15]) = (-0.01, slow * 0.01, -0.01);
        let (factor, time) = hump(f64::max(fast, slow));
        check(flow(&a, 4), factor, if fast > slow { time / scale } else { time * 100.0 });
    }
}

/// [[a, g], [0, a]]: powers a^k [[1, kg/a], [0, 1]].
#[test]
fn maps_by_hand() {
    let (a, g) = (0.9f64, 2.0);
    let norm = |k: f64| a.powf(k) * (k * g / a / 2.0).asinh().exp();
    let k = (1..200).map(f64::from).max_by(|&i, &j| norm(i).total_cmp(&norm(j))).expect("some");
    check(map(&[a, g, 0.0, a], 2), norm(k), k);
}

#[test]
fn what_never_dies_out_has_no_peak() {
    for a in [[1.0, 2.0, 0.0, -1.0], [0.0, 2.0, -1.0, 0.0], [0.0, 1.0, 0.0, 0.0], [f64::NAN, 0.0, 0.0, 0.0]] {
        assert_eq!(flow(&a, 2), None, "{a:?}");
    }
    assert_eq!(map(&[1.0, 1.0, 0.0, 1.0], 2), None);
    assert_eq!(flow_peak(&[-1e-9, 1.0, 0.0, -1e-9], 2, &|| true), None);
}
