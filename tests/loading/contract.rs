//! The contract's own example, read as it stands, and the forms of every key that it does not use.

#![expect(clippy::panic, reason = "a helper of tests")]

use std::collections::BTreeMap;

use restpoint::diag::render::render;
use restpoint::model::load::{Files, load};
use restpoint::model::{
    Accounting, Aim, Draw, Entry, Model, Name, ParameterId, Role, ShorthandId, SpeciesId, TimeKind, When,
};

struct Memory(BTreeMap<&'static str, &'static str>);

impl Files for Memory {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        self.0.get(path).map(|text| text.as_bytes().to_vec()).ok_or_else(|| "there is no such file".to_owned())
    }
}

fn model_with(text: &str, files: &[(&'static str, &'static str)]) -> Model {
    let files = Memory(files.iter().copied().collect());
    let (model, sources, found) = load("m.yaml", text.as_bytes(), &files);
    let shown: String = found.iter().map(|diagnostic| render(diagnostic, &sources, false)).collect();
    model.unwrap_or_else(|| panic!("{shown}"))
}

fn model(text: &str) -> Model {
    model_with(text, &[])
}

fn example() -> Model {
    model(include_str!("../files/contract_example.yaml"))
}

#[test]
fn the_example_means_what_it_says() {
    let model = example();
    assert_eq!(model.title.value, "Vadholm bank, sprat and cod under three fishing plans");
    assert_eq!((model.time_unit.value.as_str(), &model.time), ("yr", &TimeKind::Continuous));
    let species: Vec<_> =
        model.species.iter().map(|s| (s.name.as_str(), s.symbol.as_str(), s.lower, s.upper)).collect();
    assert_eq!(species, [("sprat", "S", 0.0, Some(1500.0)), ("cod", "C", 0.0, Some(400.0))]);
    let values: Vec<_> = model.parameters.iter().map(|p| (p.name.as_str(), p.value, p.control)).collect();
    assert_eq!(values[..3], [("r", 0.9, false), ("K", 900.0, false), ("a", 0.012, false)]);
    assert_eq!(values[8..], [("E", 1.0, true), ("Q", 0.0, true)]);
    let capacity = &model.parameters[1];
    assert_eq!(capacity.range.as_ref().map(|range| range.value), Some([700.0, 1100.0]));
    assert_eq!(capacity.draw.as_ref().map(|draw| draw.value), Some(Draw::Uniform));
    assert_eq!(capacity.note.as_deref(), Some("acoustic survey over 9 years"));
    assert_eq!(model.parameters[2].draw.as_ref().map(|draw| draw.value), Some(Draw::Lognormal { cv: 0.2 }));
    assert_eq!(model.parameters[8].draw, None, "a control is set, not drawn");
    assert_eq!(model.parameters[2].unit.as_ref().map(|unit| unit.value.as_str()), Some("1/(kt*yr)"));
    assert_eq!(model.names["intake"], Name::Shorthand(ShorthandId(0)));
    assert_eq!(model.names["C"], Name::Species(SpeciesId(1)));
    assert_eq!(model.names["r"], Name::Parameter(ParameterId(0)));
    let processes: Vec<_> = model.processes.iter().map(|p| (p.name.as_str(), p.rate.text.as_str())).collect();
    assert_eq!(processes, [("sprat growth", "r*S*(1 - S/K)"), ("predation", "intake*C"), ("cod mortality", "m*C")]);
    let effect: Vec<_> = model.processes[1].effect.iter().map(|t| (t.species.0, t.formula.text.as_str())).collect();
    assert_eq!(effect, [(0, "-1"), (1, "e")]);
    assert_eq!(model.sketch, Some([SpeciesId(0), SpeciesId(1)]));
    let now: Vec<_> = model.now.iter().map(|s| (s.species.0, s.value, s.cv)).collect();
    assert_eq!(now, [(0, 610.0, Some(0.2)), (1, 35.0, None)]);
}

#[test]
fn places_in_formulas_are_places_in_the_file() {
    let model = example();
    let rate = &model.processes[0].rate;
    let at = rate.locate(restpoint::diag::Span::new(5, 12));
    let text = &model.sources.get(at.source).expect("the model file").text;
    assert_eq!(&text[at.span.start..at.span.end], "1 - S/K");
}

