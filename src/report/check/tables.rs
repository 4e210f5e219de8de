//! The tables of the report: species, parameters, harvests, scenarios and what else has rows.
//!
//! Each function gives the lines of one section, empty where the model has nothing of the kind.

use super::formula::{Style, number};
use super::layout::{columns, headed};
use super::{Subject, draw_of, unit_of};
use crate::diag::cleanse::cleanse;
use crate::model::system::bounds::Bound;
use crate::model::{
    Accounting, Aim, Harvest, Model, Parameter, ParameterId, Process, Role, Scenario, Species, Term, TimeKind, When,
};

/// Symbol, name, unit, search range and remarks of each species.
pub(super) fn species(subject: &Subject<'_>) -> String {
    let rows = subject.model.species.iter().enumerate().map(|(row, species)| {
        let unit = unit_of(species.unit.as_ref().map(|unit| &unit.value), subject.units.inferred.species.get(row));
        let name = if species.name == species.symbol { String::new() } else { clean(&species.name) };
        let range = search_range(species, subject.bounds.and_then(|bounds| bounds.get(row)));
        vec![species.symbol.clone(), name, unit_cell(unit), range, standing(species)]
    });
    headed(&["", "name", "unit", "searched", ""], &rows.collect::<Vec<_>>())
}

/// Name, value, unit, range, distribution and remarks of each parameter.
pub(super) fn parameters(subject: &Subject<'_>) -> String {
    let model = subject.model;
    let rows = model.parameters.iter().enumerate().map(|(row, parameter)| {
        let unit = unit_of(parameter.unit.as_ref().map(|unit| &unit.value), subject.units.inferred.parameters.get(row));
        let range = parameter.range.as_ref().map_or_else(String::new, |range| span(range.value[0], range.value[1]));
        let control = if parameter.control { "control".to_owned() } else { String::new() };
        let draw = draw_of(model, ParameterId(row), parameter).unwrap_or_default();
        vec![
            parameter.name.clone(),
            number(parameter.value),
            unit_cell(unit),
            range,
            clean(&draw),
            control,
            remarks(parameter),
        ]
    });
    let inferred = &subject.units.inferred;
    let mut text = headed(&["", "value", "unit", "plausible", "drawn", "", ""], &rows.collect::<Vec<_>>());
    if inferred.species.iter().chain(&inferred.parameters).any(Option::is_some) {
        text.push_str("  Units in brackets follow from the formulas.\n");
    }
    text
}

/// What each harvest takes, its prices and its cost.
pub(super) fn harvests(model: &Model, style: Style) -> String {
    let rows: Vec<_> = model.harvest.iter().flat_map(|harvest| harvest_rows(model, harvest, style)).collect();
    columns(&rows)
}

/// Where the stocks stand today.
pub(super) fn today(model: &Model) -> String {
    let rows = model.now.iter().map(|survey| {
        let cv = survey.cv.map_or_else(String::new, |cv| format!("cv {}", number(cv)));
        vec![symbol(model, survey.species.0), number(survey.value), cv]
    });
    columns(&rows.collect::<Vec<_>>())
}

/// What each scenario changes; nothing where the file has none, which the model holds as one at its title.
pub(super) fn scenarios(model: &Model, style: Style) -> String {
    if matches!(model.scenarios.as_slice(), [only] if only.at == model.title.at && only.values.is_empty()) {
        return String::new();
    }
    let rows: Vec<_> = model.scenarios.iter().flat_map(|scenario| scenario_rows(model, scenario, style)).collect();
    columns(&rows)
}

/// Rank correlations between parameters.
pub(super) fn correlations(model: &Model) -> String {
    let name =
        |id: ParameterId| model.parameters.get(id.0).map_or_else(String::new, |parameter| parameter.name.clone());
    let rows = model.correlations.iter().map(|correlation| {
        let [a, b] = correlation.between;
        vec![format!("{} and {}", name(a), name(b)), number(correlation.rank)]
    });
    columns(&rows.collect::<Vec<_>>())
}

/// Where joint draws come from, and how many there are.
pub(super) fn joint_draws(model: &Model) -> String {
    let Some(table) = &model.draws else { return String::new() };
    let names: Vec<&str> = table
        .columns
        .iter()
        .filter_map(|id| model.parameters.get(id.0))
        .map(|parameter| parameter.name.as_str())
        .collect();
    let rows = table.values.len() / table.columns.len().max(1);
    columns(&[vec![clean(&table.path), format!("{rows} draws of {}", names.join(", "))]])
}

