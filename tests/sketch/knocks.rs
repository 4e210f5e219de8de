//! After a knock, and who acts on whom: against closed forms, and at every size.
#![allow(clippy::unwrap_used, clippy::panic, reason = "a test fails by panicking")]

use crate::sketch_support::{Loaded, linear, loaded, shipped};
use restpoint::analysis::assess::{Assessment, assess};
use restpoint::analysis::equilibria::Equilibria;
use restpoint::analysis::paths::{Ended, Path, follow};
use restpoint::report::course::{self, Course, horizon, knocked};
use restpoint::report::grid::{Grid, Ink};
use restpoint::report::interactions::{self, Effect, Effects, Interactions, Sign, Who, interactions};
use restpoint::report::sketch::{Size, Style};
use unicode_width::UnicodeWidthStr;

const LOGISTIC: &str = "title: l\ntime: yr\nspecies: {N: {unit: t, upper: 150}, M: {upper: 150}}\n\
                        change: {N: 0.4*N*(1 - N/100), M: M*(1 - M/10)}\n";
const RIVALS: &str = "title: r\ntime: yr\nspecies: {x: {upper: 20}, y: {upper: 20}}\n\
                      change: {x: x*(15 - x - 2*y), y: y*(15 - y - 2*x)}\n";

fn solved(model: &Loaded) -> (Equilibria, Assessment) {
    let found = model.solved(0).equilibria;
    let assessment = assess(&mut model.subject(0), &found, &|| false);
    (found, assessment)
}

/// The course from the state with all species, that of `species` times 1 + `change`.
fn course(model: &Loaded, species: Option<usize>, change: f64) -> Course {
    let (found, assessment) = solved(model);
    let index = found.list.iter().position(|e| e.state.iter().all(|x| *x > 0.0)).unwrap();
    let (state, linear) = (&found.list[index].state, assessment.equilibria[index].linear.as_ref().ok());
    let mut subject = model.subject(0);
    let step = subject.step();
    let path = follow(&mut subject, &knocked(state, species, change), horizon(linear, step), &|| false);
    Course::new(&path, state, linear, step)
}

#[test]
fn a_knock_changes_who_it_is_meant_for() {
    let check = |species, change, expected: [f64; 3]| assert_eq!(knocked(&[4.0, 0.0, 6.0], species, change), expected);
    check(None, -0.5, [2.0, 0.0, 3.0]);
    check(Some(2), 0.5, [4.0, 0.0, 9.0]);
    check(Some(0), -3.0, [0.0, 0.0, 6.0]);
    check(Some(9), -0.5, [4.0, 0.0, 6.0]);
    check(None, f64::NAN, [4.0, 0.0, 6.0]);
}

#[test]
fn the_horizon_follows_the_leading_eigenvalue() {
    let check = |matrix, step: Option<f64>, expected: f64| {
        let found = horizon(Some(&linear(matrix, step.is_some())), step);
        assert!((found / expected - 1.0).abs() < 1e-12, "{matrix:?}: {found}, not {expected}");
    };
    check([-0.5, 0.0, 0.0, -2.0], None, 12.0);
    check([0.5, 0.0, 0.0, -2.0], None, 16.0);
    check([-0.1, 1.0, -1.0, -0.1], None, 60.0);
    check([-10.0, 1.0, -1.0, -10.0], None, 2.0 * std::f64::consts::TAU);
    check([0.0, 1.0, -1.0, 0.0], None, 100.0);
    // ln 0.5 a step of 2: 6 · 2/ln 2 = 17.3, nine steps; at least ten.
    check([0.5, 0.0, 0.0, 0.1], Some(2.0), 20.0);
    check([0.9, 0.0, 0.0, 0.1], Some(1.0), 57.0);
    assert_eq!((horizon(None, None), horizon(None, Some(0.5))), (100.0, 50.0));
}

