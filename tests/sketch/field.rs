//! The sketch against results by hand: directions of linear systems, zero growth in closed form, straight paths, divides.
#![allow(clippy::unwrap_used, clippy::panic, reason = "a test fails by panicking")]

use crate::sketch_support::{Loaded, Seen, USUAL, linear, loaded, shipped};
use restpoint::analysis::field::{CELL_ASPECT, Flow, Frame, Held, Octant, Slice, Straight, Window, nearest, straight};
use restpoint::report::kinds::KINDS;
use restpoint::report::sketch::{Growth, Mark, Picture, Size, Style, spacing};

/// dx/dt = a (x − 5) + b (y − 5), dy/dt = c (x − 5) + d (y − 5).
fn linear_model([a, b, c, d]: [f64; 4]) -> Loaded {
    loaded(&format!(
        "title: linear\ntime: yr\nspecies: {{x: {{upper: 10}}, y: {{upper: 10}}}}\nparameters: {{a: {a}, b: {b}, c: {c}, d: {d}}}\n\
         change: {{x: a*(x - 5) + b*(y - 5), y: c*(x - 5) + d*(y - 5)}}\n"
    ))
}

const WHOLE: Window = Window { x: [0.0, 10.0], y: [0.0, 10.0] };

fn seen(columns: usize, rows: usize) -> Seen {
    Seen { window: Some(WHOLE), size: Size { columns, rows }, ..USUAL }
}

/// The octant of an angle in degrees, against the clock from the right.
fn octant(degrees: f64) -> Octant {
    let (sin, cos) = degrees.to_radians().sin_cos();
    Octant::of([cos, sin]).unwrap()
}

#[test]
fn directions_have_the_exact_angle() {
    let node = [-1.0, 0.0, 0.0, -2.0];
    let saddle = [1.0, 0.0, 0.0, -1.0];
    let centre = [0.0, 1.0, -1.0, 0.0];
    let spiral = [-0.3, 2.0, -1.0, 0.2];
    for matrix @ [a, b, c, d] in [node, saddle, centre, spiral] {
        for (columns, rows) in [(40, 20), (80, 24), (131, 50)] {
            let canvas = linear_model(matrix).canvas(seen(columns, rows), Style::Unicode);
            let mut arrows = 0;
            for row in 0..canvas.rows {
                for column in (0..canvas.columns).step_by(spacing(Style::Unicode)) {
                    let Mark::Flow(drawn, 0) = canvas.at(column, row) else { continue };
                    let (across, up) = ((canvas.columns - 1) as f64 / 10.0, (canvas.rows - 1) as f64 / 10.0);
                    let (x, y) = (column as f64 / across - 5.0, row as f64 / up - 5.0);
                    let seen = [(a * x + b * y) * across, (c * x + d * y) * up * CELL_ASPECT];
                    let angle = seen[1].atan2(seen[0]).to_degrees();
                    let off = (angle / 45.0 - drawn.index() as f64).rem_euclid(8.0);
                    assert!(off.min(8.0 - off) < 0.5 + 1e-6, "{matrix:?} at {column}, {row}: {angle}, {drawn:?}");
                    arrows += 1;
                }
            }
            assert!(arrows * 3 > canvas.columns * canvas.rows / 2, "{arrows} of {}", canvas.columns * canvas.rows);
        }
    }
}

#[test]
fn what_an_eye_expects_of_a_saddle_and_a_centre() {
    let check = |matrix, cells: [([usize; 2], f64); 4]| {
        let canvas = linear_model(matrix).canvas(seen(79, 24), Style::Unicode);
        for ([column, row], degrees) in cells {
            assert_eq!(canvas.at(column, row), Mark::Flow(octant(degrees), 0), "{column}, {row}");
        }
    };
    // Corners are (±5, ±5) from the middle; a plot of 71 x 20 cells has steps of 70/10 and 2 · 19/10 columns a unit.
    let corners = [[0, 0], [70, 0], [0, 19], [70, 19]];
    let with = |angles: [f64; 4]| std::array::from_fn(|k| (corners[k], angles[k]));
    check([1.0, 0.0, 0.0, -1.0], with([135.0 + 20.0, 45.0 - 20.0, 225.0 - 20.0, 315.0 + 20.0]));
    check([0.0, 1.0, -1.0, 0.0], with([135.0 + 20.0, 225.0 - 20.0, 45.0 - 20.0, 315.0 + 20.0]));
}

