//! What is drawn over a sketch, and the drawing as a grid: sizes, selected states, points, paths and the sentences on them.
#![allow(clippy::unwrap_used, clippy::panic, reason = "a test fails by panicking")]

use std::fs;

use crate::sketch_support::{Loaded, Seen, USUAL, loaded, shipped};
use restpoint::analysis::field::{LINEAR, Scale, Slice, Window};
use restpoint::analysis::paths::{Path, follow};
use restpoint::report::grid::{Grid, Ink};
use restpoint::report::sketch::{
    Extras, Picture, Plot, Size, Style, Trace, View, came_from, drawing, ends, fit, place_in_drawing, point_in_drawing,
    signs_used, text,
};
use restpoint::report::table::{Names, Page, human};
use unicode_width::UnicodeWidthStr;

const LOGARITHMIC: [Scale; 2] = [Scale::Logarithmic; 2];
const LOGISTIC: &str = "title: l\ntime: yr\nspecies: {N: {unit: t, upper: 150}}\nparameters: {r: 0.4, K: 100}\n\
                        change: {N: r*N*(1 - N/K)}\n";
const CENTRE: &str = "title: c\ntime: yr\nspecies: {x: {upper: 10}, y: {upper: 10}}\nchange: {x: y - 5, y: 5 - x}\n";
const WHOLE: Window = Window { x: [0.0, 10.0], y: [0.0, 10.0] };

fn path(model: &Loaded, start: &[f64], until: f64) -> Path {
    follow(&mut model.subject(0), start, until, &|| false)
}

/// Everything stands inside the grid and, where asked for, in ASCII.
fn check_grid(grid: &Grid, size: Size, style: Style, what: &str) {
    assert_eq!((grid.columns, grid.rows), (size.columns, size.rows), "{what}");
    for label in &grid.labels {
        let fits = label.row < size.rows && label.column + label.text.width() <= size.columns;
        assert!(fits, "{what} {size:?}: {label:?}");
        assert!(style == Style::Unicode || label.text.is_ascii(), "{what}: {label:?}");
    }
    let cells = || (0..size.rows).flat_map(|row| grid.row(row));
    assert!(style == Style::Unicode || cells().all(|(glyph, _)| glyph.is_ascii()), "{what}");
    assert!(cells().filter(|(glyph, _)| *glyph != ' ').count() > size.columns, "{what} {size:?} is empty");
}

/// Two paths, drawn over one scenario with all else that can be, at several sizes.
fn check_model(name: &str, model: &Loaded) {
    let solved = model.solved(0);
    let ids = Names::alone(solved.equilibria.list.len()).ids.pop().unwrap();
    let axes = Slice::axes(&model.model);
    let mut subject = model.subject(0);
    let slice = Slice::new(&subject, axes, &solved.equilibria, &solved.assessment);
    for scales in [LINEAR, LOGARITHMIC] {
        let window = fit(&model.model, &model.bounds, &[&solved], axes, scales);
        let view = View { model: &model.model, scenario: 0, solved: &solved, ids: &ids, slice: &slice, window, scales };
        let mut start = slice.held.clone();
        let point = [window.x, window.y].map(|[low, high]| low + 0.4 * (high - low));
        start[slice.x] = point[0];
        slice.y.into_iter().for_each(|y| start[y] = point[1]);
        let [forwards, backwards] = [30.0, -30.0].map(|until| follow(&mut subject, &start, until, &|| false));
        let chosen = view.in_slice().last();
        let extras = Extras {
            chosen,
            point: Some(point),
            forwards: Some(&forwards),
            backwards: Some(&backwards),
            ..Extras::default()
        };
        for (columns, rows) in [(20, 8), (60, 20), (79, 24), (200, 50)] {
            let size = Size { columns, rows };
            let picture = Picture::new(&mut subject, &view, &Plot::of(size));
            for style in [Style::Unicode, Style::Ascii] {
                let grid = drawing(&view, &picture, &extras, size, style);
                check_grid(&grid, size, style, name);
                let [column, row] = place_in_drawing(&picture, point).unwrap();
                let sign = if style == Style::Unicode { '╳' } else { 'X' };
                assert_eq!(grid.at(column, row), (sign, Ink::Point), "{name}");
                let signs = signs_used(&view, &picture, &extras, style);
                assert!(signs.iter().any(|(sign, word)| word == "point" && sign.width() == 1), "{name}: {signs:?}");
                for said in [ends(&view, &forwards, style), came_from(&view, &window, &backwards, style)] {
                    assert!(said.ends_with("(numerical).") && !said.contains("NaN"), "{name}: {said}");
                }
            }
        }
    }
}

