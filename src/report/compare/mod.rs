//! `restpoint compare`: scenarios side by side, one block for each equilibrium, one column for each scenario.
//!
//! [`Comparison`] has it all as plain data: for each equilibrium and scenario the numbers, what became of it on the way
//! from the first scenario, the reference, and what differs from there. Which equilibrium is which is the business of the
//! table's names, so that all that is shown of a run says the same. [`text()`], [`markdown()`], [`latex()`], [`csv()`] and [`json`]
//! present it with the table's own words and numbers; `words` is the one place where a change becomes a text, `quantity`
//! has what is compared: to compare something more, add it there.
//!
//! What was found by following is numerical; nothing of it is proved, and every format says so.
//!
//! The JSON has all that the table has, and after its `scenarios`:
//!
//! - `reference`: the name of the scenario that the others are compared with; null where all failed
//! - `matches`: one a row, `{"id", "scenarios": [{"name", "place", "change", "differences"}]}`. `place`: its place in that
//!   scenario's `equilibria`, or null. `differences`: `{quantity: {"from", "to"}}` where both are numbers that are not the same
//! - `change`: `{"what", "proven": false, "text"}`, `what` being `reference`, `same`, `gained`, `lost`, `other name`, `in
//!   neither` or `failed`; for those that were followed also `through` (`fold`, `zero`, `box`, `arrives`, `not followed`), `at` (share of
//!   the way from the reference, or null), `with` (id, or null), `species` (symbol, or null), `turns` and `kinks` (shares of the
//!   way), `type_changed` where it is in both

mod csv;
mod data;
mod latex;
mod markdown;
mod quantity;
mod sheet;
mod summary;
mod text;
mod words;

pub use csv::csv;
pub use data::json;
pub use latex::latex;
pub use markdown::markdown;
pub use quantity::{Measured, Quantity};
pub use summary::summary;
pub use text::text;
pub use words::difference;

use super::table::{Form, Page, Scene, Solved, Table, pretty};
use crate::analysis::passage::{Fate, Passage};
use quantity::quantities;

/// Scenarios side by side.
#[derive(Clone, Debug)]
pub struct Comparison<'c> {
    /// The scenarios, with the names of their equilibria.
    pub table: &'c Table<'c>,
    /// The first scenario that did not fail, by place among those shown: the others are compared with it.
    pub reference: Option<usize>,
    /// What is compared.
    pub quantities: Vec<Quantity>,
    /// One for each name, in the order of first appearance.
    pub rows: Vec<Identity>,
}

/// One equilibrium through all scenarios.
#[derive(Clone, Debug, PartialEq)]
pub struct Identity {
    /// Its name.
    pub id: String,
    /// One for each scenario shown.
    pub entries: Vec<Entry>,
}

/// One equilibrium in one scenario.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// Its place in the scenario's list, where it is there.
    pub place: Option<usize>,
    /// One for each quantity; all `None` where it is not there.
    pub values: Vec<Option<f64>>,
    /// What became of it on the way from the reference.
    pub change: Change,
    /// What following found, of the one in the reference, else of the one here.
    pub fate: Option<Fate>,
    /// Whether its type is another than in the reference; `None` where it is not in both, or a type is missing.
    pub type_changed: Option<bool>,
}

/// What became of an equilibrium on the way from the reference.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Change {
    /// This is the reference, and it is there.
    Reference,
    /// It is in both.
    Same,
    /// It is here alone.
    Gained,
    /// It is in the reference alone.
    Lost,
    /// It is in one of them alone by this name; followed from the reference it has another.
    OtherName,
    /// It is in neither.
    InNeither,
    /// Nothing could be looked for in the scenario.
    Failed,
}

impl Entry {
    /// Whether its fate is that of one here, followed back to the reference.
    pub fn is_back(&self) -> bool {
        self.place.is_some() && self.change != Change::Same
    }
}

/// A comparison in a form.
pub fn written(comparison: &Comparison<'_>, form: Form, page: Page) -> String {
    match form {
        Form::Text => text(comparison, page),
        Form::Csv => csv(comparison, page.style),
        Form::Markdown => markdown(comparison, page),
        Form::Json => pretty(&json(comparison), page.style),
        Form::Latex => latex(comparison, page),
    }
}

impl<'c> Comparison<'c> {
    /// Compares scenarios with the first of them that did not fail; a passage from that one to each, where there is one.
    pub fn new(table: &'c Table<'c>, passages: &[Option<Passage>]) -> Self {
        let reference = table.scenes.iter().position(|scene| scene.outcome.is_ok());
        let quantities = quantities(table);
        let mut ids: Vec<&str> = Vec::new();
        let mut known = std::collections::HashSet::new();
        for (_, names) in table.named() {
            ids.extend(names.iter().map(String::as_str).filter(|id| known.insert(*id)));
        }
        let maker = Maker { table, reference, quantities: &quantities, passages, places: places(table) };
        let row = |id: &&str| Identity {
            id: (*id).to_owned(),
            entries: (0..table.scenes.len()).map(|scene| maker.entry(id, scene)).collect(),
        };
        let rows = ids.iter().map(row).collect();
        Self { table, reference, quantities, rows }
    }

