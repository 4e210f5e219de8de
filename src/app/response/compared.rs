//! What the response says of scenarios that stand side by side: how near the selected state is to being lost, and the best
//! yields, one row a quantity.

use std::sync::Arc;

use super::{along_in, parameter};
use crate::analysis::response::{Edge, band};
use crate::app::{App, Study};
use crate::model::Model;
use crate::report::response::words::{kind, taking, unit};
use crate::report::response::{Along, Reach, spoken_of};
use crate::report::table::human;

/// One quantity in every scenario.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Row {
    /// What it is.
    pub label: String,
    /// One for each scenario; empty where it has none.
    pub cells: Vec<String>,
}

/// Said while branches are being followed.
const WAIT: &str = "being followed";

/// The rows for the equilibrium of a name in these slots; none where nothing can be varied.
pub fn compared(app: &App, study: &Study, slots: &[usize], name: &str) -> Vec<Row> {
    let Some((id, one)) = parameter(study) else { return Vec::new() };
    let all: Vec<Option<(&Arc<Along>, bool)>> = slots.iter().map(|&slot| along_in(app, study, slot)).collect();
    let each = |cell: &dyn Fn(usize, &Along) -> Option<String>| -> Vec<String> {
        let one = |(&slot, known): (&usize, &Option<(&Arc<Along>, bool)>)| match known {
            Some((along, _)) if along.reach >= Reach::Advised => cell(slot, along).unwrap_or_default(),
            _ if study.slots.get(slot).is_some_and(|slot| slot.solved().is_none()) => String::new(),
            _ => WAIT.to_owned(),
        };
        slots.iter().zip(&all).map(one).collect()
    };
    let unit = unit(study.model(), id);
    let unit = if unit.is_empty() { String::new() } else { format!(", {unit}") };
    let mut rows = vec![
        Row {
            label: format!("lost by {}{unit}", one.name),
            cells: each(&|slot, along| lost(study, slot, along, name)),
        },
        Row { label: "how lost".to_owned(), cells: each(&|slot, along| how(study, slot, along, name)) },
    ];
    let first = all.iter().flatten().find(|(along, _)| along.reach >= Reach::Advised).map(|(along, _)| *along);
    for label in first.map_or_else(Vec::new, |along| labels(study.model(), along)) {
        let cell = |_: usize, along: &Along| yielded(study.model(), along, &label);
        rows.push(Row { cells: each(&cell), label: label.clone() });
    }
    rows
}

/// How far the nearest loss is, and on which side.
fn lost(study: &Study, slot: usize, along: &Along, name: &str) -> Option<String> {
    let band = band(&along.response, &study.slots.get(slot)?.solved()?.equilibria.list, place(study, slot, name)?)?;
    Some(match band.margin() {
        Some((amount, end)) => format!("{} {}", human(amount), ["below", "above"][end.min(1)]),
        None if band.edges.contains(&Edge::NotFollowed) => "not followed".to_owned(),
        None => "not in range".to_owned(),
    })
}

/// What happens there.
fn how(study: &Study, slot: usize, along: &Along, name: &str) -> Option<String> {
    let band = band(&along.response, &study.slots.get(slot)?.solved()?.equilibria.list, place(study, slot, name)?)?;
    let (_, end) = band.margin()?;
    band.thresholds.get(end)?.as_ref().map(|threshold| kind(threshold.kind).to_owned())
}

fn place(study: &Study, slot: usize, name: &str) -> Option<usize> {
    study.names(slot).iter().position(|other| other == name)
}

/// What the best yields are of.
fn labels(model: &Model, along: &Along) -> Vec<String> {
    spoken_of(&along.response, &along.advice).map(|best| label(model, along, best.taking)).collect()
}

fn label(model: &Model, along: &Along, place: Option<usize>) -> String {
    let one = place.and_then(|place| along.response.takings.get(place));
    one.map_or_else(|| "best, all taken".to_owned(), |one| format!("best {}", taking(model, one)))
}

/// The best yield, and at which value of the control.
fn yielded(model: &Model, along: &Along, wanted: &str) -> Option<String> {
    let best = spoken_of(&along.response, &along.advice).find(|best| label(model, along, best.taking) == wanted)?;
    let reached = if best.attained { "at" } else { "near" };
    Some(format!("{} {reached} {}", human(best.amount), human(best.at)))
}