/// Cells of one curve, against the rows or columns that the closed form passes within half a cell of.
fn check_curve(model: &Loaded, seen: Seen, axis: Growth, y_of: impl Fn(f64) -> f64) {
    let canvas = model.canvas(seen, Style::Unicode);
    let window = seen.window.unwrap();
    let frame = Frame::new(window, canvas.columns, canvas.rows);
    let of = |row: f64| frame.place([0.0, row])[1];
    let mut marked = 0;
    for row in 0..canvas.rows {
        for column in 0..canvas.columns {
            let Mark::Growth(growth) = canvas.at(column, row) else { continue };
            if growth != axis && growth != Growth::Both {
                continue;
            }
            marked += 1;
            // Along the cell's two middle lines the curve passes between their ends.
            let at = |shift: f64| of(y_of(frame.x((column as f64 + shift).clamp(0.0, (frame.columns - 1) as f64))));
            let upright = (at(0.0) - row as f64).abs() <= 0.5 + 1e-9;
            let level = (at(-0.5) - row as f64) * (at(0.5) - row as f64) <= 1e-9;
            assert!(upright || level, "{axis:?} at {column}, {row}: {} in the middle", at(0.0));
        }
    }
    // And none is left out: every column whose middle the curve crosses inside the window has a mark, or what hides it.
    for column in 0..canvas.columns {
        let place = of(y_of(frame.x(column as f64)));
        let row = place.round();
        if (place - row).abs() < 0.499 && (0.0..(canvas.rows - 1) as f64).contains(&place) {
            let mark = canvas.at(column, nearest(row, canvas.rows));
            assert!(!matches!(mark, Mark::Blank | Mark::Flow(..)), "{axis:?} misses {column}, {row}: {mark:?}");
        }
    }
    assert!(2 * marked >= canvas.rows, "{marked} cells of {axis:?}");
}

#[test]
fn zero_growth_is_where_the_closed_form_has_it() {
    // Lotka-Volterra competition: straight lines.
    let lines = loaded(
        "title: lines\ntime: yr\nspecies: {x: {upper: 20}, y: {upper: 20}}\nparameters: {a: 0.5, b: 0.7}\n\
         change: {x: x*(9 - x - a*y), y: 2*y*(8 - y - b*x)}\n",
    );
    // Rosenzweig-MacArthur: a parabola, and an upright line where r(1 - x/K)(1 + hx) = ay and x = m/(e - mh).
    let parabola = loaded(
        "title: parabola\ntime: yr\nspecies: {x: {upper: 100}, y: {upper: 100}}\nparameters: {h: 0.1}\n\
         change: {x: x*(1 - x/10) - x*y/(1 + h*x), y: 0.5*x*y/(1 + h*x) - 1.1*y}\n",
    );
    for (columns, rows) in [(20, 8), (50, 12), (80, 24), (200, 60)] {
        let window = |x: f64, y: f64| Seen {
            window: Some(Window { x: [0.0, x], y: [0.0, y] }),
            size: Size { columns, rows },
            ..USUAL
        };
        check_curve(&lines, window(12.0, 17.0), Growth::Across, |x| (9.0 - x) / 0.5);
        check_curve(&lines, window(12.0, 17.0), Growth::Upwards, |x| 8.0 - 0.7 * x);
        check_curve(&parabola, window(11.0, 1.5), Growth::Across, |x| (1.0 - x / 10.0) * (1.0 + 0.1 * x));
    }
    // x = 1.1/(0.5 − 0.11)
    let canvas =
        parabola.canvas(Seen { window: Some(Window { x: [0.0, 11.0], y: [0.0, 1.5] }), ..USUAL }, Style::Unicode);
    let column = nearest(1.1 / 0.39 / 11.0 * (canvas.columns - 1) as f64, canvas.columns);
    for row in 0..canvas.rows {
        let marks: Vec<usize> = (0..canvas.columns)
            .filter(|&c| matches!(canvas.at(c, row), Mark::Growth(Growth::Upwards | Growth::Both)))
            .collect();
        let hidden = !matches!(canvas.at(column, row), Mark::Blank | Mark::Flow(..));
        assert!(marks == [column] || (marks.is_empty() && hidden), "row {row}: {marks:?}, not {column}");
    }
}

