//! The sections `scenarios`, `now` and `sketch`.

use super::desk::{Desk, Fields, is_null};
use super::keys::{SCENARIO, SKETCH, SURVEY};
use super::names::{Names, Scope};
use super::parts::{harvests, processes};
use crate::diag::Location;
use crate::model::messages::Message;
use crate::model::tree::{Entry, Kind};
use crate::model::{Formula, Harvest, ParameterId, Placed, Process, Scenario, SpeciesId, Survey, TimeKind};

/// What the scenarios lie over.
pub(super) struct Base<'m> {
    pub(super) processes: &'m [Process],
    pub(super) harvest: &'m [Harvest],
    /// Names of all processes and harvests, also of those that could not be read; `None` where a section was not found.
    pub(super) parts: Option<Vec<&'m str>>,
    pub(super) time: &'m TimeKind,
    /// Where the title stands, for the scenario that is there when the file has none.
    pub(super) title_at: Location,
}

/// The scenarios; one called `base` where the file has none.
pub(super) fn read(desk: &mut Desk<'_>, fields: &Fields<'_>, names: &Names, base: &Base<'_>) -> Vec<Scenario> {
    let Some(node) = fields.get("scenarios").filter(|node| !is_null(node)) else {
        return vec![empty("base", base.title_at)];
    };
    let help = "write each scenario as a key, for example {half effort: {values: {E: 0.5*E}}}";
    let Some(entries) = desk.map(node, "\"scenarios\"", "a map of scenarios", help) else { return Vec::new() };
    if entries.is_empty() {
        desk.say(Message::NoScenario, node.at, &[]);
    }
    entries.iter().filter_map(|entry| one(desk, entry, names, base)).collect()
}

fn empty(name: &str, at: Location) -> Scenario {
    Scenario {
        name: name.to_owned(),
        at,
        values: Vec::new(),
        without: Vec::new(),
        harvest: Vec::new(),
        processes: Vec::new(),
    }
}

fn one(desk: &mut Desk<'_>, entry: &Entry, names: &Names, base: &Base<'_>) -> Option<Scenario> {
    let what = format!("the scenario \"{}\"", entry.key);
    let fields = desk.fields(&entry.value, &SCENARIO, &what, entry.key_at)?;
    let mut scenario = empty(&entry.key, entry.key_at);
    scenario.values = values(desk, &fields, names);
    scenario.harvest = harvests(desk, names, &fields, base.time);
    if let Some(entry) = fields.entry("processes")
        && *base.time != TimeKind::Continuous
    {
        desk.say(Message::NotDiscrete, entry.key_at, &[&entry.key]);
    }
    scenario.processes = processes(desk, names, &fields);
    scenario.without = without(desk, &fields, base);
    contradictions(desk, &scenario);
    shared_names(desk, base, &scenario);
    Some(scenario)
}

fn values(desk: &mut Desk<'_>, fields: &Fields<'_>, names: &Names) -> Vec<(ParameterId, Formula)> {
    let help = "write names of parameters and new values, for example {E: 0.5*E}";
    let Some(node) = fields.get("values").filter(|node| !is_null(node)) else { return Vec::new() };
    let entries = desk.map(node, "\"values\"", "a map from parameters to values", help).unwrap_or_default();
    let scope = Scope::Parameters("scenario values");
    let mut found = Vec::new();
    for entry in entries {
        let id = names.parameter(desk, &entry.key, entry.key_at);
        let formula = names.formula(desk, &entry.value, &format!("\"{}\"", entry.key), scope);
        found.extend(id.zip(formula));
    }
    found
}