#[test]
fn every_shipped_scenario_is_drawn_at_every_size() {
    let folder = format!("{}/scenarios", env!("CARGO_MANIFEST_DIR"));
    let names = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let names = names.filter(|path| path.extension().is_some_and(|extension| extension == "yaml"));
    let mut drawn = 0;
    for path in names {
        let name = path.file_stem().unwrap().to_string_lossy().into_owned();
        // Those that name tables cannot be read without files.
        if fs::read_to_string(&path).unwrap().contains(".csv") {
            continue;
        }
        check_model(&name, &shipped(&name));
        drawn += 1;
    }
    assert!(drawn > 8, "{drawn} scenarios");
}

#[test]
fn what_is_chosen_is_found_without_colour() {
    let model = shipped("skarnby-bank");
    model.with(Seen { scenario: 3, ..USUAL }, |view, picture| {
        for chosen in view.in_slice() {
            for style in [Style::Unicode, Style::Ascii] {
                let extras = Extras { chosen: Some(chosen), ..Extras::default() };
                let lines = drawing(view, picture, &extras, USUAL.size, style).lines(false);
                let found = lines.iter().filter(|line| line.contains(&format!("[{}]", view.ids[chosen]))).count();
                assert_eq!(found, 1, "{}\n{}", view.ids[chosen], lines.join("\n"));
                assert_eq!(lines.iter().map(|line| line.matches('[').count()).sum::<usize>(), 1);
            }
        }
    });
}

#[test]
fn places_and_points_of_a_drawing_are_each_others_inverse() {
    for (model, scales) in [(loaded(CENTRE), LINEAR), (loaded(CENTRE), LOGARITHMIC), (loaded(LOGISTIC), LINEAR)] {
        model.with(Seen { scales, ..USUAL }, |_, picture| {
            let mut inside = 0;
            for row in 0..24 {
                for column in 0..80 {
                    let Some(point) = point_in_drawing(picture, [column, row]) else { continue };
                    inside += 1;
                    let [c, r] = place_in_drawing(picture, point).unwrap();
                    let is_line = matches!(picture, Picture::Line(_));
                    assert!(c == column && (is_line || r == row), "{point:?}: {c}, {r}, not {column}, {row}");
                }
            }
            assert_eq!(inside, 72 * 20);
        });
    }
}

#[test]
fn a_state_that_has_no_place_on_a_logarithmic_axis_is_said_to_be_outside() {
    let model = shipped("skarnby-bank");
    let words = model.with(Seen { scales: LOGARITHMIC, ..USUAL }, |view, picture| {
        let page = Page { width: 80, style: Style::Unicode, color: false };
        text(view, picture, page).split_whitespace().collect::<Vec<_>>().join(" ")
    });
    assert!(words.contains("not drawn, for a logarithmic axis has no 0"), "{words}");
}

#[test]
fn paths_agree_with_the_closed_logistic_solution() {
    let model = loaded(LOGISTIC);
    let exact = |start: f64, t: f64| 100.0 / (1.0 + (100.0 / start - 1.0) * (-0.4 * t).exp());
    for start in [1.0, 40.0, 140.0] {
        for until in [30.0, -2.0] {
            let path = path(&model, &[start], until);
            for (&time, state) in path.times.iter().zip(&path.states) {
                let expected = exact(start, time);
                assert!((state[0] / expected - 1.0).abs() < 1e-6, "{start} at {time}: {state:?}, not {expected}");
            }
            for k in 0..=1000 {
                let time = until * f64::from(k) / 1000.0;
                let (found, expected) = (path.at(time, false)[0], exact(start, time));
                assert!((found / expected - 1.0).abs() < 1e-5, "{start} at {time}: {found}, not {expected}");
            }
        }
    }
}

#[test]
fn paths_keep_the_first_integral_of_prey_and_predator() {
    // Lotka-Volterra: c x − m ln x + a y − r ln y.
    let model = loaded(
        "title: lv\ntime: yr\nspecies: {x: {upper: 20}, y: {upper: 20}}\n\
         change: {x: x*(1 - 0.5*y), y: y*(0.25*x - 0.75)}\n",
    );
    let integral = |[x, y]: [f64; 2]| 0.25 * x - 0.75 * x.ln() + 0.5 * y - y.ln();
    for until in [60.0, -60.0] {
        let path = path(&model, &[6.0, 1.0], until);
        let start = integral([6.0, 1.0]);
        assert_eq!(path.until(), until);
        for state in &path.states {
            assert!((integral([state[0], state[1]]) - start).abs() < 1e-5, "{state:?}");
        }
    }
}

