//! The lines that divide paths, where they are known in closed form, at every zoom and on either kind of axis: each point
//! within a cell of the line, and no part of the line missing.
#![allow(clippy::unwrap_used, clippy::panic, reason = "a test fails by panicking")]

use crate::sketch_support::{Loaded, Seen, USUAL, loaded};
use restpoint::analysis::field::{Frame, LINEAR, Portrait, Scale, Window};
use restpoint::report::sketch::{Picture, Size};

/// A line as the zeros of a function, and points on it.
struct Known {
    model: Loaded,
    /// The function and its two derivatives.
    line: fn([f64; 2]) -> (f64, [f64; 2]),
    /// Points on the line, near and far from its saddle, first the saddle.
    points: Vec<[f64; 2]>,
}

/// Equal rivals that exclude each other: by symmetry y = x leads into the saddle at (5, 5).
fn rivals() -> Known {
    let model = loaded(
        "title: rivals\ntime: yr\nspecies: {x: {upper: 20}, y: {upper: 20}}\n\
         change: {x: x*(15 - x - 2*y), y: y*(15 - y - 2*x)}\n",
    );
    Known { model, line: |[x, y]| (y - x, [-1.0, 1.0]), points: [5.0, 0.01, 2.0, 5.002, 12.0].map(|x| [x, x]).to_vec() }
}

/// Lotka-Volterra competition with like growth r: d ln(y/x)/dt = r ((1 − b) x/1000 + (a − 1) y/3), which is 0 on a ray.
fn ray() -> Known {
    let model = loaded(
        "title: ray\ntime: yr\nspecies: {x: {upper: 1500}, y: {upper: 5}}\n\
         change: {x: 0.7*x*(1 - x/1000 - 2*y/3), y: 0.7*y*(1 - 3*x/1000 - y/3)}\n",
    );
    // The saddle: x/1000 + 2 (2 x/1000) = 1.
    let on = |x: f64| [x, 0.006 * x];
    Known {
        model,
        line: |[x, y]| (y - 0.006 * x, [-0.006, 1.0]),
        points: [200.0, 3.0, 120.0, 199.9, 600.0].map(on).to_vec(),
    }
}

/// x = 5 + 3 u, y = 5 + 3 v with u' = v, v' = u − u³: the saddle u = v = 0 and its loops, v² = u² − u⁴/2.
fn loops() -> Known {
    let model = loaded(
        "title: loops\ntime: yr\nspecies: {x: {upper: 10}, y: {upper: 10}}\n\
         change: {x: y - 5, y: x - 5 - 3*((x - 5)/3)^3}\n",
    );
    let on = |u: f64, sign: f64| [5.0 + 3.0 * u, 5.0 + sign * 3.0 * (u * u - u.powi(4) / 2.0).sqrt()];
    Known {
        model,
        line: |[x, y]| {
            let (u, v) = ((x - 5.0) / 3.0, (y - 5.0) / 3.0);
            (v * v - u * u + u.powi(4) / 2.0, [(2.0 * u.powi(3) - 2.0 * u) / 3.0, 2.0 * v / 3.0])
        },
        points: vec![[5.0, 5.0], on(1.0, -1.0), on(-0.8, 1.0), on(1e-3, -1.0), on(1.4, 1.0)],
    }
}

fn portrait(known: &Known, window: Window, scales: [Scale; 2], size: Size) -> Portrait {
    known.model.with(Seen { window: Some(window), scales, size, ..USUAL }, |_, picture| {
        let Picture::Plane(portrait) = picture else { panic!("two species make a plane") };
        portrait.clone()
    })
}

/// How many cells a point is off the line, by the function over its slope.
fn cells_off(known: &Known, frame: &Frame, point: [f64; 2]) -> f64 {
    let (value, slopes) = (known.line)(point);
    let [across, up] = frame.stretch(point);
    let slope = (slopes[0] / across).hypot(2.0 * slopes[1] / up);
    if value == 0.0 { 0.0 } else { (value / slope).abs() }
}

fn check(known: &Known, window: Window, scales: [Scale; 2], size: Size, on: [f64; 2]) {
    let portrait = portrait(known, window, scales, size);
    let frame = &portrait.frame;
    let points = || portrait.divides.iter().flatten();
    for &point in points() {
        assert!(window.holds(point), "{point:?} in {window:?}");
        let off = cells_off(known, frame, point);
        assert!(off < 0.5, "{scales:?} {size:?} {window:?}: {point:?} is {off} cells off");
    }
    // The line goes through the point that the window is around.
    let [column, row] = frame.place(on);
    let near = points().any(|&point| {
        let [c, r] = frame.place(point);
        (c - column).abs() <= 1.0 && (r - row).abs() <= 1.0
    });
    assert!(near, "{scales:?} {size:?} {window:?}: nothing at {on:?}");
    for line in &portrait.divides {
        for pair in line.windows(2) {
            assert!(frame.apart(pair[0], pair[1]) <= 0.51, "a gap from {:?} to {:?}", pair[0], pair[1]);
        }
    }
}

const SIZES: [Size; 2] = [Size { columns: 28, rows: 12 }, Size { columns: 108, rows: 49 }];

#[test]
fn every_zoom_of_linear_axes_shows_the_line_to_a_cell() {
    for known in [rivals(), ray(), loops()] {
        for &[x, y] in &known.points {
            for power in 0..=7 {
                let share = 0.9 * 10f64.powi(-power);
                let window =
                    Window { x: [x - share * x, x + share * x], y: [y - 0.7 * share * y, y + 1.1 * share * y] };
                for size in SIZES {
                    check(&known, window, LINEAR, size, [x, y]);
                }
            }
        }
    }
}

#[test]
fn every_zoom_of_logarithmic_axes_shows_the_line_to_a_cell() {
    let logarithmic = Scale::Logarithmic;
    for known in [rivals(), ray(), loops()] {
        for &[x, y] in &known.points {
            for factor in [1e4, 30.0, 2.0, 1.1, 1.0 + 1e-3, 1.0 + 1e-6] {
                let window = Window { x: [x / factor, x * factor], y: [y / factor, y * factor] };
                for scales in [[logarithmic; 2], [Scale::Linear, logarithmic], [logarithmic, Scale::Linear]] {
                    check(&known, window, scales, SIZES[1], [x, y]);
                }
            }
        }
    }
}

#[test]
fn a_line_runs_from_side_to_side_of_the_window() {
    // All rows and columns that y = x crosses have a point of it, wherever the window is.
    let known = rivals();
    for [low, high] in [[0.5, 16.0], [5.5, 9.0], [1.0, 1.01], [14.0, 14.000_001]] {
        let window = Window { x: [low, high], y: [low, high] };
        for scales in [LINEAR, [Scale::Logarithmic; 2]] {
            let portrait = portrait(&known, window, scales, SIZES[1]);
            let columns = portrait.divides.iter().flatten().filter_map(|&point| portrait.frame.cell(point));
            let mut columns: Vec<usize> = columns.map(|cell| cell[0]).collect();
            columns.sort_unstable();
            columns.dedup();
            assert_eq!(columns.len(), portrait.frame.columns, "{low} to {high}, {scales:?}: {columns:?}");
        }
    }
}
