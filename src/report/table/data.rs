//! The table as JSON: the contract's keys in the contract's order, then our own; see the [module's head](super).

use serde_json::{Map, Value, json};

use crate::analysis::equilibria::{Probably, Unresolved};
use crate::diag::Diagnostic;
use crate::diag::render::position;
use crate::model::{ParameterId, Scenario, TimeKind};
use crate::num::interval::Interval;

use super::columns::{Column, Shown};
use super::scene::name as scenario_name;
use super::{Row, Scene, Solved, Table, exact, paths, words};

/// The table as a JSON object.
pub fn json(table: &Table<'_>) -> Value {
    let scenarios = table.named().map(|(scene, ids)| match &scene.outcome {
        Ok(solved) => scenario(table, scene, solved, ids),
        Err(problems) => failed(table, scene, problems),
    });
    framed(table, &[], scenarios.collect())
}

/// Scenarios between what they are of, with keys of the whole before them, and how they were made.
pub(in crate::report) fn framed(table: &Table<'_>, before: &[(&str, Value)], scenarios: Vec<Value>) -> Value {
    let mut all = json!({
        "tool": {"name": "restpoint", "version": env!("CARGO_PKG_VERSION")},
        "model": model(table),
    });
    for (key, value) in before {
        all[*key] = value.clone();
    }
    all["scenarios"] = scenarios.into();
    all["run"] = json!({
        "command": table.command,
        "set": table.set.iter().map(|&(id, value)| (table.parameter(id), exact(value))).collect::<Map<_, _>>(),
        "budget": {"seconds": table.limits.seconds, "boxes": table.limits.boxes},
        "interrupted": table.interrupted,
    });
    all["caution"] = words::CAUTION.into();
    all
}

fn model(table: &Table<'_>) -> Value {
    let time = match table.model.time {
        TimeKind::Continuous => "continuous",
        TimeKind::Discrete { .. } => "discrete",
    };
    let mut model = json!({"title": table.model.title.value, "sha256": table.sha256, "time": time});
    if let (Value::Object(model), false) = (&mut model, table.tables.is_empty()) {
        let tables = table.tables.iter().map(|(file, sha256)| json!({"file": file, "sha256": sha256}));
        model.insert("tables".to_owned(), tables.collect());
    }
    model
}

fn scenario(table: &Table<'_>, scene: &Scene, solved: &Solved, ids: &[String]) -> Value {
    let values = table.model.parameters.iter().zip(&solved.values);
    let unresolved: Vec<Value> = solved.equilibria.unresolved.iter().map(|one| self::unresolved(table, one)).collect();
    let place = paths::Place { table, scenario: scene.scenario, ids };
    let from_now = solved.assessment.from_now.as_ref().map(|from| paths::from_now(place, from));
    let columns = table.columns(&[Shown::Everywhere, Shown::Files, Shown::Json]);
    let equilibria: Vec<Value> = table.rows(scene, solved, ids).iter().map(|row| equilibrium(&columns, row)).collect();
    let mut all = json!({
        "name": scenario_name(table.model, scene),
        "parameters": values.map(|(parameter, &value)| (parameter.name.clone(), exact(value))).collect::<Map<_, _>>(),
        "search": {
            "box": search_box(table),
            "complete": solved.equilibria.complete,
            "beyond": words::beyond(&solved.equilibria),
            "unresolved": unresolved,
        },
        "from_now": from_now,
        "equilibria": equilibria,
        "overlay": table.model.scenarios.get(scene.scenario).map(|scenario| overlay(table, scenario, solved)),
    });
    let unfollowed = table.unfollowed(scene);
    if !unfollowed.is_empty() {
        all["names"] = json!(unfollowed);
    }
    all
}

fn search_box(table: &Table<'_>) -> Value {
    let sides = table.model.species.iter().zip(table.bounds);
    Value::Object(sides.map(|(species, side)| (species.symbol.clone(), pair(side.lower, side.upper))).collect())
}

fn equilibrium(columns: &[&Column], row: &Row<'_>) -> Value {
    let mut entries: Map<String, Value> = Map::new();
    for key in columns.iter().flat_map(|column| column.keys) {
        let value = key.get.value(row);
        // There is a reason only where something is missing.
        if key.name != "why" || !value.is_null() {
            entries.insert(key.name.to_owned(), value);
        }
    }
    Value::Object(entries)
}

fn unresolved(table: &Table<'_>, one: &Unresolved) -> Value {
    let side = |side: &Interval| pair(side.lo(), side.hi());
    let species = table.model.species.iter().zip(&one.region);
    let sides: Map<String, Value> =
        species.map(|(species, interval)| (species.symbol.clone(), side(interval))).collect();
    let mut open = json!({"box": sides, "probably": words::probably(one.probably), "text": one.text});
    if one.probably == Probably::Continuum {
        let symbols = || table.model.species.iter().map(|species| species.symbol.clone());
        let state = |x: &Vec<f64>| symbols().zip(x.iter().map(|&x| exact(x))).collect::<Map<_, _>>();
        open["dimension"] = json!(one.dimension);
        open["witnesses"] = json!(one.witnesses.iter().map(state).collect::<Vec<_>>());
    }
    open
}

fn pair(low: f64, high: f64) -> Value {
    json!([exact(low), exact(high)])
}

fn overlay(table: &Table<'_>, scenario: &Scenario, solved: &Solved) -> Value {
    let value = |id: ParameterId| (table.parameter(id), solved.values.get(id.0).map_or(Value::Null, |&x| exact(x)));
    let names = |names: &mut dyn Iterator<Item = &String>| names.cloned().collect::<Vec<_>>();
    json!({
        "values": scenario.values.iter().map(|&(id, _)| value(id)).collect::<Map<_, _>>(),
        "without": names(&mut scenario.without.iter().map(|name| &name.value)),
        "harvest": names(&mut scenario.harvest.iter().map(|harvest| &harvest.name)),
        "processes": names(&mut scenario.processes.iter().map(|process| &process.name)),
    })
}

/// The contract has one error a scenario: the first.
pub(in crate::report) fn failed(table: &Table<'_>, scene: &Scene, problems: &[Diagnostic]) -> Value {
    let error = problems.first().map(|problem| {
        let (file, line, column) = position(&table.model.sources, problem.at);
        json!({"file": file, "line": line, "column": column, "message": problem.message})
    });
    json!({"name": scenario_name(table.model, scene), "error": error})
}
