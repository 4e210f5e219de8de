//! One equilibrium for a screen: a sentence in plain words, and its numbers one below the other.
//!
//! The numbers are cells of the one list of columns, in an order of their own: what a reader with little room needs first.

use super::columns::{Glyphs, Unit, columns};
use super::number::human;
use super::{Limits, Names, Row, Scene, Solved, Table, paths, words};
use crate::analysis::linearise::{Linearisation, Verdict};
use crate::analysis::measures::Measures;
use crate::analysis::paths::Destination;
use crate::model::Model;
use crate::model::system::bounds::Bound;
use crate::report::grid::Ink;
use crate::report::kinds;

/// A scenario that a screen shows.
#[derive(Clone, Copy, Debug)]
pub struct Case<'c> {
    /// The model.
    pub model: &'c Model,
    /// The search box.
    pub bounds: &'c [Bound],
    /// The scenario, and what was found.
    pub scene: &'c Scene,
    /// What was found.
    pub solved: &'c Solved,
    /// Names of its equilibria.
    pub ids: &'c [String],
}

/// One line about an equilibrium.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fact {
    /// What it is.
    pub label: String,
    /// Its value, rounded, with its unit.
    pub value: String,
    /// How sure it is.
    pub ink: Ink,
}

/// Columns in the order in which they are shown; others are left to the table.
const ORDER: &[&str] = &[
    "type",
    "proven",
    "why",
    "nonlinear",
    "yield",
    "value",
    "return_time",
    "period",
    "peak_amplification",
    "invasion",
    "settles",
    "populations",
    "resilience",
    "damping_ratio",
    "reactivity",
    "reactivity_proportional",
    "invariability",
    "eigenvalues",
    "net_effects_condition",
];

/// Species that are named in a sentence; more would bury it.
const MOST_NAMED: usize = 4;
/// A knock that grows by less than this share is not said to grow.
const GROWTH: f64 = 0.05;

impl Case<'_> {
    fn with<T>(&self, place: usize, show: impl FnOnce(&Row<'_>) -> T) -> Option<T> {
        let names = Names { ids: vec![self.ids.to_vec()], unfollowed: Vec::new() };
        let table = Table {
            model: self.model,
            sha256: "",
            tables: &[],
            command: "",
            set: &[],
            bounds: self.bounds,
            limits: Limits { seconds: 0.0, boxes: 0 },
            scenes: std::slice::from_ref(self.scene),
            names: &names,
            interrupted: false,
            columns: None,
        };
        let equilibrium = self.solved.equilibria.list.get(place)?;
        let row = Row {
            table: &table,
            scenario: self.scene.scenario,
            solved: self.solved,
            ids: self.ids,
            place,
            equilibrium,
        };
        Some(show(&row))
    }

    /// The numbers of the equilibrium at a place of the list; none where there is none.
    pub fn facts(&self, place: usize, ascii: bool) -> Vec<Fact> {
        let glyphs = if ascii { Glyphs::Ascii } else { Glyphs::Unicode };
        self.with(place, |row| ORDER.iter().flat_map(|id| facts_of(row, id, glyphs)).collect()).unwrap_or_default()
    }

    /// What the equilibrium at a place of the list means, in plain words; empty where there is none.
    pub fn sentence(&self, place: usize) -> String {
        self.with(place, |row| {
            let said = [kind(row), Some(who(row)), fate(row), from_now(row)];
            said.into_iter().flatten().collect::<Vec<_>>().join(" ")
        })
        .unwrap_or_default()
    }

    /// Its sign, name and type, and how sure each is: the sign, then `E5, stable spiral, proved`; empty where there is none.
    pub fn label(&self, place: usize, ascii: bool) -> String {
        self.with(place, |row| label(row, ascii)).unwrap_or_default()
    }

    /// The same without its sign.
    pub fn in_words(&self, place: usize) -> String {
        self.with(place, in_words).unwrap_or_default()
    }

    /// What the search came to.
    pub fn overall(&self) -> String {
        words::verdict(&self.solved.equilibria).1
    }
}

fn facts_of(row: &Row<'_>, id: &str, glyphs: Glyphs) -> Vec<Fact> {
    let Some(column) = columns().find(|column| column.id == id) else { return Vec::new() };
    let heads = column.heads(row.table);
    let cells = column.cells(row, glyphs);
    let pairs = heads.into_iter().zip(cells).filter(|(_, cell)| !cell.text().is_empty());
    pairs
        .map(|(head, cell)| {
            let label = if head.title.is_empty() { column.id.replace('_', " ") } else { head.title };
            let ink = ink(cell.text());
            // What says of a cell more than its unit belongs to the name.
            match head.unit {
                unit if unit.is_empty() => Fact { label, value: cell.text().to_owned(), ink },
                unit if column.unit == Unit::None || unit.contains(", ") => {
                    Fact { label: format!("{label} ({unit})"), value: cell.text().to_owned(), ink }
                }
                unit => Fact { label, value: format!("{} {unit}", cell.text()), ink },
            }
        })
        .collect()
}

/// The ink of what says itself how sure it is.
fn ink(text: &str) -> Ink {
    if text.contains(words::proof(false)) || text.contains(words::UNDECIDED) {
        Ink::Undecided
    } else if text.contains(words::proof(true)) {
        Ink::Proved
    } else {
        Ink::Plain
    }
}

/// Its name, its type, and how sure that is.
fn kind(row: &Row<'_>) -> Option<String> {
    let linear = row.linear()?;
    let word = kinds::of(linear.kind).word;
    Some(format!("{}: {word}, {}.", row.id(), words::proof(linear.kind_proven)))
}

