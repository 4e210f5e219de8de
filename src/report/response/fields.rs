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
    /// Whether there is one for each species, harvest or parameter.
    pub each: bool,
}

pub(super) const fn field(id: &'static str, help: &'static str) -> Field {
    Field { id, help, each: false }
}

pub(super) const fn each(id: &'static str, help: &'static str) -> Field {
    Field { id, help, each: true }
}

/// Every field of responses to one parameter, in its order.
pub const FIELDS: [Field; 26] = [
    field("record", "what the row is: scenario, threshold, best yield, band, or point of a branch"),
    field("scenario", "the scenario's name"),
    field("of", "the parameter that is varied; of a band the one that it is of"),
    field("at", "its value; of a scenario and a band the present one"),
    field("branch", "the branch of a point or a best yield: B1, B2, ..."),
    field(
        "place",
        "of a point its place among those written of the branch, from 1: ends, thresholds, changes of type, and so many more that straight lines show the branch",
    ),
    field("equilibrium", "the row of the table that a branch passes through at the present value"),
    field("present", "symbols of those present"),
    each("state", "abundance of each species, in its unit"),
    field("type", "type by the linear part"),
    field("stable", "whether all eigenvalues attract"),
    field("feasible", "whether no abundance is negative, and none outside the search box"),
    field("leading_re", "real part of the leading eigenvalue; of a map, multiplier"),
    field("leading_im", "its imaginary part"),
    each("yield", "of a point: what each harvest takes of each species, per time unit or step"),
    each("value", "of a point: what each harvest is worth"),
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
pub struct Chosen(Vec<Field>);

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
    pub fn all(fields: &[Field]) -> Self {
        Self(fields.to_vec())
    }

    /// Reads names with commas between; `all` is every one. Each has its place once, in the order given.
    ///
    /// # Errors
    /// The first name that no field has.
    pub fn read(list: &str, fields: &[Field]) -> Result<Self, UnknownField> {
        let mut chosen: Vec<Field> = Vec::new();
        for id in list.split(',').map(str::trim).filter(|id| !id.is_empty()) {
            if id == "all" {
                return Ok(Self::all(fields));
            }
            let Some(found) = fields.iter().find(|field| field.id == id) else {
                return Err(UnknownField {
                    id: id.to_owned(),
                    nearest: nearest(id, fields.iter().map(|field| field.id)),
                });
            };
            if !chosen.contains(found) {
                chosen.push(*found);
            }
        }
        Ok(if chosen.is_empty() { Self::all(fields) } else { Self(chosen) })
    }

    /// The names of the fields that a file with these has: those of which there are several in the order given.
    pub(super) fn names(&self, of_each: &[String]) -> Vec<String> {
        let of = |field: &Field| {
            let is_of = |name: &&String| name.split(' ').next() == Some(field.id);
            if field.each { of_each.iter().filter(is_of).cloned().collect() } else { vec![field.id.to_owned()] }
        };
        self.0.iter().flat_map(of).collect()
    }
}

/// The fields and what they say, as text.
pub fn guide() -> String {
    let line = |field: &Field| super::super::layout::paragraph(&format!("  {}", field.id), field.help, 16, 80);
    let lines = |fields: &[Field]| fields.iter().map(line).collect::<String>();
    format!(
        "Fields of restpoint response --format csv, for --columns (all is every one):\n\n{}\nWith --of twice:\n\n{}",
        lines(&FIELDS),
        lines(&super::chart::FIELDS)
    )
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
