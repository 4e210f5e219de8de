//! Processes, harvests and the equations: the sections `processes`, `change`, `next` and `harvest`, also inside scenarios.

use super::desk::{Desk, Fields, is_null};
use super::keys::{HARVEST, PROCESS, WHENS};
use super::names::{Names, Scope};
use crate::model::messages::Message;
use crate::model::tree::{Entry, Node};
use crate::model::{Accounting, Harvest, Process, Term, TimeKind, When};

/// The processes of a section; empty where there is none.
pub(super) fn processes(desk: &mut Desk<'_>, names: &Names, fields: &Fields<'_>) -> Vec<Process> {
    let help = "write each process as a key, for example {growth: {rate: r*N, effect: {N: 1}}}";
    let entries = section(desk, fields.get("processes"), "\"processes\"", "a map of processes", help);
    entries.iter().filter_map(|entry| process(desk, names, entry)).collect()
}

fn section<'n>(desk: &mut Desk<'_>, node: Option<&'n Node>, name: &str, what: &str, help: &str) -> &'n [Entry] {
    node.filter(|node| !is_null(node)).and_then(|node| desk.map(node, name, what, help)).unwrap_or_default()
}

fn process(desk: &mut Desk<'_>, names: &Names, entry: &Entry) -> Option<Process> {
    let what = format!("the process \"{}\"", entry.key);
    let fields = desk.fields(&entry.value, &PROCESS, &what, entry.key_at)?;
    let rate = fields.get("rate").and_then(|node| names.formula(desk, node, "\"rate\"", Scope::Everything));
    let effect = fields.get("effect").and_then(|node| names.terms(desk, node, "\"effect\"", "{N: 1}"));
    Some(Process { name: entry.key.clone(), at: entry.key_at, rate: rate?, effect: effect? })
}

/// The terms of `change` or `next`.
pub(super) fn equations(desk: &mut Desk<'_>, names: &Names, fields: &Fields<'_>, key: &str) -> Vec<Term> {
    let Some(node) = fields.get(key) else { return Vec::new() };
    let example = if key == "next" { "{N: N*exp(r*(1 - N/K))}" } else { "{N: -m*N}" };
    names.terms(desk, node, &format!("\"{key}\""), example).unwrap_or_default()
}

/// The harvests of a section; empty where there is none.
pub(super) fn harvests(desk: &mut Desk<'_>, names: &Names, fields: &Fields<'_>, time: &TimeKind) -> Vec<Harvest> {
    let help = "write each harvest as a key, for example {catch: {takes: {N: q*E*N}}}";
    let entries = section(desk, fields.get("harvest"), "\"harvest\"", "a map of harvests", help);
    entries.iter().filter_map(|entry| harvest(desk, names, entry, time)).collect()
}

fn harvest(desk: &mut Desk<'_>, names: &Names, entry: &Entry, time: &TimeKind) -> Option<Harvest> {
    let what = format!("the harvest \"{}\"", entry.key);
    let fields = desk.fields(&entry.value, &HARVEST, &what, entry.key_at)?;
    let when = when(desk, &fields, time);
    let amounts = amounts(desk, names, &fields, entry);
    let price = fields.get("price").and_then(|node| names.terms(desk, node, "\"price\"", "{N: 0.3}"));
    let cost = fields.get("cost").map(|node| names.formula(desk, node, "\"cost\"", Scope::Everything));
    let (accounting, amounts) = amounts?;
    let price = price.unwrap_or_default();
    for term in price.iter().filter(|term| amounts.iter().all(|amount| amount.species != term.species)) {
        desk.say(Message::PriceUnused, term.key_at, &[&symbol_of(desk, term), &entry.key]);
    }
    let cost = match cost {
        Some(cost) => Some(cost?),
        None => None,
    };
    Some(Harvest { name: entry.key.clone(), at: entry.key_at, when, accounting, amounts, price, cost })
}

fn symbol_of(desk: &Desk<'_>, term: &Term) -> String {
    let span = term.key_at.span;
    let source = desk.sources.get(term.key_at.source);
    source.and_then(|source| source.text.get(span.start..span.end)).unwrap_or_default().to_owned()
}

fn when(desk: &mut Desk<'_>, fields: &Fields<'_>, time: &TimeKind) -> When {
    let Some(entry) = fields.entry("when") else { return When::default() };
    if *time == TimeKind::Continuous {
        desk.say(Message::WhenContinuous, entry.key_at, &[]);
    }
    let whens = [When::Before, When::After];
    desk.word(&entry.value, "\"when\"", WHENS).map_or(When::default(), |index| whens[index])
}

fn amounts(desk: &mut Desk<'_>, names: &Names, fields: &Fields<'_>, entry: &Entry) -> Option<(Accounting, Vec<Term>)> {
    let (key, accounting) = match (fields.entry("takes"), fields.entry("counts")) {
        (Some(_), Some(counts)) => {
            desk.say(Message::TakesAndCounts, counts.key_at, &[&entry.key]);
            return None;
        }
        (None, None) => {
            desk.say(Message::TakesOrCounts, entry.key_at, &[&entry.key]);
            return None;
        }
        (Some(_), None) => ("takes", Accounting::Takes),
        (None, Some(_)) => ("counts", Accounting::Counts),
    };
    let terms = names.terms(desk, fields.get(key)?, &format!("\"{key}\""), "{N: q*E*N}")?;
    Some((accounting, terms))
}