#[test]
fn a_logistic_stock_returns_as_the_closed_form_has_it() {
    let model = loaded(LOGISTIC);
    let exact = |start: f64, t: f64| 100.0 / (1.0 + (100.0 / start - 1.0) * (-0.4 * t).exp());
    let predicted = |start: f64, t: f64| 100.0 + (start - 100.0) * (-0.4 * t).exp();
    for change in [-0.8, -0.5, -0.05, 0.6] {
        let start = 100.0 * (1.0 + change);
        let course = course(&model, Some(0), change);
        for ((&t, state), linear) in course.times.iter().zip(&course.states).zip(&course.predicted) {
            assert!((state[0] - exact(start, t)).abs() < 1e-3, "{change} at {t}: {state:?}");
            assert!(
                (linear[0] - predicted(start, t)).abs() < 1e-9 && (linear[1] - 10.0).abs() < 1e-9,
                "{t}: {linear:?}"
            );
        }
        assert_eq!(course.times.len(), course.predicted.len());
        assert!((course.deviation[0] - f64::abs(change)).abs() < 1e-12 && course.deviation[1] < 0.01);
        // Odds of x/(K − x) grow by e^rt.
        let edge: f64 = if change < 0.0 { 0.9 } else { 1.1 };
        let odds = |share: f64| (share / (1.0 - share)).abs().ln();
        let returned = if change.abs() > 0.1 { (odds(edge) - odds(1.0 + change)) / 0.4 } else { 0.0 };
        assert!(
            (course.returned.unwrap() - returned.abs()).abs() < 1e-3,
            "{change}: {:?}, not {returned}",
            course.returned
        );
        let by_linear = ((change.abs() / 0.1).ln() / 0.4).max(0.0);
        let spacing = course.times[1];
        assert!((course.return_predicted.unwrap() - by_linear).abs() < spacing, "{change}: {by_linear}");
        let is_off = |t: &f64| (exact(start, *t) - predicted(start, *t)).abs() > 10.0;
        let good = course.times.iter().position(is_off).map(|k| course.times[k - 1]);
        assert_eq!(course.good_until, good, "{change}");
    }
}

#[test]
fn a_map_is_predicted_by_powers() {
    let model = loaded(
        "title: m\ntime: {unit: yr, step: 2}\nspecies: {N: {upper: 5}, M: {upper: 5}}\n\
         next: {N: N*exp(0.5*(1 - N)), M: M*exp(0.2*(1 - M))}\n",
    );
    let course = course(&model, Some(0), -0.4);
    for (k, (&time, linear)) in course.times.iter().zip(&course.predicted).enumerate() {
        assert_eq!(time, 2.0 * k as f64);
        assert!((linear[0] - (1.0 - 0.4 * 0.5f64.powf(k as f64))).abs() < 1e-12, "{k}: {linear:?}");
    }
    assert_eq!(course.states[0], [0.6, 1.0]);
    let mut x: f64 = 0.6;
    for state in &course.states {
        assert!((state[0] - x).abs() < 1e-12);
        x *= (0.5 * (1.0 - x)).exp();
    }
}

fn check_grid(grid: &Grid, size: Size, style: Style) {
    assert_eq!((grid.columns, grid.rows), (size.columns, size.rows));
    for label in &grid.labels {
        let fits = label.row < size.rows && label.column + label.text.width() <= size.columns;
        assert!(fits && (style == Style::Unicode || label.text.is_ascii()), "{size:?}: {label:?}");
    }
    let ascii = (0..size.rows).flat_map(|row| grid.row(row)).all(|(glyph, _)| glyph.is_ascii());
    assert!(style == Style::Unicode || ascii);
}

const SIZES: [[usize; 2]; 9] = [[0, 0], [1, 1], [5, 30], [20, 8], [60, 7], [60, 20], [80, 24], [200, 50], [1000, 3]];

#[test]
fn courses_are_drawn_at_every_size() {
    let models =
        [LOGISTIC, RIVALS].map(loaded).into_iter().chain([shipped("skarnby-bank"), shipped("harrowmere-moor")]);
    for model in models {
        for change in [-0.5, 0.2, -1.0] {
            let course = course(&model, None, change);
            for [columns, rows] in SIZES {
                for style in [Style::Unicode, Style::Ascii] {
                    let size = Size { columns, rows };
                    let grid = course::drawing(&course, &model.model, 0, size, style);
                    check_grid(&grid, size, style);
                    if columns >= 20 && rows >= 8 && change > -1.0 {
                        let sign = if style == Style::Unicode { '×' } else { 'x' };
                        let cells = (0..rows).flat_map(|row| grid.row(row));
                        assert!(cells.filter(|(glyph, _)| *glyph == sign).count() + 8 > columns - 8, "{size:?}");
                    }
                }
            }
            for sentence in course::sentences(&course, &model.model, "E4", Some(2.5), Style::Ascii) {
                assert!(sentence.ends_with('.') && !sentence.contains("NaN") && sentence.is_ascii(), "{sentence}");
            }
        }
    }
}