#[test]
fn a_jump_of_growth_from_sign_to_sign_is_no_curve() {
    // The growth of x jumps from −∞ to ∞ at 4, goes through 0 at 7, and no row but that of y has other zeros.
    let model = loaded(
        "title: pole\ntime: yr\nspecies: {x: {upper: 10}, y: {upper: 10}}\nparameters: {p: 4}\n\
         change: {x: x*(7 - x)/(x - p), y: 1}\n",
    );
    let mut subject = model.subject(0);
    let slice = Slice { x: 0, y: Some(1), held: vec![0.0; 2], from: Held::Nothing };
    let flow = Flow::new(&mut subject, slice);
    for columns in [11, 21, 64, 72, 199] {
        let frame = Frame::new(WHOLE, columns, 9);
        let cells = flow.zero_growth(0, &frame);
        let expected = nearest(0.7 * (columns - 1) as f64, columns);
        let found: Vec<usize> = (0..columns).filter(|&column| cells[4 * columns + column]).collect();
        let near = found.iter().all(|&column| column.abs_diff(expected) <= 1);
        assert!(!found.is_empty() && near, "{columns} columns: {found:?}, not {expected}");
        assert!(flow.zero_growth(1, &frame).iter().all(|&is_zero| !is_zero));
    }
}

#[test]
fn straight_paths_are_the_eigenvectors() {
    let slice = Slice { x: 0, y: Some(1), held: vec![0.0; 2], from: Held::Nothing };
    let check = |matrix: [f64; 4], is_map: bool, expected: &[([f64; 2], bool)]| {
        let lines = straight(&linear(matrix, is_map), &slice, is_map);
        assert_eq!(lines.len(), expected.len(), "{matrix:?}: {lines:?}");
        for ([x, y], approaches) in expected {
            let same = |line: &&Straight| {
                (line.along[0] * y - line.along[1] * x).abs() < 1e-12 && line.approaches == *approaches
            };
            assert!(lines.iter().any(|line| same(&line)), "{matrix:?}: {lines:?}");
        }
    };
    // By hand: [[1, 3], [2, 0]] has 3 along (3, 2) and −2 along (1, −1).
    check([1.0, 3.0, 2.0, 0.0], false, &[([3.0, 2.0], false), ([1.0, -1.0], true)]);
    check([-1.0, 0.0, 0.0, -2.0], false, &[([1.0, 0.0], true), ([0.0, 1.0], true)]);
    check([1.0, 0.0, 4.0, 3.0], false, &[([1.0, -2.0], false), ([0.0, 1.0], false)]);
    check([0.0, 1.0, -1.0, 0.0], false, &[]);
    check([-1.0, 1.0, -1.0, -1.0], false, &[]);
    check([0.5, 0.0, 0.0, 2.0], true, &[([1.0, 0.0], true), ([0.0, 1.0], false)]);
    check([-0.5, 0.0, 0.0, -0.2], true, &[([1.0, 0.0], true), ([0.0, 1.0], true)]);
}

