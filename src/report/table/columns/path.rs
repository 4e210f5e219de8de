//! From a row to the value of a key, and the places in that value where single numbers and words are.
//!
//! The places hang on the model alone, never on what was computed: a file has the same fields whatever came out.

use serde_json::{Map, Value};

use super::super::number::human;
use super::super::{Row, Table, exact, optional};

/// A step from a value to a part of it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(in super::super) enum Step {
    Key(String),
    /// Row and column of a matrix, or place in a list.
    Index(usize),
}

/// A place in the value of a key.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub(in super::super) struct Path {
    pub(in super::super) steps: Vec<Step>,
    /// What the place is called where its steps do not say it.
    called: Option<String>,
    /// Whose unit it has.
    pub(in super::super) species: Option<usize>,
}

impl Path {
    pub(super) fn key(self, name: &str) -> Self {
        let mut steps = self.steps;
        steps.push(Step::Key(name.to_owned()));
        Self { steps, ..self }
    }

    fn index(self, place: usize) -> Self {
        let mut steps = self.steps;
        steps.push(Step::Index(place));
        Self { steps, ..self }
    }

    /// The same place under each species' symbol.
    pub(super) fn by_species(&self, table: &Table<'_>) -> Vec<Self> {
        (0..table.model.species.len()).map(|place| self.clone().species(table, place)).collect()
    }

    /// The place under one species' symbol, in its unit.
    pub(super) fn species(self, table: &Table<'_>, place: usize) -> Self {
        Self { species: Some(place), ..self.key(table.symbol(place).unwrap_or("")) }
    }

    /// Its name within its column: keys with spaces between, places counted from 1; empty for the value itself.
    pub(in super::super) fn name(&self) -> String {
        let step = |step: &Step| match step {
            Step::Key(name) => name.clone(),
            Step::Index(place) => (place + 1).to_string(),
        };
        self.called.clone().unwrap_or_else(|| self.steps.iter().map(step).collect::<Vec<_>>().join(" "))
    }

    /// What is there; null where nothing is.
    pub(in super::super) fn of<'v>(&self, value: &'v Value) -> &'v Value {
        let step = |value: &'v Value, step: &Step| match step {
            Step::Key(name) => value.get(name),
            Step::Index(place) => value.get(place),
        };
        self.steps.iter().try_fold(value, step).unwrap_or(&Value::Null)
    }
}

/// Places of species, each with its number.
type Numbers = Vec<(usize, Option<f64>)>;

/// How a value is got from a row; None is null.
#[derive(Clone, Copy, Debug)]
pub(in super::super) enum Get {
    /// One number, word or answer, or a list of words.
    One(fn(&Row<'_>) -> Value),
    /// One number.
    Number(fn(&Row<'_>) -> Option<f64>),
    /// Numbers under the symbols of their species.
    Species(fn(&Row<'_>) -> Option<Numbers>),
    /// A square of numbers, row by row over all species.
    Matrix {
        get: for<'r, 't> fn(&'r Row<'t>) -> Option<&'r [f64]>,
        /// Between the symbols of row and column.
        between: &'static str,
    },
    /// Anything else.
    Other { paths: fn(&Table<'_>) -> Vec<Path>, value: fn(&Row<'_>) -> Value },
}

impl Get {
    pub(in super::super) fn value(self, row: &Row<'_>) -> Value {
        match self {
            Get::One(get) | Get::Other { value: get, .. } => get(row),
            Get::Number(get) => optional(get(row)),
            Get::Species(get) => get(row).map_or(Value::Null, |numbers| by_symbol(row.table, numbers)),
            Get::Matrix { get, .. } => get(row).map_or(Value::Null, |numbers| {
                let order = row.table.model.species.len().max(1);
                numbers.chunks(order).map(|line| line.iter().map(|&x| exact(x)).collect::<Value>()).collect()
            }),
        }
    }

    pub(in super::super) fn paths(self, table: &Table<'_>) -> Vec<Path> {
        match self {
            Get::One(_) | Get::Number(_) => vec![Path::default()],
            Get::Species(_) => Path::default().by_species(table),
            Get::Matrix { between, .. } => entries(table, between),
            Get::Other { paths, .. } => paths(table),
        }
    }
}

/// A place for each row and column of a matrix, called by their symbols.
fn entries(table: &Table<'_>, between: &str) -> Vec<Path> {
    let symbols: Vec<&str> = table.model.species.iter().map(|species| species.symbol.as_str()).collect();
    let mut all = Vec::with_capacity(symbols.len().pow(2));
    for (i, row) in symbols.iter().enumerate() {
        for (j, column) in symbols.iter().enumerate() {
            let called = Some(format!("{row}{between}{column}"));
            all.push(Path { called, ..Path::default().index(i).index(j) });
        }
    }
    all
}

/// Numbers under symbols.
pub(in crate::report) fn by_symbol(
    table: &Table<'_>,
    numbers: impl IntoIterator<Item = (usize, Option<f64>)>,
) -> Value {
    let named = |(place, x): (usize, Option<f64>)| Some((table.symbol(place)?.to_owned(), optional(x)));
    Value::Object(numbers.into_iter().filter_map(named).collect::<Map<_, _>>())
}

/// Places in a list of this many objects with these keys.
pub(super) fn listed(count: usize, keys: &[&str]) -> Vec<Path> {
    (0..count).flat_map(|place| keys.iter().map(move |key| Path::default().index(place).key(key))).collect()
}

/// Places under these keys.
pub(super) fn keyed(keys: &[&str]) -> Vec<Path> {
    keys.iter().map(|key| Path::default().key(key)).collect()
}

/// A value for people: rounded, yes or no, a list with spaces; nothing for null.
pub(super) fn humane(value: &Value) -> String {
    match value {
        Value::Null | Value::Object(_) => String::new(),
        Value::Bool(answer) => if *answer { "yes" } else { "no" }.to_owned(),
        Value::Number(number) if number.is_f64() => number.as_f64().map_or_else(String::new, human),
        Value::Number(number) => number.to_string(),
        Value::String(text) => text.clone(),
        Value::Array(parts) => parts.iter().map(humane).collect::<Vec<_>>().join(" "),
    }
}
