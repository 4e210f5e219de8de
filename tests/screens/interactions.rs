//! Who acts on whom: the tables, what is telling in them, how they scroll.

use restpoint::app::interactions::{rows, text};
use std::path::{Path, PathBuf};

use crate::bench::{Bench, SIZES};
use crate::texts::{looks_as, written};
use serde_json::{Value, json};
use unicode_width::UnicodeWidthStr;

fn words(bench: &Bench) -> String {
    bench.text().split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn screens_read_as_expected() {
    let mut bench = Bench::open("sarnmere-lake");
    bench.press("i<End>");
    for [columns, rows] in SIZES {
        bench = bench.at([columns, rows]);
        looks_as(&bench, &format!("interactions-{columns}x{rows}"));
    }
    bench = bench.ascii().at(SIZES[0]);
    bench.press("<Up><Tab>t");
    for [columns, rows] in SIZES {
        bench = bench.at([columns, rows]);
        assert!(bench.text().is_ascii());
        looks_as(&bench, &format!("interactions-ascii-{columns}x{rows}"));
    }
}

/// A prey and its predator at S = 4, C = 6: A = (−4, −4; 6, 0), of determinant 24, so −A⁻¹ = (0, −1/6; 1/4, 1/6).
#[test]
fn tables_are_those_worked_out_by_hand() {
    let mut bench = Bench::of(
        "title: two\ntime: yr\nspecies: {S: {upper: 20}, C: {upper: 20}}\nchange: {S: S*(10 - S - C), C: C*(S - 4)}\n",
    )
    .at([60, 20]);
    bench.press("i<End>");
    bench.shows(&["S                -4.000       -4.000\n", "C                +6.000            0\n"]);
    let said = "One more of C lowers the growth of S at once (proved); adding C steadily lowers S in the long run (numerical).";
    assert!(words(&bench).contains(said), "{}", bench.text());
    bench.press("<Tab>");
    bench.shows(&["S                     0      -0.1667\n", "C               +0.2500      +0.1667\n"]);
    bench.press("<Tab>");
    bench.shows(&["Direct: "]);
    // Of S alone, at 10: who is there, or all.
    bench.press("<Up>");
    bench.shows(&["those present", "S                -10.00\n"]);
    bench.hides(&["C absent"]);
    bench.press("t");
    bench.shows(&["all species", "S                -10.00       -10.00\n", "C absent              0       +6.000\n"]);
    bench.press("<Up>t");
    bench.shows(&["Nobody is there"]);
}

/// Rates linear about the state where all are 1, so that the matrix of the formulas is the Jacobian.
fn linear(rows: &[(&str, &str)]) -> Bench {
    let species: Vec<String> = rows.iter().map(|(name, _)| format!("{name}: {{upper: 9}}")).collect();
    let change: Vec<String> = rows.iter().map(|(name, rate)| format!("{name}: {rate}")).collect();
    let mut bench = Bench::of(&format!(
        "title: linear\ntime: yr\nspecies: {{{}}}\nchange: {{{}}}\n",
        species.join(", "),
        change.join(", ")
    ));
    bench.press("<End>i");
    bench
}

#[track_caller]
fn says(bench: &Bench, said: &str) {
    let shown = words(bench);
    assert!(shown.contains(said), "\"{said}\" is not in\n{}", bench.text());
}

#[test]
fn what_is_telling_is_said() {
    // −A⁻¹ of (1, −2; 3, −2) is (0.5, −0.5; 0.75, −0.25).
    let bench = linear(&[("x", "(x - 1) - 2*(y - 1)"), ("y", "3*(x - 1) - 2*(y - 1)")]);
    says(&bench, "Adding y steadily lowers y itself in the long run (numerical), and taking it raises it.");
    // y helps x directly by 1/2, and feeds z with 2, which costs x as much again each: 1/2 − 2 in all.
    let bench = linear(&[("x", "0.5*(y - 1) - (x - 1) - (z - 1)"), ("y", "1 - y"), ("z", "2*(y - 1) - (z - 1)")]);
    says(
        &bench,
        "One more of y raises the growth of x at once (proved), yet adding y steadily lowers x in the long run (numerical); \
         taking works the other way. One effect between two species turns round in the long run.",
    );
    // The same without direct help.
    let bench = linear(&[("x", "(1 - x) - (z - 1)"), ("y", "1 - y"), ("z", "2*(y - 1) - (z - 1)")]);
    says(
        &bench,
        "One more of y does not change the growth of x at once (proved), yet adding y steadily lowers x in the long run \
         (numerical); taking works the other way.",
    );
    let bench = linear(&[("x", "x - 1")]);
    says(&bench, "Not stable: the long run says where the state moves, not where paths go.");
}

#[test]
fn what_cannot_be_trusted_is_said() {
    let bench = linear(&[("x", "(y - 1) - (x - 1)"), ("y", "(x - 1) - 1.000000001*(y - 1)")]);
    says(&bench, "The net effects are nearly singular: even their signs may be wrong.");
    says(&bench, "Nearly singular: fewer than half of the digits of these numbers are good.");
    let mut bench =
        Bench::of("title: kink\ntime: yr\nspecies: {x: {upper: 4}}\nchange: {x: \"x*min(1 - x, 2 - 2*x)\"}\n");
    bench.press("i<End>");
    says(&bench, "There is no linear part here.");
    // The algae's answer to phosphorus cancels: what is left of it is rounding, and has no sign.
    let mut bench = Bench::open("millgate-ponds");
    bench.press("i<End>");
    let row = |head: &str| bench.text().lines().rfind(|line| line.starts_with(head)).map(str::to_owned).unwrap();
    assert!(row("A  ").split_whitespace().nth(1).unwrap().starts_with('?'), "{}", bench.text());
    bench.shows(&["? sign undecided"]);
}

#[test]
fn large_tables_scroll() {
    let rows: Vec<(String, String)> = (1..=30).map(|i| (format!("x{i}"), format!("{i}*(1 - x{i})"))).collect();
    let rows: Vec<(&str, &str)> = rows.iter().map(|(name, rate)| (name.as_str(), rate.as_str())).collect();
    for [columns, lines] in SIZES {
        let mut bench = linear(&rows).at([columns, lines]);
        bench.shows(&["-1.000", "of 30"]);
        bench.hides(&["-30.00"]);
        bench.press(&"]".repeat(40));
        bench.press(&"}".repeat(40));
        bench.shows(&["-30.00", "to 30"]);
        bench.press("<Tab>");
        bench.shows(&["+0.03333"]);
        bench.press(&"[".repeat(40));
        bench.press(&"{".repeat(40));
        bench.shows(&["+1.000", "columns 1 to"]);
    }
}

#[test]
fn what_is_saved_has_both_tables() {
    let mut bench = Bench::of(
        "title: two\ntime: yr\nspecies: {S: {upper: 20}, C: {upper: 20}}\nchange: {S: S*(10 - S - C), C: C*(S - 4)}\n",
    );
    bench.press("i<End>");
    let saved = text(&bench.app).unwrap();
    for part in ["scenario: base\n", "Direct effects", "-4.000", "Net effects", "+0.2500", "One more of C", "authority"]
    {
        assert!(saved.contains(part), "no {part} in\n{saved}");
    }
    assert_eq!(written(&mut bench, "who.txt"), saved);
    let saved = rows(&bench.app).unwrap();
    assert_eq!(saved.rows.len(), 8);
    assert_eq!(saved.headings, ["effects", "answer of", "press on", "number", "sign", "sign is"]);
    let row = |place: usize| Value::from(saved.rows[place].clone());
    assert_eq!(row(1), json!(["direct", "S", "C", -4.0, "minus", "proved"]));
    let quarter = saved.rows[6][3].as_f64().unwrap();
    assert!((quarter - 0.25).abs() < 1e-12, "{quarter}");
    assert_eq!(row(6), json!(["net", "C", "S", quarter, "plus", "numerical"]));
}

/// The models of `scenarios`.
fn all() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let files = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let mut models: Vec<PathBuf> = files.filter(|path| path.extension().is_some_and(|end| end == "yaml")).collect();
    models.sort();
    models
}

/// Every line within its width, and the lines of all screens where they belong.
#[track_caller]
fn is_whole(bench: &Bench, columns: usize, rows: usize) {
    let text = bench.text();
    let lines: Vec<&str> = text.lines().collect();
    assert_eq!(lines.len(), rows, "{text}");
    assert!(lines.iter().all(|line| line.width() <= columns), "{text}");
    assert!(lines[rows - 1].starts_with("h help") && lines[0].contains(" of "), "{text}");
    assert!(!text.contains("NaN") && !text.contains("inf "), "{text}");
}

#[test]
fn every_shipped_model_fits_every_size() {
    let models = all();
    assert!(models.len() > 10);
    for path in models {
        let mut bench = Bench::empty().with(&path);
        for [columns, rows] in SIZES.into_iter().chain([[59, 30]]) {
            bench = bench.at([columns, rows]);
            for keys in ["i<End>", "<Tab>t", "}]", "<Up>", "<Home>t<Tab>", "a<End>", "<Tab>..", "]<Up>", "<Home>"] {
                bench.press(keys);
                if columns >= 60 {
                    is_whole(&bench, columns.into(), rows.into());
                }
            }
        }
    }
}
