//! The sections `species` and `time`, and the species that a table brings along.

use super::desk::{Desk, Fields, is_null};
use super::keys::{AIMS, ROLES, SPECIES, TIME};
use super::names::{Names, as_symbol};
use crate::diag::Location;
use crate::expr::lex::is_identifier;
use crate::model::messages::{Message, digits};
use crate::model::tree::{Entry, Kind, Node, normal};
use crate::model::{Aim, Placed, Role, Species, TimeKind};

/// Species of one model.
pub(super) const SPECIES_LIMIT: usize = 1_000;

/// The unit of time, and whether time runs or steps. Where the section cannot be read, time runs.
pub(super) fn time(desk: &mut Desk<'_>, fields: &Fields<'_>) -> (Option<Placed<String>>, TimeKind) {
    let Some(node) = fields.get("time") else { return (None, TimeKind::Continuous) };
    if !matches!(node.kind, Kind::Mapping(_)) {
        return (desk.line(node, "\"time\"", "a unit such as yr"), TimeKind::Continuous);
    }
    let Some(inner) = desk.fields(node, &TIME, "\"time\"", node.at) else { return (None, TimeKind::Continuous) };
    let unit = inner.get("unit").and_then(|unit| desk.line(unit, "\"unit\"", "a unit such as yr"));
    let step = inner.get("step").and_then(|step| desk.positive(step, "\"step\""));
    (unit, TimeKind::Discrete { step: step.unwrap_or(1.0) })
}

/// The declared species, their symbols added to the names.
pub(super) fn declared(desk: &mut Desk<'_>, fields: &Fields<'_>, names: &mut Names) -> Vec<Species> {
    let Some(node) = fields.get("species").filter(|node| !is_null(node)) else { return Vec::new() };
    let help = "write each species as a key, for example {stock: {symbol: N, upper: 1000}}";
    let Some(entries) = desk.map(node, "\"species\"", "a map of one or more species", help) else {
        names.incomplete = true;
        return Vec::new();
    };
    entries.iter().map(|entry| one(desk, entry, names)).collect()
}

fn one(desk: &mut Desk<'_>, entry: &Entry, names: &mut Names) -> Species {
    let what = format!("the species \"{}\"", entry.key);
    let Some(fields) = desk.fields(&entry.value, &SPECIES, &what, entry.key_at) else {
        let symbol = meant(entry);
        names.declare_species(desk, &entry.key, &symbol, entry.key_at);
        return bare(&entry.key, symbol, entry.key_at, None);
    };
    let symbol = symbol(desk, &fields, entry);
    names.declare_species(desk, &entry.key, &symbol.value, symbol.at);
    let lower = fields.get("lower").and_then(|node| desk.not_negative(node, "\"lower\""));
    let mut species = bare(&entry.key, normal(&symbol.value), entry.key_at, upper(desk, &fields, lower));
    species.lower = lower.unwrap_or(0.0);
    species.unit = fields.get("unit").and_then(|node| desk.line(node, "\"unit\"", "a unit such as kt"));
    species.population =
        fields.get("population").and_then(|node| desk.line(node, "\"population\"", "a name")).map(|text| text.value);
    if let Some(node) = fields.get("role") {
        let roles = [Role::Population, Role::Fleet, Role::Resource];
        species.role = desk.word(node, "\"role\"", ROLES).map_or(Role::default(), |index| roles[index]);
    }
    if let Some(node) = fields.get("aim") {
        let aims = [Aim::Keep, Aim::Remove];
        species.aim = desk.word(node, "\"aim\"", AIMS).map_or(Aim::default(), |index| aims[index]);
    }
    species
}

/// The symbol that was probably meant where the entry is no map: a single word is one.
fn meant(entry: &Entry) -> String {
    match &entry.value.kind {
        Kind::Scalar(scalar) if is_identifier(&scalar.value) => normal(&scalar.value),
        _ => as_symbol(&entry.key),
    }
}

/// A species of which nothing but its names and the search box is known.
pub(super) fn bare(name: &str, symbol: String, at: Location, upper: Option<f64>) -> Species {
    Species {
        name: name.to_owned(),
        symbol,
        at,
        unit: None,
        lower: 0.0,
        upper,
        population: None,
        role: Role::default(),
        aim: Aim::default(),
    }
}

/// The symbol that is given, else the key where formulas can hold it.
fn symbol(desk: &mut Desk<'_>, fields: &Fields<'_>, entry: &Entry) -> Placed<String> {
    if let Some(node) = fields.get("symbol") {
        let text = desk.line(node, "\"symbol\"", "a name for formulas");
        return text.unwrap_or_else(|| Placed { value: as_symbol(&entry.key), at: entry.key_at });
    }
    if is_identifier(&entry.key) {
        return Placed { value: entry.key.clone(), at: entry.key_at };
    }
    let proposal = as_symbol(&entry.key);
    desk.say(Message::SymbolNeeded, entry.key_at, &[&entry.key, &proposal]);
    Placed { value: proposal, at: entry.key_at }
}

fn upper(desk: &mut Desk<'_>, fields: &Fields<'_>, lower: Option<f64>) -> Option<f64> {
    let node: &Node = fields.get("upper")?;
    let upper = desk.positive(node, "\"upper\"")?;
    let lower = lower.unwrap_or(0.0);
    if upper <= lower {
        desk.say(Message::UpperBelowLower, node.at, &[&digits(upper), &digits(lower)]);
    }
    Some(upper)
}
