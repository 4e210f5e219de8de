//! The file as a whole: sections in the order in which they need each other, then what only the whole can tell.

use super::desk::{Desk, Fields, is_null};
use super::keys::MODEL;
use super::names::Names;
use super::{block, draws, parameters, parts, scenarios, shorthand, species};
use crate::diag::Sources;
use crate::diag::nearest::nearest;
use crate::model::messages::Message;
use crate::model::tree::{Kind, Node};
use crate::model::{Harvest, Model, Process, Species, Term, TimeKind};

/// The model, sound only if nothing was reported. Its sources are left empty.
pub(super) fn model(desk: &mut Desk<'_>, root: &Node) -> Option<Model> {
    let fields = desk.fields(root, &MODEL, "the model", root.at)?;
    let title = fields.get("title").and_then(|node| desk.line(node, "\"title\"", "one line of text"));
    let note = desk.note(&fields);
    let (time_unit, time) = species::time(desk, &fields);
    let mut names = Names::default();
    names.incomplete = is_misspelt(root, &["species", "parameters", "shorthand", "lotka_volterra"]);
    let raw = block::open(desk, &fields, &mut names);
    let mut species = species::declared(desk, &fields, &mut names);
    if let Some(raw) = &raw {
        raw.complete(desk, &mut names, &mut species);
    }
    count(desk, &species, root, &names);
    let mut parameters = parameters::read(desk, &fields, &mut names);
    let written = shorthand::declare(desk, &fields, &mut names);
    let shorthand = shorthand::read(desk, written, &mut names);
    let processes = parts::processes(desk, &names, &fields);
    let change = parts::equations(desk, &names, &fields, "change");
    let next = parts::equations(desk, &names, &fields, "next");
    let harvest = parts::harvests(desk, &names, &fields, &time);
    let block = raw.and_then(|raw| raw.read(desk, &names, species.len()));
    dynamics(desk, &fields, &time, &species);
    next_for_all(desk, &fields, &time, &next, &species);
    shared_names(desk, &processes, &harvest);
    let now = scenarios::now(desk, &fields, &names);
    let draws = draws::read(desk, &fields, &names, &mut parameters);
    let correlations = parameters::correlations(desk, &fields, &names, &parameters, draws.as_ref());
    let title_at = title.as_ref().map_or(root.at, |title| title.at);
    let sections = ["processes", "harvest"];
    let parts = sections.into_iter().flat_map(|key| keys_of(&fields, key)).collect();
    let parts = if is_misspelt(root, &sections) { None } else { Some(parts) };
    let base = scenarios::Base { processes: &processes, harvest: &harvest, parts, time: &time, title_at };
    let scenarios = scenarios::read(desk, &fields, &names, &base);
    let sketch = scenarios::sketch(desk, &fields, &names);
    let model = Model {
        title: title?,
        note,
        time_unit: time_unit?,
        time,
        species,
        parameters,
        shorthand,
        processes,
        change,
        next,
        harvest,
        block,
        now,
        scenarios,
        correlations,
        draws,
        sketch,
        names: names.into_map(),
        sources: Sources::default(),
    };
    finite_values(desk, &model);
    Some(model)
}

/// The names in a section, also of what could not be read.
fn keys_of<'n>(fields: &Fields<'n>, section: &str) -> impl Iterator<Item = &'n str> {
    let entries = match fields.get(section).map(|node| &node.kind) {
        Some(Kind::Mapping(entries)) => entries.as_slice(),
        _ => &[],
    };
    entries.iter().map(|entry| entry.key.as_str())
}

/// Whether an unknown key was meant for one of these sections; uses of what it declares must not be reported as well.
fn is_misspelt(root: &Node, sections: &[&str]) -> bool {
    let Kind::Mapping(entries) = &root.kind else { return false };
    let mut unknown = entries.iter().filter(|entry| MODEL.keys.iter().all(|key| key.name != entry.key));
    unknown.any(|entry| nearest(&entry.key, sections.iter().copied()).is_some())
}

fn count(desk: &mut Desk<'_>, species: &[Species], root: &Node, names: &Names) {
    if species.is_empty() && !names.incomplete {
        desk.say(Message::NoSpecies, root.at, &[]);
    }
    if species.len() > species::SPECIES_LIMIT {
        desk.say(Message::TooManySpecies, root.at, &[&species.len(), &species::SPECIES_LIMIT]);
    }
}

/// That what moves the species suits the kind of time.
fn dynamics(desk: &mut Desk<'_>, fields: &Fields<'_>, time: &TimeKind, species: &[Species]) {
    let continuous = ["processes", "change", "lotka_volterra"];
    if *time == TimeKind::Continuous {
        if let Some(entry) = fields.entry("next") {
            desk.say(Message::NextContinuous, entry.key_at, &[]);
        } else if !species.is_empty() && continuous.iter().all(|key| fields.get(key).is_none_or(is_empty)) {
            desk.say(Message::NoDynamics, fields.at, &[]);
        }
        return;
    }
    for entry in continuous.iter().filter_map(|key| fields.entry(key)) {
        desk.say(Message::NotDiscrete, entry.key_at, &[&entry.key]);
    }
}

/// Whether nothing stands there, or an empty map.
fn is_empty(node: &Node) -> bool {
    is_null(node) || matches!(&node.kind, Kind::Mapping(entries) if entries.is_empty())
}

fn next_for_all(desk: &mut Desk<'_>, fields: &Fields<'_>, time: &TimeKind, next: &[Term], species: &[Species]) {
    if *time == TimeKind::Continuous {
        return;
    }
    let Some(entry) = fields.entry("next") else {
        let what = "the next state of every species";
        let at = fields.entry("time").map_or(fields.at, |entry| entry.key_at);
        desk.say(Message::MissingKey, at, &[&"a discrete model", &"next", &what, &"next: {N: N*exp(r*(1 - N/K))}"]);
        return;
    };
    let Kind::Mapping(entries) = &entry.value.kind else { return };
    for one in species {
        let given = entries.iter().any(|entry| entry.key == one.symbol);
        if !given && next.iter().all(|term| species[term.species.0].symbol != one.symbol) {
            desk.say(Message::NextMissing, entry.key_at, &[&one.name, &one.symbol]);
        }
    }
}

fn shared_names(desk: &mut Desk<'_>, processes: &[Process], harvest: &[Harvest]) {
    for harvest in harvest {
        if let Some(process) = processes.iter().find(|process| process.name == harvest.name) {
            desk.say_both(Message::SharedName, harvest.at, &[&harvest.name], (process.at, "the process"));
        }
    }
}

/// That every scenario's values can be worked out; meaningful only where all else is in order.
fn finite_values(desk: &mut Desk<'_>, model: &Model) {
    if !desk.is_clean() {
        return;
    }
    for diagnostic in (0..model.scenarios.len()).filter_map(|scenario| model.values(scenario, &[]).err()) {
        desk.report(diagnostic);
    }
}
