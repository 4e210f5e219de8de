//! The report as JSON; keys are documented in the [module's head](super).

use serde_json::{Map, Value, json};

use super::equations::{community_size, equations, left_side};
use super::formula::Style;
use super::{Subject, draw_of, unit_of};
use crate::diag::Diagnostic;
use crate::diag::render::position;
use crate::model::{
    Accounting, Aim, Harvest, Model, ParameterId, Process, Role, Scenario, SpeciesId, Term, TimeKind, When,
};

/// The report as a JSON object.
pub fn json(subject: &Subject<'_>) -> Value {
    let model = subject.model;
    json!({
        "model": heading(model),
        "equations": equation_list(model),
        "community": community_size(model).map(|(species, entries)| json!({"species": species, "entries": entries})),
        "shorthand": shorthand(subject),
        "species": species(subject),
        "parameters": parameters(subject),
        "processes": list(&model.processes, |process| self::process(model, process)),
        "harvest": list(&model.harvest, |harvest| self::harvest(model, harvest)),
        "scenarios": list(&model.scenarios, |scenario| self::scenario(model, scenario)),
        "now": list(&model.now, |survey| {
            json!({"species": symbol(model, survey.species), "value": survey.value, "cv": survey.cv})
        }),
        "correlations": list(&model.correlations, |correlation| {
            json!({"between": correlation.between.map(|id| name(model, id)), "rank": correlation.rank})
        }),
        "draws": draws(model),
        "warnings": list(subject.warnings, |diagnostic| warning(model, diagnostic)),
    })
}

fn list<T>(items: &[T], item: impl FnMut(&T) -> Value) -> Value {
    items.iter().map(item).collect()
}

fn heading(model: &Model) -> Value {
    let (kind, step) = match model.time {
        TimeKind::Continuous => ("continuous", None),
        TimeKind::Discrete { step } => ("discrete", Some(step)),
    };
    json!({
        "title": model.title.value,
        "note": model.note,
        "time": {"kind": kind, "unit": model.time_unit.value, "step": step},
    })
}

fn equation_list(model: &Model) -> Value {
    let style = Style::Ascii;
    list(&equations(model), |equation| {
        let symbol = symbol(model, equation.species);
        let taken: Vec<String> = equation.taken_before.iter().map(|expr| style.formula(expr)).collect();
        json!({
            "species": symbol,
            "left": left_side(model, symbol),
            "right": style.sum(&equation.terms).join(" "),
            "per_capita": equation.per_capita.as_ref().map(|terms| style.sum(terms).join(" ")),
            "taken_before": taken,
        })
    })
}

fn shorthand(subject: &Subject<'_>) -> Value {
    let units = subject.units.inferred.shorthand.iter().map(Option::as_ref).chain(std::iter::repeat(None));
    let items = subject.model.shorthand.iter().zip(units);
    items
        .map(|(shorthand, unit)| {
            json!({"name": shorthand.name, "formula": Style::Ascii.formula(&shorthand.formula.expr), "unit": unit})
        })
        .collect()
}

fn species(subject: &Subject<'_>) -> Value {
    let items = subject.model.species.iter().enumerate();
    items
        .map(|(row, species)| {
            let unit = unit_of(species.unit.as_ref().map(|unit| &unit.value), subject.units.inferred.species.get(row));
            let bound = subject.bounds.and_then(|bounds| bounds.get(row));
            json!({
                "symbol": species.symbol,
                "name": species.name,
                "unit": unit.as_ref().map(|(unit, _)| unit),
                "unit_inferred": unit.as_ref().is_some_and(|(_, is_inferred)| *is_inferred),
                "box": [Some(species.lower), bound.map(|bound| bound.upper)],
                "chosen": bound.is_some_and(|bound| bound.chosen),
                "population": species.population,
                "role": match species.role {
                    Role::Population => "population",
                    Role::Fleet => "fleet",
                    Role::Resource => "resource",
                },
                "aim": if species.aim == Aim::Remove { "remove" } else { "keep" },
            })
        })
        .collect()
}

fn parameters(subject: &Subject<'_>) -> Value {
    let items = subject.model.parameters.iter().enumerate();
    items
        .map(|(row, parameter)| {
            let given = parameter.unit.as_ref().map(|unit| &unit.value);
            let unit = unit_of(given, subject.units.inferred.parameters.get(row));
            json!({
                "name": parameter.name,
                "value": parameter.value,
                "unit": unit.as_ref().map(|(unit, _)| unit),
                "unit_inferred": unit.as_ref().is_some_and(|(_, is_inferred)| *is_inferred),
                "range": parameter.range.as_ref().map(|range| range.value),
                "draw": draw_of(subject.model, ParameterId(row), parameter),
                "min": parameter.min,
                "max": parameter.max,
                "control": parameter.control,
                "note": parameter.note,
            })
        })
        .collect()
}

fn process(model: &Model, process: &Process) -> Value {
    let rate = Style::Ascii.formula(&process.rate.expr);
    json!({"name": process.name, "rate": rate, "effect": by_species(model, &process.effect)})
}

fn harvest(model: &Model, harvest: &Harvest) -> Value {
    let when = match (&model.time, harvest.when) {
        (TimeKind::Continuous, _) => None,
        (TimeKind::Discrete { .. }, When::Before) => Some("before"),
        (TimeKind::Discrete { .. }, When::After) => Some("after"),
    };
    let amounts = match harvest.accounting {
        Accounting::Takes => "takes",
        Accounting::Counts => "counts",
    };
    json!({
        "name": harvest.name,
        "when": when,
        amounts: by_species(model, &harvest.amounts),
        "price": by_species(model, &harvest.price),
        "cost": harvest.cost.as_ref().map(|cost| Style::Ascii.formula(&cost.expr)),
    })
}

fn scenario(model: &Model, scenario: &Scenario) -> Value {
    let values: Map<String, Value> = scenario
        .values
        .iter()
        .map(|(id, formula)| (name(model, *id).to_owned(), Style::Ascii.formula(&formula.expr).into()))
        .collect();
    json!({
        "name": scenario.name,
        "values": values,
        "without": list(&scenario.without, |name| name.value.as_str().into()),
        "harvest": list(&scenario.harvest, |harvest| self::harvest(model, harvest)),
        "processes": list(&scenario.processes, |process| self::process(model, process)),
    })
}

fn draws(model: &Model) -> Value {
    let Some(table) = &model.draws else { return Value::Null };
    let rows = table.values.len() / table.columns.len().max(1);
    json!({"file": table.path, "rows": rows, "columns": list(&table.columns, |id| name(model, *id).into())})
}

fn warning(model: &Model, diagnostic: &Diagnostic) -> Value {
    let (file, line, column) = position(&model.sources, diagnostic.at);
    json!({"file": file, "line": line, "column": column, "message": diagnostic.message, "help": diagnostic.help})
}

fn by_species(model: &Model, terms: &[Term]) -> Value {
    let formula = |term: &Term| Style::Ascii.formula(&term.formula.expr).into();
    Value::Object(terms.iter().map(|term| (symbol(model, term.species).to_owned(), formula(term))).collect())
}

fn symbol(model: &Model, species: SpeciesId) -> &str {
    model.species.get(species.0).map_or("", |species| &species.symbol)
}

fn name(model: &Model, id: ParameterId) -> &str {
    model.parameters.get(id.0).map_or("", |parameter| &parameter.name)
}