#[test]
fn a_path_is_drawn_to_a_cell_and_its_moments_where_they_belong() {
    let model = loaded(CENTRE);
    // x = 5 + 4 sin t, y = 5 + 4 cos t.
    let forwards = path(&model, &[5.0, 9.0], 6.0);
    for size in [Size { columns: 40, rows: 14 }, Size { columns: 109, rows: 55 }] {
        model.with(Seen { window: Some(WHOLE), size, ..USUAL }, |view, picture| {
            let frame = picture.frame();
            let trace = Trace::new(view, frame, &forwards);
            for &[column, row] in &trace.cells {
                let at = |c: f64, r: f64| (frame.x(c) - 5.0).hypot(frame.y(r) - 5.0) - 4.0;
                let (c, r) = (column as f64, row as f64);
                // The circle goes through the cell, or through one that touches it.
                let corners = [at(c - 1.0, r - 1.0), at(c + 1.0, r - 1.0), at(c - 1.0, r + 1.0), at(c + 1.0, r + 1.0)];
                let crosses = corners.iter().any(|&x| x <= 0.0) && corners.iter().any(|&x| x >= 0.0);
                assert!(crosses, "{column}, {row}: {corners:?}");
            }
            // 6 yr in at most nine moments: one a year.
            assert_eq!((trace.every, trace.moments.len()), (1.0, 6));
            for &(number, [column, row]) in &trace.moments {
                let (sin, cos) = f64::from(number).sin_cos();
                let [c, r] = frame.place([5.0 + 4.0 * sin, 5.0 + 4.0 * cos]);
                let off = (c - column as f64).abs().max((r - row as f64).abs());
                assert!(off <= 0.5 + 1e-3, "{number}: {off}");
            }
            for pair in trace.cells.windows(2) {
                let apart = pair[0][0].abs_diff(pair[1][0]).max(pair[0][1].abs_diff(pair[1][1]));
                assert!(apart == 1, "a gap at {pair:?}");
            }
        });
    }
}

#[test]
fn sentences_have_the_times_of_closed_forms() {
    let check = |model: &Loaded, start: &[f64], until: f64, expected: &str| {
        let path = path(model, start, until);
        let said = model.with(USUAL, |view, _| match until {
            until if until > 0.0 => ends(view, &path, Style::Unicode),
            _ => came_from(view, &WHOLE, &path, Style::Unicode),
        });
        assert_eq!(said, expected);
    };
    let node = loaded(
        "title: n\ntime: yr\nspecies: {x: {upper: 150}, y: {upper: 150}}\n\
         change: {x: 0.4*x*(1 - x/100), y: 2*y*(1 - y/100)}\n",
    );
    // From 20 to 99 of 100: ln(99 · 4)/0.4.
    let time = human((99.0f64 * 4.0).ln() / 0.4);
    check(&node, &[20.0, 100.0], 60.0, &format!("After {time} yr within 1 % of E4 (numerical)."));
    check(&node, &[20.0, 100.0], 2.0, "Still moving after 2.000 yr (numerical).");
    let saddle = "Within 1 % of E1 from the start, which it may leave again (numerical).";
    check(&node, &[0.0, 0.0], 1.0, saddle);
    // y doubles back in time: e^t = 10/4.
    let falling = loaded("title: f\ntime: yr\nspecies: {x: {upper: 10}, y: {upper: 10}}\nchange: {x: x, y: -y}\n");
    let ago = human(2.5f64.ln());
    check(&falling, &[4.0, 4.0], -5.0, &format!("Came from beyond the drawing {ago} yr ago (numerical)."));
    check(&falling, &[4.0, 4.0], -0.5, "Was in the drawing all the time for 0.5000 yr (numerical).");
    let quota = loaded("title: q\ntime: yr\nspecies: {x: {upper: 9}, y: {upper: 9}}\nchange: {x: -2, y: y*(3 - y)}\n");
    let said = {
        let path = follow(&mut quota.subject(0), &[7.0, 3.0], 60.0, &|| false);
        quota.with(USUAL, |view, _| ends(view, &path, Style::Unicode))
    };
    // Within a hundredth of 7 after 6.93/2 yr.
    let end = "after 3.465 yr within 1 % of x = 0, y = 3.000, which is no equilibrium of the list (numerical).";
    assert_eq!(said, format!("x is lost after 3.500 yr; {end}"));
}
