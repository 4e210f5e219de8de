//! The sketch as text: every size, either style, what is said beside the drawing.
#![allow(clippy::unwrap_used, clippy::panic, reason = "a test fails by panicking")]

use std::fs;
use std::path::{Path, PathBuf};

use crate::sketch_support::{Loaded, Seen, USUAL, loaded, shipped};
use restpoint::analysis::field::Window;
use restpoint::report::kinds::KINDS;
use restpoint::report::sketch::{Mark, Plot, SMALLEST, Size, Style, closing, text};
use restpoint::report::table::Page;
use unicode_width::UnicodeWidthStr;

const ONE: &str = "title: one\ntime: yr\nspecies: {näme: {symbol: N, unit: t, upper: 1500}}\nparameters: {K: 100}\n\
                   change: {N: N*(1 - N/K)*(N/20 - 1)}\nnow: {N: 60}\n";
const THREE: &str = "title: three\ntime: {unit: yr, step: 1}\n\
                     species: {a: {upper: 5}, b: {upper: 50}, c: {upper: 500}}\n\
                     next: {a: a*exp(1 - a), b: b*exp(0.5 - 0.1*b - 0.1*a), c: c*exp(0.1 - 0.001*c)}\n\
                     now: {a: 2, b: 1, c: 400}\n";

fn sized(columns: usize, rows: usize) -> Seen {
    Seen { size: Size { columns, rows }, ..USUAL }
}

#[test]
fn shipped_scenarios_read_as_expected() {
    let bank = shipped("skarnby-bank").text(Seen { scenario: 3, ..sized(80, 24) }, Style::Unicode);
    assert_eq!(bank, include_str!("../files/sketch/skarnby-bank.txt"), "\n{bank}");
    let moor = shipped("harrowmere-moor").text(sized(64, 20), Style::Ascii);
    assert_eq!(moor, include_str!("../files/sketch/harrowmere-moor.txt"), "\n{moor}");
}

/// The lines of the drawing keep to its size, whatever that is.
fn check_size(model: &Loaded, seen: Seen, style: Style) {
    let text = model.text(seen, style);
    let plot = Plot::of(seen.size);
    let is_row = |line: &&str| line.chars().nth(7).is_some_and(|c| "│┤└|+".contains(c)) && !line.starts_with("  ");
    let corner = text
        .lines()
        .position(|line| line.starts_with("       └") || line.starts_with("       +-") || line.starts_with("       ++"))
        .unwrap();
    let rows: Vec<&str> = text.lines().collect();
    assert!(rows.len() > corner + 2 && corner > plot.rows, "{text}");
    for line in &rows[corner - plot.rows - 1..corner + 3] {
        assert!(line.width() <= seen.size.columns, "{:?}: {line}", seen.size);
    }
    assert_eq!(rows[corner].width(), seen.size.columns, "{text}");
    assert!(
        rows[corner - plot.rows..corner].iter().all(|line| line.chars().nth(7).is_some() || is_row(line)),
        "{text}"
    );
    assert!(style == Style::Unicode || text.is_ascii(), "{text}");
    assert!(text.lines().all(|line| line.trim_end() == line), "blanks at the end of a line\n{text}");
}

#[test]
fn every_size_is_kept_in_both_styles() {
    let plane = loaded(
        "title: plane\ntime: yr\nspecies: {x: {upper: 20}, y: {symbol: ψ, unit: t, upper: 20}}\nparameters: {a: 2}\n\
         change: {x: x*(15 - x - a*ψ), ψ: ψ*(15 - ψ - a*x)}\nnow: {x: 3, ψ: 300}\n",
    );
    for (model, step) in [(&plane, 7), (&loaded(ONE), 11)] {
        for columns in (20..=200).step_by(step) {
            for rows in (8..=200).step_by(3 * step) {
                for style in [Style::Unicode, Style::Ascii] {
                    check_size(model, sized(columns, rows), style);
                }
            }
        }
        for size in 20..=200 {
            check_size(model, sized(size, size), Style::Ascii);
        }
    }
    check_size(&plane, sized(1000, 1000), Style::Unicode);
    assert_eq!(Plot::of(Size { columns: 0, rows: 0 }), Plot::of(SMALLEST));
}

#[test]
fn windows_without_width_or_sense_draw_something() {
    let plane = loaded("title: p\ntime: yr\nspecies: {x: {upper: 9}, y: {upper: 9}}\nchange: {x: 1/x, y: ln(x) - y}\n");
    for x in [[0.0, 0.0], [5.0, 5.0], [1.0, 1.0 + f64::EPSILON], [0.0, f64::MAX], [0.0, 1e-310], [3.0, 2.0]] {
        for y in [[0.0, 1.0], [0.0, 0.0]] {
            let text = plane.text(Seen { window: Some(Window { x, y }), ..sized(40, 12) }, Style::Unicode);
            assert!(text.contains('└') && !text.contains("NaN") && !text.contains("inf"), "{text}");
        }
    }
}

#[test]
fn a_window_shows_what_matters() {
    let check = |model: &str, expected: [f64; 2]| {
        loaded(model).with(USUAL, |view, _| assert_eq!(view.window.x, expected, "{model}"));
    };
    let head = "title: w\ntime: yr\nparameters: {K: 100}\n";
    // A margin of 15 % and rounded up; never beyond the box; today's stocks as well.
    check(&format!("{head}species: {{x: {{upper: 5000}}}}\nchange: {{x: x*(1 - x/K)}}\n"), [0.0, 120.0]);
    check(&format!("{head}species: {{x: {{upper: 101}}}}\nchange: {{x: x*(1 - x/K)}}\n"), [0.0, 101.0]);
    check(
        &format!("{head}species: {{x: {{upper: 5000}}}}\nchange: {{x: x*(1 - x/K)}}\nnow: {{x: 200}}\n"),
        [0.0, 240.0],
    );
    // Nothing but the empty state: as far as the box where it is given.
    check(&format!("{head}species: {{x: {{upper: 5000}}}}\nchange: {{x: -x}}\n"), [0.0, 5000.0]);
    // And where it was chosen as a thousand times the own level of 100, which is nowhere reached under the first plan.
    let plans = "scenarios:\n  all: {values: {K: -1}}\n  none: {}\n";
    check(&format!("{head}species: {{x: {{}}}}\nchange: {{x: x*(K - x)}}\n{plans}"), [0.0, 120.0]);
}

