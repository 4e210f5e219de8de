//! Files that are almost right: whatever is done to a model, the answer is a model or placed errors, never a crash.

use proptest::prelude::*;
use restpoint::diag::render::{position, render};
use restpoint::diag::{Diagnostic, Sources};
use restpoint::model::load::{Files, load};

const EXAMPLE: &str = include_str!("../files/contract_example.yaml");

const DISCRETE: &str = "\
title: T
time: {unit: yr, step: 1}
species: {hare: {symbol: H, upper: 9}, lynx: {symbol: Λ, upper: 9, role: fleet}}
parameters: {r: {value: 1, range: [0, 2]}, k: {value: 2, draw: {normal: {sd: 0.1}}, min: 0}, q: 1}
shorthand: {a: r*H, b: \"max(a, q)\"}
next: {H: 'H +
  b', Λ: Λ}
harvest: {hunt: {when: before, takes: {H: 0.1*H}, price: {H: 2}, cost: q}}
correlations: [{between: [r, k], rank: 0.5}]
draws: draws.csv
scenarios: {now: {}, none: {without: [hunt], values: {q: 2*q}}}
";

const TABLES: &str = "\
title: T
time: yr
lotka_volterra: {growth: growth.csv, matrix: matrix.csv, upper: 9}
parameters: {q: 1}
";

const MATRIX: &str = ",S,M\nS,-1,0.5\nM,q,\"-2\"\n";

/// Pieces that mean something to the reader.
const PIECES: &[&str] = &[
    "",
    " ",
    "\n",
    "\n  ",
    "\t",
    ":",
    ": ",
    ",",
    ", ",
    "{",
    "}",
    "[",
    "]",
    "(",
    ")",
    "'",
    "\"",
    "*",
    "&a ",
    "*a",
    "|",
    ">-",
    "#",
    "- ",
    "? ",
    "!",
    "%",
    "@",
    "~",
    "null",
    "true",
    ".inf",
    ".nan",
    "-1",
    "0",
    "1e999",
    "1,5",
    "é",
    "\u{202e}",
    "\\",
    "S",
    "C",
    "sprat",
    "t",
    "e",
    "min(S, C)",
    "<<: ",
    "---\n",
    "symbol: S",
    "upper: 0",
    "range: [1, 0]",
    "{}",
    "[]",
    "time: {unit: yr, step: 1}\n",
    "next: {S: S}\n",
    "species",
    "lotka_volterra: {growth: growth.csv, matrix: matrix.csv}\n",
];

/// Tables in memory, one of them cut and mended like the model.
struct Odd(String);

impl Files for Odd {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        match path {
            "growth.csv" => Ok(b"symbol,growth\nS,1\nM,\"q*2\"\n".to_vec()),
            "matrix.csv" => Ok(self.0.clone().into_bytes()),
            "draws.csv" => Ok(b"q\n1\n2\n".to_vec()),
            _ => Err("there is no such file".to_owned()),
        }
    }
}

fn changed(text: &str, changes: &[(usize, usize, usize)]) -> String {
    let mut characters: Vec<char> = text.chars().collect();
    for &(at, cut, piece) in changes {
        let at = at % (characters.len() + 1);
        let end = (at + cut).min(characters.len());
        characters.splice(at..end, PIECES[piece % PIECES.len()].chars());
    }
    characters.into_iter().collect()
}

fn is_placed(diagnostic: &Diagnostic, sources: &Sources) -> bool {
    let places = std::iter::once(diagnostic.at).chain(diagnostic.related.iter().map(|(at, _)| *at));
    let inside = |at: restpoint::diag::Location| {
        let text = sources.get(at.source).map_or("", |source| source.text.as_str());
        at.span.start <= at.span.end && text.get(at.span.start..at.span.end).is_some()
    };
    let (name, line, column) = position(sources, diagnostic.at);
    places.into_iter().all(inside) && render(diagnostic, sources, false).contains(&format!("{name}:{line}:{column}"))
}

#[test]
fn the_models_are_sound_before_they_are_changed() {
    for text in [EXAMPLE, DISCRETE, TABLES] {
        let (_, sources, found) = load("m.yaml", text.as_bytes(), &Odd(MATRIX.to_owned()));
        let shown: String = found.iter().map(|diagnostic| render(diagnostic, &sources, false)).collect();
        assert_eq!(shown, "");
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, failure_persistence: None, ..ProptestConfig::default() })]
    #[test]
    fn whatever_is_changed_the_answer_is_a_model_or_placed_errors(
        which in 0_usize..3,
        changes in proptest::collection::vec((0_usize..4000, 0_usize..12, 0_usize..60), 0..4),
        table in proptest::collection::vec((0_usize..40, 0_usize..6, 0_usize..60), 0..2),
    ) {
        let text = changed([EXAMPLE, DISCRETE, TABLES][which], &changes);
        let files = Odd(changed(MATRIX, &table));
        let (model, sources, found) = load("m.yaml", text.as_bytes(), &files);
        prop_assert_eq!(model.is_none(), !found.is_empty(), "{}", text);
        for diagnostic in &found {
            prop_assert!(is_placed(diagnostic, &sources), "{:?} in {}", diagnostic, text);
            prop_assert!(!diagnostic.message.is_empty() && !diagnostic.message.ends_with('.'), "{:?}", diagnostic);
        }
        if let Some(model) = model {
            prop_assert!(model.parameters.iter().all(|parameter| parameter.value.is_finite()));
            prop_assert!((0..model.scenarios.len()).all(|scenario| model.values(scenario, &[]).is_ok()));
        }
    }
}
