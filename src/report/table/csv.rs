//! The table as CSV (RFC 4180): a rectangle that spreadsheets and statistics read without being told anything.
//!
//! One row an equilibrium; a scenario without any, or one that failed, has a row all the same, so that nothing is missing
//! unsaid. First the scenario, then a field for each number and word of the columns, empty where there is none; then what
//! holds for the whole scenario and, again on each row, what the table is of. Which fields there are hangs on the model and
//! the columns asked for, never on what came out. Numbers read back exactly. A text that a spreadsheet would take for a
//! formula has an apostrophe before it.

use serde_json::Value;

use super::columns::{Column, Path, Shown};
use super::provenance::whole;
use super::text::clean;
use super::{Row, Scene, Solved, Style, Table, paths, provenance, scene, words};

/// The table: a line of names, then the rows; every line ends in CR LF.
pub fn csv(table: &Table<'_>, style: Style) -> String {
    let fields = Fields::new(table);
    let constants = constants(table);
    let mut text = line(&fields.names(table).into_iter().map(Value::from).collect::<Vec<_>>(), style);
    for (scene, ids) in table.named() {
        let (rows, context) = match &scene.outcome {
            Ok(solved) => (table.rows(scene, solved, ids), context(table, scene, solved, ids)),
            Err(problems) => (Vec::new(), failed(&scene::problems(table.model, problems))),
        };
        let blank = if rows.is_empty() { Some(vec![Value::Null; fields.paths.len()]) } else { None };
        for own in rows.iter().map(|row| fields.of(row)).chain(blank) {
            let scenario = Value::from(scene::name(table.model, scene));
            let common = context.iter().chain(&constants).map(|(_, value)| value.clone());
            text.push_str(&line(&std::iter::once(scenario).chain(own).chain(common).collect::<Vec<_>>(), style));
        }
    }
    text
}

/// The fields of the columns.
struct Fields {
    columns: Vec<&'static Column>,
    /// Column, key and path of each field.
    paths: Vec<(usize, usize, Path)>,
}

impl Fields {
    fn new(table: &Table<'_>) -> Self {
        let columns = table.columns(&[Shown::Everywhere, Shown::Files]);
        let mut paths = Vec::new();
        for (c, column) in columns.iter().enumerate() {
            for (k, key) in column.keys.iter().enumerate() {
                paths.extend(key.get.paths(table).into_iter().map(|path| (c, k, path)));
            }
        }
        Self { columns, paths }
    }

    /// The names of all fields of a row, those of the scenario and the table included.
    fn names(&self, table: &Table<'_>) -> Vec<String> {
        let own = self.paths.iter().map(|(c, k, path)| {
            let key = self.columns[*c].keys[*k].name;
            format!("{key} {}", path.name()).trim_end().to_owned()
        });
        let common = failed(&[]).into_iter().chain(constants(table)).map(|(name, _)| name.to_owned());
        std::iter::once("scenario".to_owned()).chain(own).chain(common).collect()
    }

    fn of(&self, row: &Row<'_>) -> Vec<Value> {
        let values: Vec<Vec<Value>> =
            self.columns.iter().map(|column| column.keys.iter().map(|key| key.get.value(row)).collect()).collect();
        self.paths.iter().map(|(c, k, path)| path.of(&values[*c][*k]).clone()).collect()
    }
}

/// A field's name and its value.
pub(in crate::report) type Field = (&'static str, Value);

/// What holds for all rows of a scenario.
fn context(table: &Table<'_>, scene: &Scene, solved: &Solved, ids: &[String]) -> Vec<Field> {
    let place = paths::Place { table, scenario: scene.scenario, ids };
    let from = solved.assessment.from_now.as_ref();
    let value = from.map_or(Value::Null, |from| paths::from_now(place, from));
    vec![
        ("changes", scene::changes(table, scene, solved, whole).into()),
        ("complete", solved.equilibria.complete.into()),
        ("beyond", words::beyond(&solved.equilibria).into()),
        ("undecided", solved.equilibria.unresolved.len().into()),
        ("undecided_parts", joined(&scene::all_undecided(table, solved))),
        ("from_now", value["reaches"].clone()),
        ("from_now_time", value["time"].clone()),
        ("from_now_in_words", from.map_or(Value::Null, |from| paths::from_now_in_words(place, from).into())),
        ("error", Value::Null),
    ]
}

/// The same fields of a scenario that failed.
fn failed(problems: &[String]) -> Vec<Field> {
    let search = ["changes", "complete", "beyond", "undecided", "undecided_parts"];
    let paths = ["from_now", "from_now_time", "from_now_in_words"];
    let blank = search.into_iter().chain(paths).map(|name| (name, Value::Null));
    blank.chain([("error", joined(problems))]).collect()
}

/// What holds for the whole table.
pub(in crate::report) fn constants(table: &Table<'_>) -> Vec<Field> {
    let facts = provenance::facts(table, whole).into_iter().map(|fact| (fact.key, joined(&fact.texts)));
    let title = [("model", table.model.title.value.clone().into())];
    let end = [("interrupted", table.interrupted.into()), ("caution", words::CAUTION.into())];
    title.into_iter().chain(facts).chain(end).collect()
}

/// Texts as one; null where there is none.
fn joined(texts: &[String]) -> Value {
    if texts.is_empty() { Value::Null } else { texts.join("; ").into() }
}

/// A line of fields, ending in CR LF.
pub(in crate::report) fn line(values: &[Value], style: Style) -> String {
    values.iter().map(|value| field(value, style)).collect::<Vec<_>>().join(",") + "\r\n"
}

/// A value as a field; a list of words has spaces between.
fn field(value: &Value, style: Style) -> String {
    match value {
        Value::Null | Value::Object(_) => String::new(),
        Value::Bool(_) | Value::Number(_) => value.to_string(),
        Value::String(text) => quoted(&harmless(text, style)),
        Value::Array(parts) => {
            let words: Vec<&str> = parts.iter().filter_map(Value::as_str).collect();
            quoted(&harmless(&words.join(" "), style))
        }
    }
}

/// A text without control characters that no spreadsheet takes for a formula, blanks before it or not.
fn harmless(text: &str, style: Style) -> String {
    let clean = clean(text, style);
    let is_formula = clean.trim_start().starts_with(['=', '+', '-', '@', '＝', '＋', '－', '＠', '\t', '\r']);
    if is_formula { format!("'{clean}") } else { clean }
}

fn quoted(text: &str) -> String {
    let is_plain = !text.contains([',', '"', ';', '\r', '\n']) && text.trim() == text;
    if is_plain { text.to_owned() } else { format!("\"{}\"", text.replace('"', "\"\"")) }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn values_become_fields() {
        for (value, text) in [
            (Value::Null, ""),
            (json!(-2.5e-300), "-2.5e-300"),
            (json!(0.1), "0.1"),
            (json!(true), "true"),
            (json!(3), "3"),
            (json!(["S", "C"]), "S C"),
            (json!("a,b"), "\"a,b\""),
            (json!("say \"x\""), "\"say \"\"x\"\"\""),
            (json!("=1+1"), "'=1+1"),
            (json!(" @x"), "' @x"),
            (json!("-1"), "'-1"),
            (json!("a\nb"), "a\\nb"),
            (json!("\tx"), "\\tx"),
        ] {
            assert_eq!(field(&value, Style::Unicode), text, "{value}");
        }
    }
}