fn without(desk: &mut Desk<'_>, fields: &Fields<'_>, base: &Base<'_>) -> Vec<Placed<String>> {
    let what = "a list of processes and harvests, such as [trawl]";
    let Some(node) = fields.get("without").filter(|node| !is_null(node)) else { return Vec::new() };
    let mut found: Vec<Placed<String>> = Vec::new();
    for node in desk.list(node, "\"without\"", what).unwrap_or_default() {
        let Some(name) = desk.text(node, "\"without\"", "the name of a process or harvest") else { continue };
        if let Some(first) = found.iter().find(|other| other.value == name.value) {
            desk.say_both(Message::WithoutTwice, name.at, &[&name.value], (first.at, "first here"));
        } else if let Some(known) = &base.parts
            && !known.contains(&name.value.as_str())
        {
            match desk.nearest(&name.value, known.iter().copied()) {
                Some(near) => desk.say(Message::UnknownPartNear, name.at, &[&name.value, &near]),
                None => desk.say(Message::UnknownPart, name.at, &[&name.value, &known.join(", ")]),
            }
        }
        found.push(name);
    }
    found
}

fn contradictions(desk: &mut Desk<'_>, scenario: &Scenario) {
    for left_out in &scenario.without {
        let replaced = scenario.harvest.iter().any(|harvest| harvest.name == left_out.value)
            || scenario.processes.iter().any(|process| process.name == left_out.value);
        if replaced {
            desk.say(Message::WithoutReplaced, left_out.at, &[&left_out.value]);
        }
    }
}

/// That no process of a scenario is called like a harvest, nor the other way round.
fn shared_names(desk: &mut Desk<'_>, base: &Base<'_>, scenario: &Scenario) {
    for harvest in &scenario.harvest {
        let mut processes = base.processes.iter().chain(&scenario.processes);
        if let Some(process) = processes.find(|process| process.name == harvest.name) {
            desk.say_both(Message::SharedName, harvest.at, &[&harvest.name], (process.at, "the process"));
        }
    }
    for process in &scenario.processes {
        if let Some(harvest) = base.harvest.iter().find(|harvest| harvest.name == process.name) {
            desk.say_both(Message::SharedName, process.at, &[&process.name], (harvest.at, "the harvest"));
        }
    }
}

/// The section `now`.
pub(super) fn now(desk: &mut Desk<'_>, fields: &Fields<'_>, names: &Names) -> Vec<Survey> {
    let Some(node) = fields.get("now").filter(|node| !is_null(node)) else { return Vec::new() };
    let help = "write symbols and abundances, for example {N: 610}";
    let entries = desk.map(node, "\"now\"", "a map from symbols to abundances", help).unwrap_or_default();
    let mut found: Vec<Survey> = Vec::new();
    for entry in entries {
        let species = names.species(desk, &entry.key, entry.key_at);
        let estimate = estimate(desk, entry);
        if let (Some(species), Some((value, cv))) = (species, estimate) {
            found.push(Survey { species, at: entry.key_at, value, cv });
        }
    }
    found
}

fn estimate(desk: &mut Desk<'_>, entry: &Entry) -> Option<(f64, Option<f64>)> {
    let name = format!("the abundance of \"{}\"", entry.key);
    if matches!(entry.value.kind, Kind::Scalar(_)) {
        return Some((desk.not_negative(&entry.value, &name)?, None));
    }
    let fields = desk.fields(&entry.value, &SURVEY, &name, entry.key_at)?;
    let value = fields.get("value").and_then(|node| desk.not_negative(node, &name));
    let cv = fields.get("cv").and_then(|node| desk.positive(node, "\"cv\""));
    Some((value?, cv))
}

/// The section `sketch`.
pub(super) fn sketch(desk: &mut Desk<'_>, fields: &Fields<'_>, names: &Names) -> Option<[SpeciesId; 2]> {
    let entry = fields.entry("sketch").filter(|entry| !is_null(&entry.value))?;
    let fields = desk.fields(&entry.value, &SKETCH, "\"sketch\"", entry.key_at)?;
    let mut axis = |key: &str| {
        let node = fields.get(key)?;
        let symbol = desk.line(node, &format!("\"{key}\""), "the symbol of a species")?;
        Some((names.species(desk, &symbol.value, symbol.at)?, symbol))
    };
    let (x, y) = (axis("x"), axis("y"));
    let ((x, _), (y, symbol)) = (x?, y?);
    if x == y {
        desk.say(Message::SameAxes, symbol.at, &[&symbol.value]);
        return None;
    }
    Some([x, y])
}