#[test]
fn line_breaks_and_marks_of_other_systems_change_nothing() {
    let plain = include_str!("../files/contract_example.yaml");
    let foreign = model(&format!("\u{feff}{}", plain.replace('\n', "\r\n")));
    let rate = &foreign.processes[0].rate;
    let at = rate.locate(restpoint::diag::Span::new(5, 12));
    let text = &foreign.sources.get(at.source).expect("the model file").text;
    assert_eq!(&text[at.span.start..at.span.end], "1 - S/K");
    assert_eq!(foreign.base_values(), example().base_values());
    assert_eq!(foreign.names, example().names);
}

#[test]
fn scenarios_lie_over_the_base() {
    let model = example();
    let names = |scenario| model.harvests_under(scenario).iter().map(|h| h.name.as_str()).collect::<Vec<_>>();
    let [present, half, quota] = ["present fleet", "half the effort", "fixed quota"]
        .map(|name| model.scenario(name).expect("a scenario of the example"));
    assert_eq!([names(present), names(half), names(quota)], [vec!["trawl"], vec!["trawl"], vec!["quota"]]);
    let value = |scenario, parameter: usize| model.values(scenario, &[]).expect("finite")[parameter];
    assert_eq!([value(present, 8), value(half, 8), value(quota, 9)], [1.0, 0.5, 60.0]);
    let set = model.values(half, &[(ParameterId(8), 3.0)]).expect("finite");
    assert_eq!(set[8], 3.0, "what is set on the command line comes last");
    let mut drawn = model.base_values();
    drawn[8] = 4.0;
    assert_eq!(model.values_over(&drawn, half, &[]).expect("finite")[8], 2.0, "formulas see the draw");
    assert!(model.values(half, &[(ParameterId(8), f64::NAN)]).is_err());
    assert_eq!(model.processes_under(quota).len(), 3);
}

#[test]
fn replaced_parts_keep_their_place_and_added_ones_come_last() {
    let model = model(
        "title: T\ntime: yr\nspecies: {N: {upper: 9}}\n\
         processes: {one: {rate: N, effect: {N: 1}}, two: {rate: N, effect: {N: -1}}, three: {rate: 1, effect: {N: 1}}}\n\
         harvest: {x: {takes: {N: 1}}}\n\
         scenarios:\n  new:\n    without: [three]\n    processes: {four: {rate: 4, effect: {N: 1}}, one: {rate: 5, effect: {N: 1}}}\n\
         \x20   harvest: {y: {takes: {N: 2}}, x: {counts: {N: 3}}}\n",
    );
    let processes: Vec<_> = model.processes_under(0).iter().map(|p| format!("{} {}", p.name, p.rate.text)).collect();
    assert_eq!(processes, ["one 5", "two N", "four 4"]);
    let harvests: Vec<_> =
        model.harvests_under(0).iter().map(|h| format!("{} {}", h.name, h.amounts[0].formula.text)).collect();
    assert_eq!(harvests, ["x 3", "y 2"]);
}

#[test]
fn a_discrete_model_with_every_word() {
    let model = model(
        "title: T\ntime: {unit: month, step: 0.5}\n\
         species:\n  young hare: {symbol: η, population: hare, lower: 1, upper: 9, unit: ind/km2}\n\
         \x20 adult hare: {symbol: A, population: hare, aim: remove}\n  fleet: {role: fleet}\n  grass: {role: resource}\n\
         shorthand: {later: earlier + 1, earlier: 2*A}\n\
         next: {η: later, A: '0.5*A +\n    η', fleet: fleet, grass: grass}\n\
         harvest: {hunt: {when: before, takes: {A: 0.1*A}, price: {A: 2}, cost: 1}, seen: {counts: {η: η}}}\n",
    );
    assert_eq!(model.time, TimeKind::Discrete { step: 0.5 });
    let roles: Vec<_> = model.species.iter().map(|s| s.role).collect();
    assert_eq!(roles, [Role::Population, Role::Population, Role::Fleet, Role::Resource]);
    assert_eq!((model.species[1].aim, model.species[0].aim), (Aim::Remove, Aim::Keep));
    assert_eq!(model.species[0].population.as_deref(), Some("hare"));
    let order: Vec<_> = model.shorthand.iter().map(|s| s.name.as_str()).collect();
    assert_eq!(order, ["earlier", "later"]);
    assert_eq!(model.names["later"], Name::Shorthand(ShorthandId(1)));
    assert_eq!(model.next.len(), 4);
    assert_eq!(model.next[1].formula.text, "0.5*A + η");
    let [hunt, seen] = model.harvest.as_slice() else { panic!("two harvests") };
    assert_eq!((hunt.when, hunt.accounting, hunt.price.len()), (When::Before, Accounting::Takes, 1));
    assert_eq!((seen.when, seen.accounting, seen.cost.is_some()), (When::After, Accounting::Counts, false));
    assert_eq!(model.scenarios.len(), 1);
    assert_eq!((model.scenarios[0].name.as_str(), model.scenarios[0].at), ("base", model.title.at));
}

