//! The table as text: what is shown, at every width, in every style.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

mod cli_support;

use cli_support::{fast, run, run_on};
use restpoint::analysis::assess::Assessment;
use restpoint::analysis::equilibria::{Derivative, Equilibria, Equilibrium, Probably, Unresolved};
use restpoint::diag::Diagnostic;
use restpoint::model::Model;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::bounds::Bound;
use restpoint::num::interval::Interval;
use restpoint::report::table::{COLUMNS, Limits, Page, Scene, Solved, Style, Table, json, text};
use unicode_width::UnicodeWidthStr;

/// A stand-in for the hash of a file.
const SHA256: &str = "00112233445566778899aabbccddeeff00112233445566778899aabbccddeeff";

const TWO_STOCKS: &str = "\
title: Two stocks, größer | and = with 'odd' names
note: Invented figures, for demonstration only.
time: yr
species:
  sprat: {symbol: S, unit: kt, upper: 1500}
  κοδ: {symbol: κ, unit: kt, upper: 400.25}
parameters: {r: 0.9, E: 1}
change: {S: r*S*(1 - S), κ: κ*(1 - κ)}
scenarios:
  present fleet: {}
  half | the effort: {values: {E: 0.5*E}}
  broken: {}
";

fn equilibrium(state: [f64; 2], radius: f64, proven: bool, derivative: Derivative) -> Equilibrium {
    let around = |x: f64| if x == 0.0 { Interval::ZERO } else { Interval::new(x - radius * x, x + radius * x) };
    Equilibrium { state: state.to_vec(), enclosure: state.map(around).to_vec(), proven, derivative }
}

fn unresolved(sides: [[f64; 2]; 2], probably: Probably, text: &str) -> Unresolved {
    let region = sides.map(|side| Interval::new(side[0], side[1])).to_vec();
    Unresolved { region, probably, text: text.to_owned(), dimension: None, witnesses: Vec::new() }
}

fn solved(list: Vec<Equilibrium>, unresolved: Vec<Unresolved>, complete: bool) -> Solved {
    let equilibria = Equilibria { list, unresolved, complete, none_above: false, boxes: 7, faces: 4 };
    Solved { values: vec![0.9, 0.5], equilibria, assessment: Assessment::default() }
}

/// A scenario with nothing but proofs, one with everything else, one that failed.
fn scenes(model: &Model) -> Vec<Scene> {
    let nothing = equilibrium([0.0, 0.0], 0.0, true, Derivative::Exists);
    let sprat = |size| equilibrium([size, 0.0], 3e-16, true, Derivative::Exists);
    let kink = equilibrium([312.456, 41.2], 2e-9, false, Derivative::Kink);
    let corner = equilibrium([0.0, 0.0], 0.0, true, Derivative::Missing);
    let open = vec![
        unresolved([[12.0, 12.5], [0.0, 0.0]], Probably::DoubleRoot, "none, one double or two equilibria"),
        unresolved([[0.0, 1500.0], [0.0, 400.25]], Probably::Budget, ""),
    ];
    let problem = Diagnostic::error(model.scenarios[2].at, "the formulas are too many");
    let scene = |scenario, outcome| Scene { scenario, outcome };
    vec![
        scene(0, Ok(solved(vec![nothing, sprat(900.0)], Vec::new(), true))),
        scene(1, Ok(solved(vec![corner, sprat(12.0), sprat(890.0), kink], open, false))),
        scene(2, Err(vec![problem])),
    ]
}