#[test]
fn what_leads_into_a_saddle_divides_the_paths() {
    // Equal rivals that exclude each other: by symmetry the line y = x leads into the saddle at (5, 5).
    let symmetric = loaded(
        "title: rivals\ntime: yr\nspecies: {x: {upper: 20}, y: {upper: 20}}\nparameters: {a: 2}\n\
         change: {x: x*(15 - x - a*y), y: y*(15 - y - a*x)}\n",
    );
    let on_the_diagonal = |picture: &Picture| {
        let Picture::Plane(portrait) = picture else { panic!("two species make a plane") };
        assert_eq!(portrait.divides.len(), 2, "both sides of the one saddle that is on no axis");
        for point in portrait.divides.iter().flatten() {
            assert!((point[0] - point[1]).abs() < 1e-6, "{point:?}");
        }
        let sums = portrait.divides.iter().flatten().map(|point| point[0] + point[1]);
        let (low, high) = sums.fold((f64::MAX, f64::MIN), |(low, high), sum| (low.min(sum), high.max(sum)));
        assert!(low < 1.0 && high > 25.0, "from the repelling origin to the window's corner: {low} to {high}");
    };
    symmetric.with(Seen { window: Some(Window { x: [0.0, 16.0], y: [0.0, 16.0] }), ..USUAL }, |_, picture| {
        on_the_diagonal(picture);
    });
    // Fixed quota: by a step of one column to either side of the line, paths go to different states.
    let bank = shipped("skarnby-bank");
    bank.with(Seen { scenario: 3, ..USUAL }, |_, picture| {
        let Picture::Plane(portrait) = picture else { panic!("two species make a plane") };
        let mut seen = 0;
        for &[p, d] in portrait.divides.iter().flatten() {
            let off = 2.0 * (portrait.frame.x(1.0) - portrait.frame.x(0.0));
            if d > 10.0 && d < 80.0 {
                assert!(!plaice_last([p - off, d]) && plaice_last([p + off, d]), "{p}, {d}");
                seen += 1;
            }
        }
        assert!(seen > 10, "{seen} points");
    });
}

/// Whether plaice are left after 200 years of Skarnby bank's third plan, by small steps along the equations written out.
fn plaice_last([mut p, mut d]: [f64; 2]) -> bool {
    for _ in 0..200_000 {
        let growth = 0.35 * p * (1.0 - (p + 0.5 * d) / 220.0) - 11.0;
        let dab = 0.8 * d * (1.0 - (d + 0.4 * p) / 160.0) - 0.2 * d;
        (p, d) = (p + 0.001 * growth, d + 0.001 * dab);
        if p <= 0.0 {
            return false;
        }
    }
    true
}

#[test]
fn each_kind_is_drawn_as_the_table_has_it() {
    for (matrix, kind) in [
        ([-1.0, 0.0, 0.0, -2.0], "stable node"),
        ([1.0, 0.0, 0.0, 2.0], "unstable node"),
        ([-1.0, 2.0, -2.0, -1.0], "stable spiral"),
        ([1.0, 2.0, -2.0, 1.0], "unstable spiral"),
        ([1.0, 0.0, 0.0, -2.0], "saddle"),
        ([0.0, 1.0, -1.0, 0.0], "centre"),
    ] {
        let look = KINDS.iter().find(|look| look.word == kind).unwrap();
        for (style, glyph) in [(Style::Unicode, look.glyph), (Style::Ascii, look.ascii)] {
            let model = linear_model(matrix);
            let canvas = model.canvas(seen(79, 25), style);
            assert_eq!(canvas.at(35, 10), Mark::State(*look), "{kind}");
            let text = model.text(seen(79, 25), style);
            let spiral = if look.spirals { '~' } else { ' ' };
            assert!(
                text.contains(&format!("\n  {glyph}{spiral}  E1: x = 5.000, y = 5.000, proved; {kind}, proved\n")),
                "{text}"
            );
        }
    }
}