fn unit_cell(unit: Option<(String, bool)>) -> String {
    match unit {
        Some((unit, true)) if unit == "1" => "(no unit)".to_owned(),
        Some((unit, true)) => format!("({unit})"),
        Some((unit, false)) => clean(&unit),
        None => String::new(),
    }
}

fn search_range(species: &Species, bound: Option<&Bound>) -> String {
    match bound {
        Some(bound) if bound.chosen => format!("{} (chosen)", span(bound.lower, bound.upper)),
        Some(bound) => span(bound.lower, bound.upper),
        None => format!("from {}, no upper side", number(species.lower)),
    }
}

fn standing(species: &Species) -> String {
    let role = match species.role {
        Role::Population => None,
        Role::Fleet => Some("fleet".to_owned()),
        Role::Resource => Some("resource".to_owned()),
    };
    let aim = (species.aim == Aim::Remove).then(|| "to be removed".to_owned());
    let group = species.population.as_ref().map(|group| format!("part of {}", clean(group)));
    join([role, aim, group])
}

fn remarks(parameter: &Parameter) -> String {
    let least = parameter.min.map(|least| format!("at least {}", number(least)));
    let most = parameter.max.map(|most| format!("at most {}", number(most)));
    let note = parameter.note.as_deref().map(clean);
    join([least, most, note])
}

fn harvest_rows(model: &Model, harvest: &Harvest, style: Style) -> Vec<Vec<String>> {
    let (verb, when) = match (harvest.accounting, harvest.when, &model.time) {
        (Accounting::Counts, _, _) => ("counts", ""),
        (Accounting::Takes, When::Before, TimeKind::Discrete { .. }) => ("takes", " before the step"),
        (Accounting::Takes, _, _) => ("takes", ""),
    };
    let of_species = |verb: &str, when: &str, term: &Term| {
        let what = format!("{verb} {}{when}:", symbol(model, term.species.0));
        vec![String::new(), what, style.formula(&term.formula.expr)]
    };
    let amounts = harvest.amounts.iter().map(|term| of_species(verb, when, term));
    let prices = harvest.price.iter().map(|term| of_species("price of", "", term));
    let cost = harvest.cost.iter().map(|cost| vec![String::new(), "cost:".to_owned(), style.formula(&cost.expr)]);
    named(&harvest.name, amounts.chain(prices).chain(cost).collect())
}

fn scenario_rows(model: &Model, scenario: &Scenario, style: Style) -> Vec<Vec<String>> {
    let values = scenario.values.iter().map(|(id, formula)| {
        let name = model.parameters.get(id.0).map_or("", |parameter| &parameter.name);
        vec![String::new(), format!("{name} = {}", style.formula(&formula.expr))]
    });
    let without = scenario.without.iter().map(|name| vec![String::new(), format!("without {}", clean(&name.value))]);
    let harvests = scenario.harvest.iter().map(|harvest| {
        let parts: Vec<String> = harvest_rows(model, harvest, style).iter().map(|row| row[1..].join(" ")).collect();
        vec![String::new(), format!("harvest {} {}", clean(&harvest.name), parts.join("; "))]
    });
    let processes = scenario.processes.iter().map(|process| vec![String::new(), process_text(model, process, style)]);
    let rows: Vec<_> = without.chain(values).chain(harvests).chain(processes).collect();
    if rows.is_empty() {
        return vec![vec![clean(&scenario.name), "as the file has it".to_owned()]];
    }
    named(&scenario.name, rows)
}

fn process_text(model: &Model, process: &Process, style: Style) -> String {
    let effects: Vec<String> = process
        .effect
        .iter()
        .map(|term| format!("{} by {}", symbol(model, term.species.0), style.formula(&term.formula.expr)))
        .collect();
    let rate = style.formula(&process.rate.expr);
    format!("process {} at rate {rate} changes {}", clean(&process.name), effects.join(", "))
}

/// Puts a name in front of the first of its rows.
fn named(name: &str, mut rows: Vec<Vec<String>>) -> Vec<Vec<String>> {
    match rows.first_mut().and_then(|row| row.first_mut()) {
        Some(cell) => *cell = clean(name),
        None => rows.push(vec![clean(name)]),
    }
    rows
}

fn symbol(model: &Model, row: usize) -> String {
    model.species.get(row).map_or_else(String::new, |species| species.symbol.clone())
}

fn span(low: f64, high: f64) -> String {
    format!("{} to {}", number(low), number(high))
}

fn join<const N: usize>(texts: [Option<String>; N]) -> String {
    texts.into_iter().flatten().collect::<Vec<_>>().join("; ")
}

fn clean(text: &str) -> String {
    cleanse(text).into_owned()
}