    /// What is known of the scenario at a place among those shown.
    pub fn solved(&self, scene: usize) -> Option<&'c Solved> {
        self.table.scenes.get(scene).and_then(|scene: &Scene| scene.outcome.as_ref().ok())
    }

    /// A sentence on what became of an equilibrium in the scenario at a place, where there is anything to be said.
    pub fn sentence(&self, identity: &Identity, scene: usize) -> Option<String> {
        words::sentence(self, identity, scene)
    }

    /// Where today's stocks lead in the scenario at a place, in a word or two; `None` where that is not known.
    pub fn leads(&self, scene: usize) -> Option<String> {
        let from = self.solved(scene)?.assessment.from_now.as_ref()?;
        let scenario = self.table.scenes.get(scene)?.scenario;
        let at = super::table::paths::Place { table: self.table, scenario, ids: self.table.names.of(scene) };
        Some(super::table::paths::word(at, &from.reaches))
    }

    /// The entry of the reference.
    pub fn base<'i>(&self, identity: &'i Identity) -> Option<&'i Entry> {
        identity.entries.get(self.reference?)
    }
}

type Places<'c> = Vec<std::collections::HashMap<&'c str, usize>>;

/// Where each name is in each scenario's list.
fn places<'c>(table: &'c Table<'c>) -> Places<'c> {
    let of = |names: &'c [String]| names.iter().enumerate().map(|(place, id)| (id.as_str(), place)).collect();
    table.named().map(|(_, names)| of(names)).collect()
}

struct Maker<'m, 'c> {
    table: &'c Table<'c>,
    reference: Option<usize>,
    quantities: &'m [Quantity],
    passages: &'m [Option<Passage>],
    places: Places<'c>,
}

impl Maker<'_, '_> {
    fn entry(&self, id: &str, scene: usize) -> Entry {
        let place = self.places[scene].get(id).copied();
        let base = self.reference.and_then(|reference| self.places[reference].get(id).copied());
        let change = match (&self.table.scenes[scene].outcome, base, place) {
            (Err(_), ..) => Change::Failed,
            (Ok(_), _, Some(_)) if self.reference == Some(scene) => Change::Reference,
            (Ok(_), Some(_), Some(_)) => Change::Same,
            (Ok(_), Some(_), None) => Change::Lost,
            (Ok(_), None, Some(_)) => Change::Gained,
            (Ok(_), None, None) => Change::InNeither,
        };
        let passage = self.passages.get(scene).and_then(Option::as_ref);
        let fate = passage.and_then(|passage| match change {
            Change::Same | Change::Lost => passage.forward.get(base?).cloned(),
            Change::Gained => passage.backward.get(place?).cloned(),
            _ => None,
        });
        let change = match (change, &fate) {
            (Change::Lost | Change::Gained, Some(Fate::Arrives { .. })) => Change::OtherName,
            (change, _) => change,
        };
        let value = |quantity: &Quantity| quantity.of(self.table, scene, place?);
        let kinds = [self.reference.map(|reference| (reference, base)), Some((scene, place))];
        let [first, second] = kinds.map(|at| at.and_then(|(scene, place)| self.kind(scene, place?)));
        let type_changed = first.zip(second).map(|(first, second)| first != second);
        Entry { place, values: self.quantities.iter().map(value).collect(), change, fate, type_changed }
    }

    fn kind(&self, scene: usize, place: usize) -> Option<crate::analysis::linearise::Kind> {
        let solved = self.table.scenes.get(scene)?.outcome.as_ref().ok()?;
        Some(solved.assessment.equilibria.get(place)?.linear.as_ref().ok()?.kind)
    }
}

/// What is said of a scenario beside its list: where today's stocks lead, and what could not be followed.
fn overview(table: &Table<'_>, place: usize) -> Vec<String> {
    let Some(scene) = table.scenes.get(place) else { return Vec::new() };
    let Ok(solved) = &scene.outcome else { return Vec::new() };
    let at = super::table::paths::Place { table, scenario: scene.scenario, ids: table.names.of(place) };
    let from_now = solved.assessment.from_now.iter();
    let from_now = from_now.map(|from| super::table::paths::from_now_in_words(at, from));
    from_now.chain(table.names.sentences(place)).collect()
}

/// The words that are used, with their meanings.
fn meanings(table: &Table<'_>) -> Vec<(&'static str, &'static str)> {
    let used = ["proved", "numerical", super::table::words::UNDECIDED, "return time"];
    let mut all = super::table::words::meanings(table);
    all.retain(|(word, _)| used.contains(word));
    all.push(("change", CHANGE));
    all
}

const CHANGE: &str = "from the first scenario, found by following each equilibrium on the way between the two balances \
     of the scenarios; = is no difference, + and - how much more or less. Numerical: nothing of it is proved.";
