//! The fields of responses in CSV: their list, which the command line chooses from, and what each row has in them.
//!
//! To add one: a row of [`FIELDS`], and its value where `csv` makes rows.

use serde_json::{Map, Value};

use crate::diag::nearest::nearest;

/// A field, or the fields of a kind.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Field {
    /// Its name; that of one for each species or harvest begins with it.
    pub id: &'static str,
    /// What it says.
    pub help: &'static str,
}

const fn field(id: &'static str, help: &'static str) -> Field {
    Field { id, help }
}

/// Every field in its order.
pub const FIELDS: [Field; 26] = [
    field(
        "record",
        "what the row is: point (of a branch), threshold, best yield, band, or scenario where there is none of these",
    ),
    field("scenario", "the scenario's name"),
    field("of", "the parameter that is varied; of a band the one that it is of"),
    field("at", "its value; of a band the present one"),
    field("branch", "the branch of a point or a best yield: B1, B2, ..."),
    field("place", "of a point its place along the branch, from 1"),
    field("equilibrium", "the row of the table that a branch passes through at the present value"),
    field("present", "symbols of those present"),
    field("state", "abundance of each species, in its unit"),
    field("type", "type by the linear part"),
    field("stable", "whether all eigenvalues attract"),
    field("feasible", "whether no abundance is negative, and none outside the search box"),
    field("leading_re", "real part of the leading eigenvalue; of a map, multiplier"),
    field("leading_im", "its imaginary part"),
    field("yield", "of a point: what each harvest takes of each species, per time unit or step"),
    field("value", "of a point: what each harvest is worth"),
    field("kind", "of a threshold what happens there; of a best yield and a band how the state is lost"),
    field("criticality", "of a threshold: soft or hard"),
    field("meaning", "of a threshold: what it means for the community"),
    field("error", "of a threshold: the last correction of its place"),
    field("what", "of a best yield what is largest"),
    field("amount", "of a best yield how much; of a band the margin"),
    field("attained", "of a best yield whether a stable state has it, or it is only approached"),
    field("from", "of a band its lower end"),
    field("to", "of a band its upper end"),
    field("complete", "whether it is proved that the scenario's picture lacks no equilibrium"),
];

/// Fields asked for.
#[derive(Clone, Debug, PartialEq)]
pub struct Chosen(Vec<&'static str>);

/// A name that no field has.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct UnknownField {
    /// What was asked for.
    pub id: String,
    /// The field that was probably meant.
    pub nearest: Option<&'static str>,
}

impl Chosen {
    /// Every field.
    pub fn all() -> Self {
        Self(FIELDS.iter().map(|field| field.id).collect())
    }

    /// Reads names with commas between; `all` is every one. Each has its place once, in the order given.
    ///
    /// # Errors
    /// The first name that no field has.
    pub fn read(list: &str) -> Result<Self, UnknownField> {
        let mut chosen = Vec::new();
        for id in list.split(',').map(str::trim).filter(|id| !id.is_empty()) {
            if id == "all" {
                return Ok(Self::all());
            }
            let known = || FIELDS.iter().map(|field| field.id);
            let Some(found) = known().find(|known| *known == id) else {
                return Err(UnknownField { id: id.to_owned(), nearest: nearest(id, known()) });
            };
            if !chosen.contains(&found) {
                chosen.push(found);
            }
        }
        Ok(if chosen.is_empty() { Self::all() } else { Self(chosen) })
    }

    /// The names of the fields that a file with these has: those of a kind in the order given.
    pub(super) fn names(&self, of_kinds: &[String]) -> Vec<String> {
        let of = |id: &&'static str| {
            let kinds: Vec<String> =
                of_kinds.iter().filter(|name| name.split(' ').next() == Some(*id)).cloned().collect();
            if ["state", "yield", "value"].contains(id) { kinds } else { vec![(*id).to_owned()] }
        };
        self.0.iter().flat_map(of).collect()
    }
}

/// The fields and what they say, as text.
pub fn guide() -> String {
    let line = |field: &Field| super::super::layout::paragraph(&format!("  {}", field.id), field.help, 15, 80);
    let head = "Fields of restpoint response --format csv, for --columns (all is every one):\n\n";
    head.to_owned() + &FIELDS.iter().map(line).collect::<String>()
}

/// One row: values by the names of fields.
#[derive(Clone, Debug, Default)]
pub(super) struct Row(Map<String, Value>);

impl Row {
    /// With one more value.
    pub(super) fn with(mut self, name: &str, value: impl Into<Value>) -> Self {
        self.0.insert(name.to_owned(), value.into());
        self
    }

    /// Its values under these names, null where it has none.
    pub(super) fn values(&self, names: &[String]) -> Vec<Value> {
        names.iter().map(|name| self.0.get(name).cloned().unwrap_or(Value::Null)).collect()
    }
}
