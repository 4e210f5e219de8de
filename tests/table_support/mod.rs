//! A table of two stocks with everything in it that a table can say, built by hand.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]
#![allow(dead_code, unreachable_pub, missing_docs, reason = "each file uses its own part")]

pub mod markdown;

use nalgebra::Complex;
use restpoint::analysis::assess::{Assessed, Assessment};
use restpoint::analysis::equilibria::{Derivative, Equilibria, Equilibrium, Probably, Unresolved};
use restpoint::analysis::linearise::{Dimensions, Kind, Linearisation, Nonlinear, Test, Unavailable, Verdict};
use restpoint::analysis::measures::{Amplification, Elasticity, Group, HarvestYield, Measures, NetEffects};
use restpoint::analysis::paths::{Cycle, Destination, FromNow};
use restpoint::diag::Diagnostic;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::bounds::Bound;
use restpoint::model::{Model, ParameterId, SpeciesId};
use restpoint::num::eigen::Spectrum;
use restpoint::num::interval::Interval;
use restpoint::report::table::{Limits, Names, Scene, Selection, Solved, Table};

/// A stand-in for the hash of a file.
pub const SHA256: &str = "00112233445566778899aabbccddeeff00112233445566778899aabbccddeeff";

/// The keys of a scenario in JSON, in the contract's order.
pub const SCENARIO_KEYS: [&str; 6] = ["name", "parameters", "search", "from_now", "equilibria", "overlay"];

/// The keys of an equilibrium in JSON, in the contract's order; then ours.
pub const EQUILIBRIUM_KEYS: [&str; 33] = [
    "id",
    "state",
    "present",
    "proven",
    "radius",
    "eigenvalues",
    "type",
    "type_proven",
    "stable",
    "stable_proven",
    "dimensions",
    "alternating",
    "nonlinear",
    "resilience",
    "return_time",
    "period",
    "damping_ratio",
    "reactivity",
    "reactivity_proportional",
    "peak_amplification",
    "invasion",
    "settles",
    "yield",
    "value",
    "net_effects",
    "elasticities",
    "covariance",
    "why",
    "reactivity_present",
    "peak_amplification_present",
    "invariability",
    "populations",
    "net_effects_condition",
];

/// [`EQUILIBRIUM_KEYS`] but for `why`, which only stands where something has no derivative.
pub fn keys_without_reason() -> Vec<&'static str> {
    EQUILIBRIUM_KEYS.into_iter().filter(|key| *key != "why").collect()
}

const TWO_STOCKS: &str = "\
title: Two stocks, größer | and = with 'odd' names
note: Invented figures, for demonstration only.
time: yr
species:
  sprat: {symbol: S, unit: kt, upper: 1500}
  κοδ: {symbol: κ, unit: kt, upper: 400.25, population: κοδ}
parameters: {r: 0.9, E: 1}
change: {S: r*S*(1 - S), κ: κ*(1 - κ)}
harvest:
  trawl: {takes: {S: 0.1*E*S, κ: 0.02*E*κ}, price: {S: 0.3}, cost: 2*E}
now: {S: {value: 610, cv: 0.2}, κ: 35}
scenarios:
  present fleet: {}
  half | the effort: {values: {E: 0.5*E}}
  broken: {}
";

/// The model of the table.
pub fn model() -> Model {
    let (model, _, found) = load("two.yaml", TWO_STOCKS.as_bytes(), &NoFiles);
    model.unwrap_or_else(|| panic!("{found:?}"))
}

/// Text of a model much like it, for runs of the program.
pub fn model_text() -> &'static str {
    TWO_STOCKS
}

fn equilibrium(state: [f64; 2], radius: f64, proven: bool, derivative: Derivative) -> Equilibrium {
    let around = |x: f64| if x == 0.0 { Interval::ZERO } else { Interval::new(x - radius * x, x + radius * x) };
    Equilibrium { state: state.to_vec(), enclosure: state.map(around).to_vec(), proven, derivative }
}

fn unresolved(sides: [[f64; 2]; 2], probably: Probably, text: &str) -> Unresolved {
    let region = sides.map(|side| Interval::new(side[0], side[1])).to_vec();
    Unresolved { region, probably, text: text.to_owned(), dimension: None, witnesses: Vec::new() }
}