fn with_table<T>(use_it: impl Fn(&Table<'_>) -> T) -> T {
    let (model, _, found) = load("two.yaml", TWO_STOCKS.as_bytes(), &NoFiles);
    let model = model.unwrap_or_else(|| panic!("{found:?}"));
    let scenes = scenes(&model);
    let side = |upper, chosen| Bound { lower: 0.0, upper, chosen };
    use_it(&Table {
        model: &model,
        sha256: SHA256,
        tables: &[],
        command: "restpoint table two.yaml --set E=0.5",
        set: &[(restpoint::model::ParameterId(1), 0.5)],
        bounds: &[side(1500.0, false), side(400.25, true)],
        limits: Limits { seconds: 10.0, boxes: 50_000 },
        scenes: &scenes,
        interrupted: true,
    })
}

fn shown(width: usize, style: Style) -> String {
    with_table(|table| text(table, Page { width, style, color: false }))
}

#[test]
fn everything_that_can_be_said_reads_as_expected() {
    assert_eq!(shown(80, Style::Unicode), include_str!("files/table/everything.txt"));
    assert_eq!(shown(44, Style::Ascii), include_str!("files/table/narrow.txt"));
}

/// Bounds of errors hang on the last bits of the arithmetic; here only their place counts.
fn without_bounds(text: &str) -> String {
    let lines = text.lines().map(|line| match line.rsplit_once("proved  ") {
        Some((before, _)) if line.starts_with("  E") => format!("{before}proved  (bound)\n"),
        _ => format!("{line}\n"),
    });
    lines.collect()
}

#[test]
fn shipped_scenarios_read_as_expected() {
    let check = |arguments: &[&str], expected: &str| {
        let ran = run(&[&["table"], arguments].concat());
        assert_eq!(ran.code, Some(0), "{}", ran.err);
        assert_eq!(without_bounds(&ran.out), without_bounds(expected));
    };
    let forest =
        ["scenarios/kelmarrow-forest.yaml", "--scenario", "present spraying", "--scenario", "spraying stopped"];
    check(&forest, include_str!("files/table/kelmarrow-forest.txt"));
    check(&["scenarios/hallowick-bays.yaml"], include_str!("files/table/hallowick-bays.txt"));
}

#[test]
fn lines_keep_to_the_width() {
    for width in 0..100 {
        for line in shown(width, Style::Unicode).lines() {
            // A hash is one word of 64 letters.
            assert!(line.width() <= width.max(30) || line.contains(SHA256), "{width}: {line}");
        }
    }
    for name in fast() {
        let shown = run(&["table", &name]).out;
        assert!(shown.lines().all(|line| line.width() <= 80), "{shown}");
    }
}

#[test]
fn ascii_output_is_ascii() {
    assert!(shown(80, Style::Ascii).is_ascii());
    for format in ["text", "json"] {
        let with = |more: &[&str]| run_on(TWO_STOCKS, &[&["table", "-", "--format", format], more].concat());
        let (ascii, plain) = (with(&["--ascii"]), with(&[]));
        assert_eq!((ascii.code, plain.code), (Some(0), Some(0)), "{}", ascii.err);
        assert!(ascii.out.is_ascii() && !plain.out.is_ascii());
        if format == "json" {
            let read = |text: &str| serde_json::from_str::<serde_json::Value>(text).unwrap();
            assert_eq!(read(&ascii.out), read(&plain.out));
        }
    }
    for name in fast() {
        assert!(run(&["table", &name, "--ascii"]).out.is_ascii(), "{name}");
    }
}

#[test]
fn colour_says_nothing_that_words_do_not() {
    let page = |color| Page { width: 80, style: Style::Unicode, color };
    let coloured = with_table(|table| text(table, page(true)));
    let mut plain = String::new();
    for (place, part) in coloured.split('\u{1b}').enumerate() {
        plain.push_str(if place == 0 { part } else { part.split_once('m').unwrap().1 });
    }
    assert_eq!(plain, shown(80, Style::Unicode));
    assert_eq!(coloured.matches("\u{1b}[3").count(), coloured.matches("\u{1b}[0m").count());
    assert!(coloured.contains("\u{1b}[33mnumerical\u{1b}[0m"));
}

#[test]
fn what_has_no_derivative_has_null_for_what_follows_from_one() {
    let json = with_table(json);
    let equilibria = json["scenarios"][1]["equilibria"].as_array().unwrap();
    let why: Vec<Option<&str>> = equilibria.iter().map(|e| e.get("why").and_then(|why| why.as_str())).collect();
    assert_eq!(why, [Some("rates have no derivative here"), None, None, Some("rates have a kink here")]);
    assert!(equilibria[0].get("type").is_some_and(serde_json::Value::is_null));
    let proven: Vec<bool> = equilibria.iter().map(|e| e["proven"].as_bool().unwrap()).collect();
    assert_eq!(proven, [true, true, true, false]);
    let probably: Vec<&str> = json["scenarios"][1]["search"]["unresolved"]
        .as_array()
        .unwrap()
        .iter()
        .map(|one| one["probably"].as_str().unwrap())
        .collect();
    assert_eq!(probably, ["double root", "budget"]);
    let error = &json["scenarios"][2]["error"];
    assert_eq!((error["line"].as_u64(), error["column"].as_u64()), (Some(12), Some(3)));
}

#[test]
fn columns_are_told_apart_and_explained() {
    for (place, column) in COLUMNS.iter().enumerate() {
        assert!(column.id.chars().all(|c| c.is_ascii_lowercase() || c == '_'), "{}", column.id);
        assert!(COLUMNS[..place].iter().all(|other| other.id != column.id), "{}", column.id);
        assert!(column.help.len() > 20 && !column.help.ends_with('.'), "{}", column.help);
    }
}
