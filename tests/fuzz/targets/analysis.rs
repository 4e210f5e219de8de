//! Any text that is a sound model, through all that is said of it: search, linear part, measures, paths, the table in all
//! formats and the sketch. No panic, no hang, no number that is none, nothing proved of a list that is not.
//!
//! Budgets are counts, so that a run says the same however fast the machine is.
#![no_main]

use std::sync::atomic::{AtomicUsize, Ordering};

use libfuzzer_sys::fuzz_target;
use restpoint::analysis::assess::{Assessment, assess};
use restpoint::analysis::equilibria::{Budget, Equilibria, OneByOne, all};
use restpoint::analysis::field::{LINEAR, Slice};
use restpoint::analysis::passage::{Found, Ways, identify};
use restpoint::analysis::prepare::Prepared;
use restpoint::analysis::subject::Subject;
use restpoint::model::Model;
use restpoint::model::load::{NoFiles, load};
use restpoint::report::sketch::{self, Picture, Plot, Size, View};
use restpoint::report::table::{
    Limits, Names, Page, Scene, Selection, Solved, Style, Table, csv, json, latex, markdown, text,
};

/// Models of more species or scenarios take longer than they show.
const MOST_SPECIES: usize = 5;
const MOST_SCENARIOS: usize = 3;

/// Boxes on a face.
const BOXES: usize = 60;

/// How often the budget is asked until it ends: during the search, and after it.
const SEARCH_ASKS: usize = 2_000;
const PATH_ASKS: usize = 40;
const NAMING_ASKS: usize = 5_000;

fn asked(most: usize) -> impl Fn() -> bool + Sync {
    let count = AtomicUsize::new(0);
    move || count.fetch_add(1, Ordering::Relaxed) >= most
}

fn solved(subject: &mut Subject<'_>) -> Solved {
    let values = subject.plan.values.clone();
    let stop = asked(SEARCH_ASKS);
    let budget = Budget { boxes: BOXES, stop: &stop, workers: &OneByOne, observer: None };
    let (graph, problem) = subject.problem();
    let equilibria = all(graph, &problem, &budget);
    let assessment = assess(subject, &equilibria, &asked(PATH_ASKS));
    hold(&equilibria, &assessment);
    Solved { values, equilibria, assessment }
}

/// What must be so of any model.
fn hold(equilibria: &Equilibria, assessment: &Assessment) {
    assert_eq!(equilibria.list.len(), assessment.equilibria.len(), "one assessment each");
    assert!(!equilibria.none_above || equilibria.complete, "none above an open box");
    for (equilibrium, assessed) in equilibria.list.iter().zip(&assessment.equilibria) {
        assert!(equilibrium.state.iter().all(|x| x.is_finite() && *x >= 0.0), "a state: {equilibrium:?}");
        let Ok(linear) = &assessed.linear else { continue };
        let claims = linear.kind_proven || linear.stable_proven || linear.nonlinear.is_some_and(|found| found.proven);
        assert!(equilibrium.proven || !claims, "a claim about what is not proved to be there: {linear:?}");
        let dimensions = linear.dimensions;
        let count = dimensions.stable + dimensions.centre + dimensions.unstable;
        assert_eq!(count, equilibrium.state.len(), "every eigenvalue counts once");
    }
}

fn shown(table: &Table<'_>) {
    let page = |style| Page { width: 80, style, color: false };
    for style in [Style::Unicode, Style::Ascii] {
        for text in
            [text(table, page(style)), markdown(table, page(style)), latex(table, page(style)), csv(table, style)]
        {
            assert!(!text.contains("NaN"), "no number in {text}");
            assert!(!text.chars().any(|c| c.is_control() && !"\n\r".contains(c)), "control characters in {text:?}");
        }
    }
    json(table);
}

fn drawn(model: &Model, prepared: &Prepared, scenes: &[Scene], names: &Names) {
    let found: Vec<&Solved> = scenes.iter().filter_map(|scene| scene.outcome.as_ref().ok()).collect();
    let axes = Slice::axes(model);
    let window = sketch::window(model, &prepared.bounds, &found, axes);
    for ((scene, solved), ids) in scenes.iter().zip(&found).zip(&names.ids) {
        let Ok(mut subject) = prepared.subject(model, scene.scenario) else { return };
        let slice = Slice::new(&subject, axes, &solved.equilibria, &solved.assessment);
        let scales = LINEAR;
        let view = View { model, scenario: scene.scenario, solved, ids, slice: &slice, window, scales };
        let picture = Picture::new(&mut subject, &view, &Plot::of(Size { columns: 30, rows: 10 }));
        sketch::text(&view, &picture, Page { width: 30, style: Style::Ascii, color: false });
    }
}

/// Names of all; no two of a scenario are the same.
fn named(ways: &mut Ways, scenes: &[Scene]) -> Names {
    let all: Vec<Option<Found<'_>>> = scenes
        .iter()
        .map(|scene| {
            let solved = scene.outcome.as_ref().ok()?;
            Some(Found { scenario: scene.scenario, list: &solved.equilibria.list })
        })
        .collect();
    let identities = identify(ways, &all, &asked(NAMING_ASKS));
    for (numbers, found) in identities.numbers.iter().zip(&all) {
        let mut once = numbers.clone();
        once.sort_unstable();
        once.dedup();
        assert_eq!(Some(once.len()), found.map(|found| found.list.len()), "a name for each");
    }
    Names::new(&identities)
}

fn everything(model: &Model) {
    if model.species.len() > MOST_SPECIES || model.scenarios.len() > MOST_SCENARIOS {
        return;
    }
    let Ok(prepared) = Prepared::new(model, &[]) else { return };
    let subjects: Result<Vec<_>, _> = (0..model.scenarios.len()).map(|k| prepared.subject(model, k)).collect();
    let Ok(subjects) = subjects else { return };
    let scene = |(scenario, mut subject): (usize, Subject<'_>)| Scene { scenario, outcome: Ok(solved(&mut subject)) };
    let scenes: Vec<Scene> = subjects.into_iter().enumerate().map(scene).collect();
    let names = named(&mut Ways::new(model, &prepared), &scenes);
    let selection = Selection::read("all").ok();
    let table = Table {
        model,
        sha256: "",
        tables: &[],
        command: "restpoint table fuzz.yaml",
        set: &[],
        bounds: &prepared.bounds,
        limits: Limits { seconds: 1.0, boxes: BOXES },
        scenes: &scenes,
        names: &names,
        interrupted: false,
        columns: selection.as_ref(),
    };
    shown(&table);
    drawn(model, &prepared, &scenes, &names);
}

fuzz_target!(|bytes: &[u8]| {
    if let (Some(model), _, _) = load("fuzz.yaml", bytes, &NoFiles) {
        everything(&model);
    }
});
