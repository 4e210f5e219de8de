//! What follows: who can come in, where an unstable state leads, what is caught, who answers to whom.

use serde_json::{Map, Value, json};

use crate::analysis::measures::{Elasticity, HarvestYield};

use super::super::layout::{Align, Cell, Head};
use super::super::{Row, Table, optional, paths};
use super::compact;
use super::path::{Get, Path, by_symbol, keyed};
use super::{Cells, Column, Shown, Unit, key};

/// Entry (i, j) of the net effects: of j on i.
pub(super) const ON: &str = "<-";

/// Entry (i, j) of the covariance: i with j.
const WITH: &str = ":";

pub(super) static COLUMNS: &[Column] = &[
    Column {
        id: "invasion",
        unit: Unit::PerTime,
        help: "growth when rare of each absent species that is a population of its own (Turelli 1978; Chesson 2000); \
               where positive, it can come in; for people, unless asked for, only who can",
        shown: Shown::Everywhere,
        title: "growth when rare",
        keys: &[key(
            "invasion",
            Get::Species(|row| Some(row.measures()?.invasion.iter().map(|&(id, rate)| (id.0, rate)).collect())),
        )],
        cells: Cells::Own { heads: compact::invasion_heads, cells: compact::invasion },
    },
    Column {
        id: "settles",
        unit: Unit::Said("period: time unit; lowest, highest: unit of the species; mean_yield: as yield"),
        help: "of an unstable state of coexistence: what a path released beside it goes to; numerical, never proved",
        shown: Shown::Everywhere,
        title: "gives way to",
        keys: &[key("settles", Get::Other { paths: settling_paths, value: settling })],
        cells: Cells::Own {
            heads: |_| vec![Head::new("gives way to", Align::Left)],
            cells: |row, _| vec![Cell::new(settled_in_words(row))],
        },
    },
    Column {
        id: "yield",
        unit: Unit::Yield,
        help: "what each harvest takes or counts of each species; for people, unless asked for, summed where there are many",
        shown: Shown::Everywhere,
        title: "yield",
        keys: &[key("yield", Get::Other { paths: |table| taken(table, &Path::default()), value: yields })],
        cells: Cells::Own { heads: compact::yield_heads, cells: compact::yields },
    },
    Column {
        id: "value",
        unit: Unit::Said("as prices and costs have it, per time unit; in a map, per step"),
        help: "of each harvest with a price or a cost: prices times yields, less cost",
        shown: Shown::Everywhere,
        title: "value",
        keys: &[key("value", Get::Other { paths: priced, value: values })],
        cells: Cells::Rounded,
    },
    Column {
        id: "net_effects",
        unit: Unit::Said("unit of the species per (unit of the pressed one per time unit)"),
        help: "how much each species (row) changes in the long run if another (column) is given a steady unit of \
               extra growth (Bender, Case & Gilpin 1984; Yodzis 1988); see net_effects_condition",
        shown: Shown::Json,
        title: "effect",
        keys: &[key(
            "net_effects",
            Get::Matrix { get: |row| Some(&row.measures()?.net_effects.as_ref()?.matrix), between: ON },
        )],
        cells: Cells::Rounded,
    },
    Column {
        id: "elasticities",
        unit: Unit::None,
        help: "relative change of each abundance, and of the leading eigenvalue's real part (in a map, modulus), for a \
               relative change of each parameter (Caswell 2001)",
        shown: Shown::Json,
        title: "elasticity",
        keys: &[key("elasticities", Get::Other { paths: elasticity_paths, value: elasticities })],
        cells: Cells::Rounded,
    },
    Column {
        id: "covariance",
        unit: Unit::Said("units of the two species multiplied, for noise of unit intensity"),
        help: "stationary covariance of each two species under unit white noise on each species present (Arnoldi, \
               Loreau & Haegeman 2016)",
        shown: Shown::Json,
        title: "covariance",
        keys: &[key("covariance", Get::Matrix { get: |row| row.measures()?.covariance.as_deref(), between: WITH })],
        cells: Cells::Rounded,
    },
];

fn settling(row: &Row<'_>) -> Value {
    let settles = row.assessed().and_then(|assessed| assessed.settles.as_ref());
    settles.map_or(Value::Null, |to| paths::destination(row.place(), to))
}

fn settled_in_words(row: &Row<'_>) -> String {
    let settles = row.assessed().and_then(|assessed| assessed.settles.as_ref());
    settles.map_or_else(String::new, |to| paths::word(row.place(), to))
}

fn settling_paths(table: &Table<'_>) -> Vec<Path> {
    let mut all = keyed(&["to", "period"]);
    all.extend(Path::default().key("lowest").by_species(table));
    all.extend(Path::default().key("highest").by_species(table));
    all.extend(taken(table, &Path::default().key("mean_yield")));
    all
}

/// A place for each harvest of any scenario shown and each species that it takes.
pub(super) fn taken(table: &Table<'_>, under: &Path) -> Vec<Path> {
    let mut all: Vec<Path> = Vec::new();
    for harvest in table.harvests() {
        for amount in &harvest.amounts {
            let place = amount.species.0;
            let path = under.clone().key(&harvest.name).species(table, place);
            if !all.contains(&path) {
                all.push(path);
            }
        }
    }
    all
}

fn priced(table: &Table<'_>) -> Vec<Path> {
    let mut names: Vec<&str> = Vec::new();
    for harvest in table.harvests() {
        let is_priced = harvest.cost.is_some() || !harvest.price.is_empty();
        if is_priced && !names.contains(&harvest.name.as_str()) {
            names.push(&harvest.name);
        }
    }
    keyed(&names)
}

pub(super) fn yields(row: &Row<'_>) -> Value {
    let one = |harvest: &HarvestYield| {
        let amounts = harvest.amounts.iter().map(|&(id, amount)| (id.0, Some(amount)));
        (harvest.name.clone(), by_symbol(row.table, amounts))
    };
    let all = |yields: &[HarvestYield]| Value::Object(yields.iter().map(one).collect::<Map<_, _>>());
    row.measures().map_or(Value::Null, |measures| all(&measures.yields))
}

fn values(row: &Row<'_>) -> Value {
    let one = |harvest: &HarvestYield| (harvest.name.clone(), optional(harvest.value));
    let all = |yields: &[HarvestYield]| Value::Object(yields.iter().map(one).collect::<Map<_, _>>());
    row.measures().map_or(Value::Null, |measures| all(&measures.yields))
}

fn elasticity_paths(table: &Table<'_>) -> Vec<Path> {
    let of = |name: &str| {
        let under = Path::default().key(name);
        let mut all = under.clone().key("state").by_species(table);
        all.push(under.key("leading"));
        all
    };
    table.model.parameters.iter().flat_map(|parameter| of(&parameter.name)).collect()
}

fn elasticities(row: &Row<'_>) -> Value {
    let one = |elasticity: &Elasticity| {
        let state = by_symbol(row.table, elasticity.state.iter().copied().enumerate());
        let value = json!({"state": state, "leading": optional(elasticity.leading)});
        (row.table.parameter(elasticity.parameter), value)
    };
    let all = |found: &[Elasticity]| Value::Object(found.iter().map(one).collect::<Map<_, _>>());
    row.measures().map_or(Value::Null, |measures| all(&measures.elasticities))
}