#[test]
fn bands_that_do_not_fit_are_counted() {
    let names: Vec<String> = (0..30).map(|i| format!("s{i}: {{upper: 9}}")).collect();
    let rates: Vec<String> = (0..30).map(|i| format!("s{i}: s{i}*(1 - s{i})")).collect();
    let model =
        loaded(&format!("title: t\ntime: yr\nspecies: {{{}}}\nchange: {{{}}}\n", names.join(", "), rates.join(", ")));
    let states = vec![vec![0.5; 30], vec![1.0; 30]];
    let path = Path { times: vec![0.0, 9.0], states, lost: Vec::new(), ended: Ended::InTime };
    let course = Course::new(&path, &[1.0; 30], None, None);
    let size = Size { columns: 60, rows: 20 };
    assert_eq!(course::bands(&course, size), [4, 30]);
    for (from, first) in [(0, "s0"), (5, "s5"), (99, "s26")] {
        let lines = course::drawing(&course, &model.model, from, size, Style::Unicode).lines(false);
        assert_eq!(lines[0], first);
        assert!(lines[19].starts_with("26 more species") && lines[19].ends_with("time, yr"), "{}", lines[19]);
    }
    assert!(course.predicted.is_empty() && course.good_until.is_none());
}

#[test]
fn rows_of_a_course_are_its_numbers() {
    let model = loaded(LOGISTIC);
    let course = course(&model, Some(0), -0.5);
    let heads = course::headings(&course, &model.model);
    assert_eq!(heads, ["time [yr]", "N [t]", "M", "N predicted [t]", "M predicted"]);
    let rows: Vec<Vec<f64>> =
        course::rows(&course).into_iter().map(|row| row.into_iter().map(Option::unwrap).collect()).collect();
    assert_eq!(rows.len(), course.times.len());
    for (k, row) in rows.iter().enumerate() {
        assert!(row[0] == course.times[k] && row[1] == course.states[k][0] && row[4] == course.predicted[k][1]);
    }
}

fn effects(model: &Loaded, index: usize, effects: Effects, who: Who) -> Interactions {
    let (found, assessment) = solved(model);
    interactions(&found.list[index], &assessment.equilibria[index], effects, who).unwrap()
}

#[test]
fn effects_are_those_by_hand() {
    let model = loaded(RIVALS);
    let check = |of: Effects, expected: [f64; 4], proved: bool| {
        let table = effects(&model, 3, of, Who::Present);
        for (k, expected) in expected.into_iter().enumerate() {
            let effect = table.at(k / 2, k % 2).unwrap();
            assert!((effect.number / expected - 1.0).abs() < 1e-12, "{of:?}: {effect:?}, not {expected}");
            let sign = if expected > 0.0 { Sign::Positive } else { Sign::Negative };
            assert_eq!((effect.sign, effect.proved), (sign, proved), "{of:?}");
        }
        assert!(table.at(2, 0).is_none() && !table.nearly_singular);
    };
    // At (5, 5): A = [−5, −10; −10, −5], −A⁻¹ = [−1, 2; 2, −1]/15.
    check(Effects::Direct, [-5.0, -10.0, -10.0, -5.0], true);
    check(Effects::Net, [-1.0 / 15.0, 2.0 / 15.0, 2.0 / 15.0, -1.0 / 15.0], false);
    let text = interactions::text(&effects(&model, 3, Effects::Net, Who::Present), &model.model, Style::Ascii);
    let lines: Vec<Vec<&str>> = text.lines().skip(1).map(|line| line.split_whitespace().collect()).collect();
    let heads = vec!["answer", "of", "press", "on", "x", "press", "on", "y"];
    assert_eq!(lines[..3], [heads, vec!["x", "-0.06667", "+0.1333"], vec!["y", "+0.1333", "-0.06667"]]);
}

