//! Any bytes as a model file and the tables it names: no panic, no hang, every message placed inside the text; and a
//! sound model assembles, is linted and shown, divides, differentiates and runs.
//!
//! The tables stand behind the model, each after a line `=====`, in the order in which they are read.
#![no_main]

use std::cell::Cell;

use libfuzzer_sys::fuzz_target;
use restpoint::diag::render::render;
use restpoint::expr::tape::Tape;
use restpoint::model::Model;
use restpoint::model::lint::lint;
use restpoint::model::load::{Files, load};
use restpoint::model::system::System;
use restpoint::model::units::check_units;
use restpoint::report::check::{Style, Subject, json, text};

const BORDER: &[u8] = b"\n=====\n";

/// Models of more species are loaded, but not differentiated: the time is better spent on other inputs.
const MOST_SPECIES: usize = 8;

/// The texts behind the model, one a read.
struct Behind<'b> {
    tables: Vec<&'b [u8]>,
    next: Cell<usize>,
}

impl Files for Behind<'_> {
    fn read(&self, _path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        let place = self.next.replace(self.next.get() + 1);
        self.tables.get(place).map(|table| table.to_vec()).ok_or_else(|| "there is no such file".to_owned())
    }
}

fn split(mut bytes: &[u8]) -> Vec<&[u8]> {
    let mut texts = Vec::new();
    while let Some(place) = bytes.windows(BORDER.len()).position(|window| window == BORDER) {
        texts.push(&bytes[..=place]);
        bytes = &bytes[place + BORDER.len()..];
    }
    texts.push(bytes);
    texts
}

fn assemble(model: &Model) {
    let Ok(mut system) = System::new(model, &[]) else { return };
    let bounds = system.bounds(model).ok();
    let warnings = bounds.as_ref().map_or_else(Vec::new, |bounds| lint(model, &system, bounds));
    let subject = Subject { model, units: &check_units(model), bounds: bounds.as_deref(), warnings: &warnings };
    let shown = text(&subject, Style::Unicode);
    assert!(!shown.chars().any(|c| c.is_control() && c != '\n'), "control characters in {shown:?}");
    json(&subject);
    if model.species.len() > MOST_SPECIES {
        return;
    }
    let state = vec![1.0; model.species.len()];
    for plan in system.plans.clone() {
        for (i, &row) in plan.rows.iter().enumerate() {
            system.graph.divide(row, i);
        }
        let jacobian = system.graph.jacobian(&plan.rows);
        let tape = Tape::new(&system.graph, &jacobian);
        tape.start(&plan.values).at(&state);
    }
}

fuzz_target!(|bytes: &[u8]| {
    let texts = split(bytes);
    let files = Behind { tables: texts[1..].to_vec(), next: Cell::new(0) };
    let (model, sources, found) = load("fuzz.yaml", texts[0], &files);
    for diagnostic in &found {
        let text = render(diagnostic, &sources, false);
        assert!(text.contains(':'), "no place in {text}");
        assert!(!text.chars().any(|c| c.is_control() && c != '\n'), "control characters in {text:?}");
    }
    assert_eq!(model.is_none(), !found.is_empty(), "a model or messages, not both or neither");
    if let Some(model) = model {
        assemble(&model);
    }
});