#[test]
fn what_is_held_and_what_is_elsewhere_is_said() {
    let three = loaded(THREE);
    // Wherever its lines break.
    let words = |seen| three.text(seen, Style::Unicode).split_whitespace().collect::<Vec<_>>().join(" ");
    let text = words(sized(70, 16));
    // The state with all three: a = 1, b = 4, c = 100.
    assert!(text.contains("Held as at E8: c = 100.0"), "{text}");
    assert!(text.contains("E8: a = 1.000, b = 4.000, proved; type not computed"), "{text}");
    assert!(text.contains("Not in this slice: E1, E2, E3, E5."), "{text}");
    assert!(text.contains("what one step adds to the state"), "{text}");
    assert!(text.contains("today's stocks: a = 2.000, b = 1.000; other species are not as held here"), "{text}");
    let other = words(Seen { axes: Some([2, 0]), ..sized(70, 16) });
    assert!(other.contains("Held as at E8: b = 4.000") && other.starts_with("Scenario: base "), "{other}");
    let narrow = Window { x: [0.0, 1.5], y: [0.0, 2.0] };
    let text = words(Seen { window: Some(narrow), ..sized(70, 16) });
    assert!(
        text.contains("E8: a = 1.000, b = 4.000, proved; type not computed; outside the part that is drawn"),
        "{text}"
    );
    assert!(text.contains("Today's stocks, a = 2.000, b = 1.000, lie outside the part that is drawn."), "{text}");
}

#[test]
fn nothing_is_called_proved_that_is_not() {
    let twice = loaded("title: t\ntime: yr\nspecies: {x: {upper: 2}}\nchange: {x: x*(x^2 - x + 0.25)}\n");
    let text = twice.text(sized(70, 16), Style::Unicode);
    assert!(text.contains("NOT PROVED COMPLETE") && !text.contains("proved: no other"), "{text}");
    let once = loaded(ONE).text(sized(70, 16), Style::Unicode);
    assert!(once.contains("proved: no other equilibrium is in the search box."), "{once}");
    let last = closing(Page { width: 80, style: Style::Ascii, color: false });
    assert!(last.contains("nothing is proved of them") && last.contains("responsible authority"), "{last}");
}

#[test]
fn a_single_species_has_its_rate_against_its_abundance() {
    let canvas = loaded(ONE).canvas(sized(79, 24), Style::Unicode);
    // The window is 0 to 115 or a little more; the rate is 0 at 0, 20 and 100, negative to 20, positive to 100.
    let level = (0..canvas.rows)
        .find(|&row| canvas.at(1, row) != Mark::Blank && canvas.row(row).contains(&Mark::Level))
        .unwrap();
    let states: Vec<usize> = (0..canvas.columns).filter(|&c| matches!(canvas.at(c, level), Mark::State(_))).collect();
    assert_eq!(states.len(), 3, "{states:?}");
    for (column, mark) in canvas.row(level).iter().enumerate() {
        let Mark::Flow(octant, 0) = mark else { continue };
        let leftwards = column < states[1] || column > states[2];
        assert_eq!(octant.index(), if leftwards { 4 } else { 0 }, "column {column}");
        let above = (level + 1..canvas.rows).any(|row| canvas.at(column, row) == Mark::Rate);
        let below = (0..level).any(|row| canvas.at(column, row) == Mark::Rate);
        assert!(!(leftwards && above) && (leftwards || !below), "column {column}");
    }
}

#[test]
fn colour_only_repeats() {
    let bank = shipped("skarnby-bank");
    let shown =
        |color| bank.with(USUAL, |view, picture| text(view, picture, Page { width: 80, style: Style::Unicode, color }));
    let coloured = shown(true);
    let mut plain = String::new();
    for (place, part) in coloured.split('\u{1b}').enumerate() {
        plain.push_str(if place == 0 { part } else { part.split_once('m').unwrap().1 });
    }
    assert_eq!(plain, shown(false));
    assert!(coloured.contains("\u{1b}[34m▓"), "{coloured}");
    for line in coloured.lines() {
        assert_eq!(line.matches('\u{1b}').count(), 2 * line.matches("\u{1b}[0m").count(), "{line}");
    }
}

#[test]
fn signs_of_kinds_stand_in_one_table_only() {
    let mut folders = vec![Path::new(env!("CARGO_MANIFEST_DIR")).join("src")];
    let mut files: Vec<PathBuf> = Vec::new();
    while let Some(folder) = folders.pop() {
        for path in fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()) {
            if path.is_dir() { folders.push(path) } else { files.push(path) }
        }
    }
    let glyphs: Vec<char> = KINDS.iter().map(|look| look.glyph).filter(|glyph| !glyph.is_ascii()).collect();
    assert!(glyphs.len() > 5 && files.len() > 50);
    for path in files.iter().filter(|path| !path.ends_with("report/kinds.rs")) {
        let source = fs::read_to_string(path).unwrap();
        assert!(!source.contains(|c| glyphs.contains(&c)), "{} has a sign of a kind", path.display());
    }
}
