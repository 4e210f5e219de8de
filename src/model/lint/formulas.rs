//! The formulas of a model: all of them, and those whose values move the state under one scenario.

use std::collections::HashMap;

use crate::expr::ast::{Expr, ExprKind};
use crate::model::{Accounting, Entry, Formula, Harvest, Model, Name, Process, ShorthandId};

/// Every formula of the file.
pub(super) fn all(model: &Model) -> Vec<&Formula> {
    let mut formulas: Vec<&Formula> = model.shorthand.iter().map(|shorthand| &shorthand.formula).collect();
    formulas.extend(model.processes.iter().flat_map(of_process));
    formulas.extend(model.change.iter().chain(&model.next).map(|term| &term.formula));
    formulas.extend(model.harvest.iter().flat_map(of_harvest));
    let entries = model.block.iter().flat_map(|block| block.growth.iter().chain(&block.matrix));
    formulas.extend(entries.filter_map(of_entry));
    for scenario in &model.scenarios {
        formulas.extend(scenario.values.iter().map(|(_, formula)| formula));
        formulas.extend(scenario.processes.iter().flat_map(of_process));
        formulas.extend(scenario.harvest.iter().flat_map(of_harvest));
    }
    formulas
}

/// The formulas that move the state, with the shorthands that they use: each once, with the scenarios in which it does.
pub(super) fn in_force(model: &Model) -> Vec<(&Formula, Vec<usize>)> {
    let mut formulas: Vec<(&Formula, Vec<usize>)> = Vec::new();
    let mut places: HashMap<*const Formula, usize> = HashMap::new();
    for scenario in 0..model.scenarios.len() {
        for formula in under(model, scenario) {
            let place = *places.entry(std::ptr::from_ref(formula)).or_insert(formulas.len());
            match formulas.get_mut(place) {
                Some((_, scenarios)) => scenarios.push(scenario),
                None => formulas.push((formula, vec![scenario])),
            }
        }
    }
    formulas
}

fn under(model: &Model, scenario: usize) -> Vec<&Formula> {
    let mut formulas: Vec<&Formula> = model.processes_under(scenario).into_iter().flat_map(of_process).collect();
    formulas.extend(model.change.iter().chain(&model.next).map(|term| &term.formula));
    let harvests = model.harvests_under(scenario).into_iter();
    let takes = harvests.filter(|harvest| harvest.accounting == Accounting::Takes);
    formulas.extend(takes.flat_map(|harvest| harvest.amounts.iter().map(|term| &term.formula)));
    let mut used = vec![false; model.shorthand.len()];
    for formula in &formulas {
        mark_shorthands(model, &formula.expr, &mut used);
    }
    // Each shorthand uses only earlier ones.
    for (place, shorthand) in model.shorthand.iter().enumerate().rev() {
        if used[place] {
            mark_shorthands(model, &shorthand.formula.expr, &mut used);
        }
    }
    let shorthands = model.shorthand.iter().zip(used).filter(|(_, is_used)| *is_used);
    shorthands.map(|(shorthand, _)| &shorthand.formula).chain(formulas.iter().copied()).collect()
}

/// The names in a formula.
pub(super) fn names<'m>(model: &'m Model, expr: &'m Expr) -> Vec<Name> {
    let mut names = Vec::new();
    expr.walk(&mut |part| {
        if let ExprKind::Name(text) = &part.kind
            && let Some(name) = model.names.get(text)
        {
            names.push(*name);
        }
    });
    names
}

fn of_process(process: &Process) -> impl Iterator<Item = &Formula> {
    process.effect.iter().map(|term| &term.formula).chain([&process.rate])
}

fn of_harvest(harvest: &Harvest) -> impl Iterator<Item = &Formula> {
    harvest.amounts.iter().chain(&harvest.price).map(|term| &term.formula).chain(&harvest.cost)
}

fn of_entry(entry: &Entry) -> Option<&Formula> {
    match entry {
        Entry::Number(_) => None,
        Entry::Formula(formula) => Some(formula),
    }
}

fn mark_shorthands(model: &Model, expr: &Expr, used: &mut [bool]) {
    for name in names(model, expr) {
        if let Name::Shorthand(ShorthandId(place)) = name {
            used[place] = true;
        }
    }
}