#[test]
fn the_absent_are_left_out_or_marked() {
    let model = loaded(RIVALS);
    let (found, _) = solved(&model);
    let alone = found.list.iter().position(|e| e.state[0] > 0.0 && e.state[1] == 0.0).unwrap();
    assert_eq!(effects(&model, alone, Effects::Direct, Who::Present).species, [0]);
    let all = effects(&model, alone, Effects::Direct, Who::All);
    assert_eq!((all.species.clone(), all.present.clone()), (vec![0, 1], vec![true, false]));
    // y grows by y (15 − y − 2 x), so x alone does nothing to it: 0, and that is proved.
    let effect = all.at(1, 0).unwrap();
    assert_eq!((effect.sign, effect.proved), (Sign::Zero, true));
    assert!(interactions::text(&all, &model.model, Style::Ascii).contains("y absent"));
    let (found, assessment) = solved(&loaded("title: f\ntime: yr\nspecies: {x: {upper: 2}}\nchange: {x: x*x}\n"));
    if let (Some(state), Some(assessed)) = (found.list.first(), assessment.equilibria.first()) {
        let none = interactions(state, assessed, Effects::Net, Who::All);
        assert!(none.is_err_and(|why| why.ends_with('.')));
    }
}

#[test]
fn signs_are_told_without_colour() {
    let model = loaded(RIVALS);
    let effect = |number, sign, proved| Effect { number, sign, proved };
    let table = Interactions {
        effects: Effects::Direct,
        species: vec![0, 1],
        present: vec![true; 2],
        entries: vec![
            effect(-3.0, Sign::Negative, true),
            effect(2.0, Sign::Positive, false),
            effect(1e-17, Sign::Undecided, false),
            effect(0.0, Sign::Zero, true),
        ],
        nearly_singular: true,
    };
    let lines = interactions::drawing(&table, &model.model, [0, 0], Size { columns: 80, rows: 12 }, Style::Ascii);
    let words: Vec<Vec<String>> =
        lines.lines(false).iter().map(|line| line.split_whitespace().map(str::to_owned).collect()).collect();
    assert_eq!(
        (&words[2][..], &words[3][..]),
        (&["x", "-3.000", "(+2.000)"].map(String::from)[..], &["y", "?1.000e-17", "0"].map(String::from)[..])
    );
    assert!(lines.lines(false)[4].starts_with("Nearly singular"));
    let inks: Vec<Ink> = lines.labels.iter().filter(|label| label.row >= 2).map(|label| label.ink).collect();
    for ink in [Ink::Proved, Ink::Numerical, Ink::Undecided, Ink::Warning] {
        assert!(inks.contains(&ink), "{ink:?}");
    }
    let signs: Vec<String> = interactions::signs(&[&table]).into_iter().map(|(sign, _)| sign).collect();
    assert_eq!(signs, ["+", "-", "0", "?", "( )"]);
}

#[test]
fn a_large_table_scrolls_and_says_where_it_is() {
    let names: Vec<String> = (0..30).map(|i| format!("s{i}: {{upper: 9}}")).collect();
    let rates: Vec<String> = (0..30).map(|i| format!("s{i}: s{i}*(1 - s{i})")).collect();
    let model =
        loaded(&format!("title: t\ntime: yr\nspecies: {{{}}}\nchange: {{{}}}\n", names.join(", "), rates.join(", ")));
    let entries = (0..900).map(|k| Effect { number: f64::from(k), sign: Sign::Positive, proved: true }).collect();
    let table = Interactions {
        effects: Effects::Net,
        species: (0..30).collect(),
        present: vec![true; 30],
        entries,
        nearly_singular: false,
    };
    let size = Size { columns: 64, rows: 20 };
    assert_eq!(interactions::visible(&table, &model.model, size), [16, 4]);
    for ([row, column], said, first) in [
        ([0, 0], "rows 1 to 16, columns 1 to 4 of 30", "+1.000"),
        ([3, 7], "rows 4 to 19, columns 8 to 11 of 30", "+97.00"),
        ([99, 99], "rows 15 to 30, columns 27 to 30 of 30", "+446.0"),
    ] {
        let grid = interactions::drawing(&table, &model.model, [row, column], size, Style::Ascii);
        check_grid(&grid, size, Style::Ascii);
        let lines = grid.lines(false);
        assert!(lines[18] == said || lines[19] == said, "{lines:?}");
        assert!(lines[2].contains(first), "{}", lines[2]);
    }
    for [columns, rows] in SIZES {
        for style in [Style::Unicode, Style::Ascii] {
            let size = Size { columns, rows };
            check_grid(&interactions::drawing(&table, &model.model, [2, 2], size, style), size, style);
        }
    }
    let rows = interactions::rows(&table, &model.model);
    assert_eq!((rows.len(), &rows[31][1..4]), (900, &["s1".into(), "s1".into(), 31.0.into()][..]));
}