/// A linear part with these eigenvalues, of which so many attract, are critical, repel.
fn linear(kind: Kind, proven: [bool; 2], values: [[f64; 2]; 2], count: [usize; 3]) -> Linearisation {
    let [stable, centre, unstable] = count;
    let is_stable = match (unstable, centre) {
        (0, 0) => Some(true),
        (0, _) => None,
        _ => Some(false),
    };
    Linearisation {
        jacobian: vec![0.0; 4],
        enclosure: Vec::new(),
        spectrum: Spectrum { values: values.map(|[re, im]| Complex::new(re, im)).to_vec(), vectors: None },
        kind,
        kind_proven: proven[0],
        stable: is_stable,
        stable_proven: proven[1],
        dimensions: Dimensions { stable, centre, unstable },
        alternating: false,
        nonlinear: None,
    }
}

fn yields(model: &Model, amounts: [f64; 2], value: f64) -> Vec<HarvestYield> {
    let amounts = amounts.iter().enumerate().map(|(i, &amount)| (SpeciesId(i), amount)).collect();
    vec![HarvestYield { name: model.harvest[0].name.clone(), amounts, value: Some(value) }]
}

/// A state of rest that winds in, with every measure.
fn measures(model: &Model) -> Measures {
    Measures {
        resilience: Some(0.11),
        return_time: Some(1.0 / 0.11),
        period: Some(14.959_965_017_094_25),
        damping_ratio: Some(0.253),
        reactivity: Some(0.31),
        reactivity_proportional: Some(0.2),
        amplification: Some(Amplification { factor: 1.6, time: 2.2 }),
        reactivity_present: Some(0.3),
        amplification_present: Some(Amplification { factor: 1.5, time: 2.0 }),
        invasion: vec![(SpeciesId(1), Some(-0.02))],
        groups: vec![Group {
            name: model.species[1].population.clone().unwrap(),
            members: vec![SpeciesId(1)],
            total: 41.25,
            invasion: Some(0.125),
        }],
        net_effects: Some(NetEffects { matrix: vec![1.5, -0.25, 0.5, 1e-9], condition: 1e9, nearly_singular: true }),
        elasticities: vec![Elasticity {
            parameter: ParameterId(0),
            state: vec![Some(0.5), None],
            leading: Some(-1.25),
        }],
        covariance: Some(vec![2.0, 0.5, 0.5, f64::NAN]),
        invariability: Some(0.05),
        yields: yields(model, [31.25, 0.5], 0.3),
    }
}

fn cycle() -> Destination {
    Destination::Cycle(Cycle {
        period: 15.2,
        lowest: vec![210.5, 11.0],
        highest: vec![480.25, 77.0],
        mean_yield: vec![vec![(SpeciesId(0), 30.5), (SpeciesId(1), 0.75)]],
    })
}

fn present_fleet(model: &Model) -> Solved {
    let nothing = linear(Kind::UnstableNode, [true, true], [[0.9, 0.0], [0.5, 0.0]], [0, 0, 2]);
    let sprat = linear(Kind::StableSpiral, [false, true], [[-0.11, 0.42], [-0.11, -0.42]], [2, 0, 0]);
    let assessed = |linear, measures| Assessed { linear: Ok(linear), measures, settles: None };
    let bare = Measures { yields: yields(model, [0.0, 0.0], -2.0), ..Measures::default() };
    let from_now = FromNow {
        reaches: Destination::Equilibrium(1),
        time: Some(14.0),
        lowest: vec![590.0, 0.0],
        shares: vec![
            (Destination::Equilibrium(1), 0.93),
            (cycle(), 0.065),
            (Destination::Loss(vec![SpeciesId(1)]), 0.005),
        ],
        starts: 200,
        broken_off: false,
    };
    Solved {
        values: vec![0.9, 1.0],
        equilibria: Equilibria {
            list: vec![
                equilibrium([0.0, 0.0], 0.0, true, Derivative::Exists),
                equilibrium([900.0, 0.0], 3e-16, true, Derivative::Exists),
            ],
            unresolved: Vec::new(),
            complete: true,
            none_above: false,
            boxes: 7,
            faces: 4,
        },
        assessment: Assessment {
            equilibria: vec![assessed(nothing, bare), assessed(sprat, measures(model))],
            from_now: Some(from_now),
        },
    }
}