fn label(row: &Row<'_>, ascii: bool) -> String {
    let look = row.linear().map_or(kinds::UNKNOWN, |linear| kinds::of(linear.kind));
    let glyph = if ascii { look.ascii } else { look.glyph };
    let winds = if look.spirals { String::from(kinds::SPIRALS) } else { String::new() };
    format!("{glyph}{winds} {}", in_words(row))
}

fn in_words(row: &Row<'_>) -> String {
    let what = match (row.linear(), row.equilibrium.proven) {
        (None, proven) => format!("{}; {}", words::proof(proven), row.why().unwrap_or("there is no linear part")),
        (Some(linear), false) => format!("{}, {}", kinds::of(linear.kind).word, words::proof(false)),
        (Some(linear), true) if linear.kind_proven => {
            format!("{}, {}", kinds::of(linear.kind).word, words::proof(true))
        }
        (Some(linear), true) => format!("proved, type numerical: {}", kinds::of(linear.kind).word),
    };
    let name = if row.id().is_empty() { String::new() } else { format!("{}, ", row.id()) };
    format!("{name}{what}")
}

/// Who is there, and how many.
fn who(row: &Row<'_>) -> String {
    let species = &row.table.model.species;
    let present: Vec<usize> = (0..species.len()).filter(|&i| row.equilibrium.has(i)).collect();
    let amount = |&i: &usize| {
        let unit = species[i].unit.as_ref().map_or(String::new(), |unit| format!(" {}", unit.value));
        format!("{} {}{unit}", species[i].name, human(row.equilibrium.state[i]))
    };
    let text = match &present[..] {
        [] => "nobody is there".to_owned(),
        [one] if species.len() > 1 => format!("{} alone", amount(one)),
        [first, rest @ ..] if present.len() <= MOST_NAMED => {
            let rest: Vec<String> = rest.iter().map(amount).collect();
            let rest = if rest.is_empty() { String::new() } else { format!(" with {}", rest.join(", ")) };
            format!("{}{rest}", amount(first))
        }
        _ => format!("{} of {} species are there", present.len(), species.len()),
    };
    capital(&text) + "."
}

/// What becomes of it after a knock.
fn fate(row: &Row<'_>) -> Option<String> {
    let (Some(linear), Some(measures)) = (row.linear(), row.measures()) else {
        return row.why().map(|why| capital(why) + ".");
    };
    Some(match linear.stable {
        Some(true) => returns(row, linear, measures),
        Some(false) => leaves(row, measures),
        None => match linear.nonlinear.map(|nonlinear| nonlinear.verdict) {
            Some(Verdict::Attracts) => "The linear part does not decide; by the nonlinear terms it attracts.".to_owned(),
            Some(Verdict::Repels) => "The linear part does not decide; by the nonlinear terms it repels.".to_owned(),
            Some(Verdict::SemiStable) => {
                "The linear part does not decide; by the nonlinear terms it attracts from one side and repels on the other."
                    .to_owned()
            }
            Some(Verdict::Open) | None => "Whether it lasts is open: the linear part does not decide.".to_owned(),
        },
    })
}

fn returns(row: &Row<'_>, linear: &Linearisation, measures: &Measures) -> String {
    let time = &row.table.model.time_unit.value;
    let mut text = match measures.return_time {
        Some(return_time) => format!("Returns after a knock in {} {time}", human(return_time)),
        None => "Returns after a knock".to_owned(),
    };
    if let Some(period) = measures.period {
        text = format!("{text}, swinging with a period of {} {time}", human(period));
    } else if linear.alternating {
        text += ", above and below by turns";
    }
    if let Some(grown) = measures.amplification.filter(|grown| grown.factor > 1.0 + GROWTH) {
        text = format!("{text}; a knock can first grow {:.1}-fold", grown.factor);
    }
    text + "."
}

fn leaves(row: &Row<'_>, measures: &Measures) -> String {
    let species = &row.table.model.species;
    let invaders = measures.invasion.iter().filter(|(_, rate)| rate.is_some_and(|rate| rate > 0.0));
    let invaders: Vec<&str> = invaders.filter_map(|(id, _)| species.get(id.0)).map(|one| one.name.as_str()).collect();
    let mut text = match invaders.len() {
        0 => "A knock sends it away".to_owned(),
        1..=MOST_NAMED => format!("Does not last: {} can come in", invaders.join(", ")),
        count => format!("Does not last: {count} species can come in"),
    };
    if let Some(to) = row.assessed().and_then(|assessed| assessed.settles.as_ref()) {
        let to = match to {
            Destination::Equilibrium(_) => format!("; beside it the path goes to {}", paths::word(row.place(), to)),
            Destination::Cycle(cycle) => format!(
                "; beside it the path goes to a cycle of {} {}",
                human(cycle.period),
                row.table.model.time_unit.value
            ),
            Destination::Loss(_) => format!("; beside it the path goes to the {}", paths::word(row.place(), to)),
            Destination::NotSettled => "; where the path beside it goes is open".to_owned(),
        };
        text = format!("{text}{to} (numerical)");
    }
    text + "."
}

/// That today's stocks lead to it.
fn from_now(row: &Row<'_>) -> Option<String> {
    let from = row.solved.assessment.from_now.as_ref()?;
    let time = &row.table.model.time_unit.value;
    let after = from.time.map_or_else(String::new, |after| format!(" within {} {time}", human(after)));
    (from.reaches == Destination::Equilibrium(row.place))
        .then(|| format!("Today's stocks come near it{after} (numerical)."))
}

/// With a capital at its beginning.
fn capital(text: &str) -> String {
    let mut chars = text.chars();
    chars.next().map_or_else(String::new, |first| first.to_uppercase().chain(chars).collect())
}
