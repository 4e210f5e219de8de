//! What a screen shows besides the table, as rows for a file: a path after a knock, effects of species on each other.
//!
//! [`Rows`] is plain data: what the rows are of, headings, values. [`written`] makes CSV, JSON, Markdown and LaTeX of it, with
//! the escaping and the tables of [`table`](super::table); [`heading`] what a text of the screen's own has above it.
//! [`provenance()`] makes the facts that are the same for all. Numbers are exact in CSV and JSON, rounded for people. To save
//! something else, make its `Rows`; nothing here knows what they mean.

mod files;
mod reports;

use serde_json::Value;

use super::table::provenance::{self, plain, whole};
use super::table::{Form, Page, Scene, Solved, Table, exact, pretty, scene};
use crate::model::TimeKind;

/// What is to be saved.
#[derive(Clone, Debug, PartialEq)]
pub struct Rows {
    /// The model's title.
    pub title: String,
    /// Whether time is continuous or steps.
    pub time: TimeKind,
    /// What the rows are, with a capital.
    pub what: String,
    /// What they are of, and how they were made.
    pub facts: Vec<Fact>,
    /// What they come to, in sentences; or why there are none.
    pub said: Vec<String>,
    /// One a column.
    pub headings: Vec<String>,
    /// As many values each as there are headings; null for what does not exist.
    pub rows: Vec<Vec<Value>>,
    /// How many rows a report shows, where it need not show all: the first, the last and evenly between.
    pub most: Option<usize>,
}

/// Something that holds for all rows.
#[derive(Clone, Debug, PartialEq)]
pub struct Fact {
    /// The field of CSV and the key of JSON.
    pub key: &'static str,
    /// What people read before it.
    pub label: &'static str,
    /// For people, numbers rounded; empty where there is nothing.
    pub text: String,
    /// For files.
    pub exact: Exact,
}

/// What files have of a fact.
#[derive(Clone, Debug, PartialEq)]
pub enum Exact {
    /// A text, null where it is empty.
    Text(String),
    /// Numbers by name: in CSV one text, an object in JSON.
    Together(Vec<(String, f64)>),
    /// Numbers by name: in CSV a field each, an object in JSON.
    Each(Vec<(String, f64)>),
}

impl Fact {
    /// A fact that files have as people read it.
    pub fn of_text(key: &'static str, label: &'static str, text: impl Into<String>) -> Self {
        let text = text.into();
        Self { key, label, exact: Exact::Text(text.clone()), text }
    }
}

/// What made the rows of a scenario and from what: program, file, hashes, values set, search, scenario. The command of the
/// table is not used.
pub fn provenance(table: &Table<'_>, path: &str, scene: &Scene, solved: &Solved) -> Vec<Fact> {
    let mut facts = vec![Fact::of_text("file", "file", path)];
    for (people, files) in provenance::facts(table, plain).into_iter().zip(provenance::facts(table, whole)) {
        let exact = match people.key {
            "command" => continue,
            "set" => Exact::Together(set(table)),
            _ => Exact::Text(files.texts.join("; ")),
        };
        facts.push(Fact { key: people.key, label: people.label, text: people.texts.join("; "), exact });
    }
    facts.push(Fact::of_text("scenario", "scenario", scene::name(table.model, scene)));
    facts.push(Fact {
        key: "changes",
        label: "changes",
        text: scene::changes(table, scene, solved, plain),
        exact: Exact::Text(scene::changes(table, scene, solved, whole)),
    });
    facts
}

fn set(table: &Table<'_>) -> Vec<(String, f64)> {
    let name = |id: usize| table.model.parameters.get(id).map(|parameter| parameter.name.clone());
    table.set.iter().filter_map(|&(id, value)| Some((name(id.0)?, value))).collect()
}

/// The rows in a form. As text they are only what stands above them: the screen draws the rest.
pub fn written(rows: &Rows, form: Form, page: Page) -> String {
    match form {
        Form::Text => heading(rows, page).join("\n") + "\n",
        Form::Csv => files::csv(rows, page.style),
        Form::Json => pretty(&files::json(rows), page.style),
        Form::Markdown => reports::markdown(rows, page),
        Form::Latex => reports::latex(rows, page),
    }
}

/// The lines that a text begins with: the title, what is shown, each fact. They are not broken, so that a name can be copied.
pub fn heading(rows: &Rows, page: Page) -> Vec<String> {
    let facts = rows.facts.iter().filter(|fact| !fact.text.is_empty());
    let facts = facts.map(|fact| format!("{}: {}", fact.label, fact.text));
    let lines = [rows.title.clone(), rows.what.clone()].into_iter().chain(facts);
    lines.map(|line| page.clean(&line)).collect()
}

/// Numbers by name as one text that reads back the same; null where there are none.
fn together(numbers: &[(String, f64)]) -> Value {
    let all: Vec<String> = numbers.iter().map(|(name, x)| format!("{name} = {}", whole(*x))).collect();
    text_or_null(&all.join(", "))
}

fn text_or_null(text: &str) -> Value {
    if text.is_empty() { Value::Null } else { text.into() }
}

fn object(numbers: &[(String, f64)]) -> Value {
    Value::Object(numbers.iter().map(|(name, x)| (name.clone(), exact(*x))).collect())
}

/// Names of which no two are the same: a later one gets a number.
fn distinct(names: impl Iterator<Item = String>) -> Vec<String> {
    let mut known = std::collections::BTreeSet::new();
    let mut all = Vec::new();
    for name in names {
        // Among one number more than there are names one is free.
        let numbered = (2..=known.len() + 2).map(|number| format!("{name} {number}"));
        let free = std::iter::once(name.clone()).chain(numbered).find(|name| !known.contains(name));
        let free = free.unwrap_or(name);
        known.insert(free.clone());
        all.push(free);
    }
    all
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_become_distinct() {
        let check = |names: &[&str], expected: &[&str]| {
            assert_eq!(distinct(names.iter().map(|name| (*name).to_owned())), expected);
        };
        check(&["time", "S"], &["time", "S"]);
        check(&["a", "a", "a 2", "a"], &["a", "a 2", "a 2 2", "a 3"]);
    }
}