#[test]
fn draws_of_every_kind() {
    let model = model_with(
        "title: T\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: a + b + c + d + f + g}\nparameters:\n\
         \x20 a: {value: 1, draw: {normal: {sd: 0.5}}, min: 0}\n  b: {value: 1, range: [0, 3], draw: {triangular: {}}}\n\
         \x20 c: {value: 1, range: [0, 3], draw: {beta: {a: 2, b: 5}}}\n  d: {value: 1, range: [0, 3], draw: {uniform: {}}}\n\
         \x20 f: {value: 1, range: [0, 3]}\n  g: 0\n\
         correlations: [{between: [b, a], rank: -0.4}]\ndraws: posterior.csv\n",
        &[("posterior.csv", "g, f\n1, 2e-1\n-3,+4\n")],
    );
    let draws: Vec<_> = model.parameters.iter().map(|p| p.draw.as_ref().map(|draw| draw.value)).collect();
    let expected = [
        Some(Draw::Normal { sd: 0.5 }),
        Some(Draw::Triangular),
        Some(Draw::Beta { a: 2.0, b: 5.0 }),
        Some(Draw::Uniform),
        None,
        None,
    ];
    assert_eq!(draws, expected);
    let table = model.draws.expect("a table");
    assert_eq!(table.columns, [ParameterId(5), ParameterId(4)]);
    assert_eq!(table.values, [1.0, 0.2, -3.0, 4.0]);
    assert_eq!(model.correlations[0].between, [ParameterId(1), ParameterId(0)]);
}

#[test]
fn a_lotka_volterra_block_in_the_file_and_from_tables_is_the_same() {
    let inline = model(
        "title: T\ntime: yr\nparameters: {g: 0.8}\nspecies: {hare: {symbol: H, upper: 500}, lynx: {symbol: P}}\n\
         lotka_volterra:\n  upper: 700\n  growth: {H: g, P: -0.2}\n  matrix: {H: {H: -0.001, P: -0.02}, P: {H: \"min(g, 1)/80\"}}\n",
    );
    let tables = model_with(
        "title: T\ntime: yr\nparameters: {g: 0.8}\nspecies: {hare: {symbol: H, upper: 500}}\n\
         lotka_volterra: {growth: r.csv, matrix: a.csv, upper: 700}\n",
        &[
            ("r.csv", "\u{feff}symbol,growth\r\nP,-0.2\r\nH,g\r\n"),
            ("a.csv", ",P,H\nP,0,\"min(g, 1)/80\"\n H , -0.02 , -1e-3\n"),
        ],
    );
    for model in [&inline, &tables] {
        let species: Vec<_> = model.species.iter().map(|s| (s.symbol.as_str(), s.upper)).collect();
        assert_eq!(species, [("H", Some(500.0)), ("P", Some(700.0))]);
        let block = model.block.as_ref().expect("a block");
        let shown = |entry: &Entry| match entry {
            Entry::Number(value) => value.to_string(),
            Entry::Formula(formula) => formula.text.clone(),
        };
        assert_eq!(block.growth.iter().map(shown).collect::<Vec<_>>(), ["g", "-0.2"]);
        assert_eq!(block.matrix.iter().map(shown).collect::<Vec<_>>(), ["-0.001", "-0.02", "min(g, 1)/80", "0"]);
    }
}

#[test]
fn anchors_and_comments_are_plain_yaml() {
    let model = model(
        "# A comment\n---\ntitle: T\ntime: yr\nspecies: {N: {upper: 9}, M: {upper: 9}}\n\
         processes:\n  a: {rate: &rate 0.1*N, effect: &effect {N: 1}}\n  b: {rate: *rate, effect: *effect}\n...\n",
    );
    assert_eq!(model.processes[1].rate, model.processes[0].rate);
    assert_eq!(model.processes[1].effect, model.processes[0].effect);
}