fn half_the_effort(model: &Model) -> Solved {
    let corner = Assessed {
        linear: Err(Unavailable::NoDerivative(Derivative::Missing)),
        measures: Measures::default(),
        settles: None,
    };
    let critical = Linearisation {
        nonlinear: Some(Nonlinear { verdict: Verdict::SemiStable, test: Test::Fold, coefficient: -0.5, proven: false }),
        ..linear(Kind::Undecided, [true, true], [[0.0, 0.0], [-0.5, 0.0]], [1, 1, 0])
    };
    let swinging = linear(Kind::UnstableSpiral, [true, true], [[0.05, 0.4], [0.05, -0.4]], [0, 0, 2]);
    let settles = Some(cycle());
    let list = vec![
        (equilibrium([0.0, 0.0], 0.0, true, Derivative::Missing), corner),
        (equilibrium([12.0, 0.0], 3e-16, true, Derivative::Exists), assessed(critical, None)),
        (equilibrium([890.0, 0.0], 3e-16, false, Derivative::Exists), assessed(swinging, settles)),
    ];
    let (list, mut equilibria): (Vec<Equilibrium>, Vec<Assessed>) = list.into_iter().unzip();
    // The last one stays without an assessment, as where the budget ended.
    let list = [list, vec![equilibrium([312.456, 41.2], 2e-9, false, Derivative::Kink)]].concat();
    equilibria[2].measures.yields = yields(model, [1.0 / 3.0, 1e-12], 0.0);
    let open = vec![
        unresolved([[12.0, 12.5], [0.0, 0.0]], Probably::DoubleRoot, "none, one double or two equilibria"),
        unresolved([[0.0, 1500.0], [0.0, 400.25]], Probably::Budget, ""),
    ];
    Solved {
        values: vec![0.9, 0.5],
        equilibria: Equilibria { list, unresolved: open, complete: false, none_above: false, boxes: 7, faces: 4 },
        assessment: Assessment { equilibria, from_now: None },
    }
}

fn assessed(linear: Linearisation, settles: Option<Destination>) -> Assessed {
    Assessed { linear: Ok(linear), measures: Measures::default(), settles }
}

/// A scenario with nothing but proofs of states, one with everything else, one that failed.
pub fn scenes(model: &Model) -> Vec<Scene> {
    let problem = Diagnostic::error(model.scenarios[2].at, "the formulas are too many");
    let scene = |scenario, outcome| Scene { scenario, outcome };
    vec![scene(0, Ok(present_fleet(model))), scene(1, Ok(half_the_effort(model))), scene(2, Err(vec![problem]))]
}

/// Names of all equilibria, those of the second scenario out of order.
pub fn names() -> Names {
    let ids = |numbers: &[usize]| numbers.iter().map(|number| format!("E{number}")).collect();
    Names { ids: vec![ids(&[1, 2]), ids(&[1, 3, 2, 4]), Vec::new()], unfollowed: Vec::new() }
}

/// Uses the table of a model, with the columns asked for.
pub fn with_table_of<T>(model: &Model, columns: Option<&str>, use_it: impl Fn(&Table<'_>) -> T) -> T {
    let scenes = scenes(model);
    let selection = columns.map(|list| Selection::read(list).unwrap());
    let side = |upper, chosen| Bound { lower: 0.0, upper, chosen };
    use_it(&Table {
        model,
        sha256: SHA256,
        tables: &[],
        command: "restpoint table two.yaml --set E=0.5",
        set: &[(ParameterId(1), 0.5)],
        bounds: &[side(1500.0, false), side(400.25, true)],
        limits: Limits { seconds: 10.0, boxes: 50_000 },
        scenes: &scenes,
        names: &names(),
        interrupted: true,
        columns: selection.as_ref(),
    })
}

/// Uses the table with the columns that are shown by default.
pub fn with_table<T>(use_it: impl Fn(&Table<'_>) -> T) -> T {
    with_table_of(&model(), None, use_it)
}

/// Names that mean something to a format, a spreadsheet or a terminal.
pub const HOSTILE: [&str; 30] = [
    "a,b;c",
    "\"quoted\"",
    "=1+1",
    "+1",
    "-1",
    "@x",
    "  = 2",
    "a|b",
    "| --- |",
    "<b>x</b> &amp;",
    "_x_ *y* __z__",
    "50 % of it",
    "a\nb\r\nc\td",
    "\u{202e}evil",
    "\\end{tabular}",
    "`code` ``",
    "$x$ #1 ~ ^",
    "\u{1b}[31mred",
    "]]>",
    "https://x.y/z www.z.w",
    "{",
    "}",
    "\\",
    "\\\\",
    "'",
    "&",
    "--",
    "1. x",
    "- x",
    "# x",
];

/// The model with a name wherever a file may have any text.
pub fn hostile_model(name: &str) -> Model {
    let mut model = model();
    model.title.value = String::from(name);
    model.note = Some(name.to_owned());
    model.time_unit.value = String::from(name);
    model.harvest[0].name = String::from(name);
    for scenario in &mut model.scenarios {
        scenario.name = String::from(name);
    }
    for species in &mut model.species {
        species.name = String::from(name);
        if let Some(unit) = &mut species.unit {
            unit.value = String::from(name);
        }
    }
    model.species[0].symbol = String::from("S_1");
    model.species[1].population = Some(name.to_owned());
    model
}
