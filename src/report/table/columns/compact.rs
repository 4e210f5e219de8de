//! What people see by default of columns that would flood a page: who can come in, and yields in sums.
//!
//! Asked for by name such a column is shown in full, as in files.

use super::super::layout::{Align, Cell, Head, Ink};
use super::super::number::human;
use super::super::{Row, Table};
use super::identity::counted;
use super::path::Path;
use super::response::taken;
use super::{Glyphs, Unit};
use crate::analysis::measures::HarvestYield;
use crate::model::SpeciesId;

/// Yields that are shown one by one without being asked for.
const MOST_YIELDS: usize = 6;

/// Whether columns were asked for by name.
fn in_full(table: &Table<'_>) -> bool {
    table.columns.is_some()
}

pub(super) fn invasion_heads(table: &Table<'_>) -> Vec<Head> {
    if !in_full(table) {
        return vec![Head::new("can come in", Align::Left)];
    }
    let unit = Unit::PerTime.of(table, None);
    let head =
        |symbol: &str| Head { unit: unit.clone(), ..Head::new(&format!("growth when rare {symbol}"), Align::Point) };
    table.model.species.iter().map(|species| head(&species.symbol)).collect()
}

pub(super) fn invasion(row: &Row<'_>, _: Glyphs) -> Vec<Cell> {
    let found = row.measures().map_or(&[][..], |measures| &measures.invasion);
    if !in_full(row.table) {
        return vec![who_can_come_in(row)];
    }
    let rate = |place: usize| found.iter().find(|(id, _)| id.0 == place).and_then(|(_, rate)| *rate);
    let cell = |place| Cell::new(rate(place).map_or_else(String::new, human));
    (0..row.table.model.species.len()).map(cell).collect()
}

/// Species, and populations of several stages, that grow when rare; a question mark after one whose rate is exactly 0.
fn who_can_come_in(row: &Row<'_>) -> Cell {
    let Some(measures) = row.measures() else { return Cell::new("") };
    let species = measures.invasion.iter().filter_map(|&(id, rate)| Some((row.table.symbol(id.0)?, rate?)));
    let groups = measures.groups.iter().filter_map(|group| Some((group.name.as_str(), group.invasion?)));
    let rates: Vec<(&str, f64)> = species.chain(groups).collect();
    let grows = rates.iter().filter(|(_, rate)| *rate >= 0.0);
    let names: Vec<String> =
        grows.map(|(name, rate)| if *rate == 0.0 { format!("{name}?") } else { (*name).to_owned() }).collect();
    let names: Vec<&str> = names.iter().map(String::as_str).collect();
    match (rates.is_empty(), names.is_empty()) {
        (true, _) => Cell::new(""),
        (_, true) => Cell::new("none"),
        _ => Cell::inked(counted(&names, rates.len()), Ink::Plain),
    }
}

/// What a harvest takes in all of the species whose yield is in a unit; none where one of them has no value: a sum without
/// the parts that have none would pass for the whole.
pub(in crate::report) fn total(
    table: &Table<'_>,
    scenario: usize,
    yields: &[HarvestYield],
    name: &str,
    unit: &str,
) -> Option<f64> {
    let is_alike = |species: SpeciesId| Unit::Yield.of(table, Some(species.0)) == unit;
    let amounts = yields.iter().filter(|one| one.name == name).flat_map(|one| &one.amounts);
    let alike: Vec<f64> = amounts.filter(|(id, _)| is_alike(*id)).map(|(_, amount)| *amount).collect();
    let harvests = table.model.harvests_under(scenario);
    let all = harvests.iter().filter(|harvest| harvest.name == name).flat_map(|harvest| &harvest.amounts);
    let all = all.filter(|amount| is_alike(amount.species)).count();
    (all > 0 && alike.len() == all).then(|| alike.iter().sum())
}

/// The harvest and the unit that a sum of yields is of.
pub(in crate::report) fn sums(table: &Table<'_>) -> Vec<(String, String)> {
    let mut all: Vec<(String, String)> = Vec::new();
    for harvest in table.harvests() {
        for amount in &harvest.amounts {
            let sum = (harvest.name.clone(), Unit::Yield.of(table, Some(amount.species.0)));
            if !all.contains(&sum) {
                all.push(sum);
            }
        }
    }
    all
}

fn is_summed(table: &Table<'_>, paths: &[Path]) -> bool {
    !in_full(table) && paths.len() > MOST_YIELDS
}

/// Whether yields are shown in sums.
pub(in super::super) fn has_sums(table: &Table<'_>) -> bool {
    is_summed(table, &taken(table, &Path::default()))
}

pub(super) fn yield_heads(table: &Table<'_>) -> Vec<Head> {
    let paths = taken(table, &Path::default());
    if is_summed(table, &paths) {
        let head =
            |(name, unit): (String, String)| Head { title: format!("yield {name}, total"), unit, align: Align::Point };
        return sums(table).into_iter().map(head).collect();
    }
    let head = |path: &Path| Head {
        title: format!("yield {}", path.name()),
        unit: Unit::Yield.of(table, path.species),
        align: Align::Point,
    };
    paths.iter().map(head).collect()
}

pub(super) fn yields(row: &Row<'_>, _: Glyphs) -> Vec<Cell> {
    let table = row.table;
    let yields = row.measures().map_or(&[][..], |measures| &measures.yields);
    let paths = taken(table, &Path::default());
    if is_summed(table, &paths) {
        let sum = |(name, unit): &(String, String)| {
            let total = total(table, row.scenario, yields, name, unit);
            Cell::new(total.map_or_else(String::new, human))
        };
        return sums(table).iter().map(sum).collect();
    }
    let value = super::response::yields(row);
    paths.iter().map(|path| Cell::new(super::path::humane(path.of(&value)))).collect()
}
