//! Rows for spreadsheets and programs: every row, exact numbers, what is known of the whole beside them.

use serde_json::{Map, Value, json};

use super::super::table::{CAUTION, Style, exact, line};
use super::{Exact, Fact, Rows, distinct, object, text_or_null, together};
use crate::model::TimeKind;

/// The rows as CSV (RFC 4180): a line of names, then the rows; every line ends in CR LF.
///
/// What holds for the whole is on each row again, as in the table. Where there are no rows there is one of blanks, so that
/// the reason is not missing.
pub(super) fn csv(rows: &Rows, style: Style) -> String {
    let constants = constants(rows);
    let names = rows.headings.iter().cloned().chain(constants.iter().map(|(name, _)| name.clone()));
    let mut text = line(&distinct(names).into_iter().map(Value::from).collect::<Vec<_>>(), style);
    let blank = rows.rows.is_empty().then(|| vec![Value::Null; rows.headings.len()]);
    for row in rows.rows.iter().chain(&blank) {
        let common = constants.iter().map(|(_, value)| value.clone());
        text.push_str(&line(&row.iter().cloned().chain(common).collect::<Vec<_>>(), style));
    }
    text
}

fn constants(rows: &Rows) -> Vec<(String, Value)> {
    let field = |name: &str, text: &str| (name.to_owned(), text_or_null(text));
    let mut all = vec![field("model", &rows.title), field("what", &rows.what)];
    for fact in &rows.facts {
        match &fact.exact {
            Exact::Text(text) => all.push(field(fact.key, text)),
            Exact::Together(numbers) => all.push((fact.key.to_owned(), together(numbers))),
            Exact::Each(numbers) => {
                all.extend(numbers.iter().map(|(name, x)| (format!("{} {name}", fact.key), exact(*x))));
            }
        }
    }
    all.extend([field("said", &rows.said.join(" ")), field("caution", CAUTION)]);
    all
}

/// The facts that JSON has under the keys `tool` and `model`.
const ELSEWHERE: [&str; 2] = ["program", "sha256"];

/// The rows as a JSON object: `tool`, `model`, `what`, each fact by its key, `said`, `rows` by their headings, `caution`.
pub(super) fn json(rows: &Rows) -> Value {
    let time = match rows.time {
        TimeKind::Continuous => "continuous",
        TimeKind::Discrete { .. } => "discrete",
    };
    let sha256 = rows.facts.iter().find(|fact| fact.key == "sha256").map(value);
    let mut all = Map::new();
    let mut put = |key: &str, value: Value| all.insert(key.to_owned(), value);
    put("tool", json!({"name": "restpoint", "version": env!("CARGO_PKG_VERSION")}));
    put("model", json!({"title": rows.title, "sha256": sha256, "time": time}));
    put("what", json!(rows.what));
    for fact in rows.facts.iter().filter(|fact| !ELSEWHERE.contains(&fact.key)) {
        put(fact.key, value(fact));
    }
    let headings = distinct(rows.headings.iter().cloned());
    let row = |row: &Vec<Value>| headings.iter().cloned().zip(row.iter().cloned()).collect::<Map<_, _>>();
    put("said", json!(rows.said));
    put("rows", rows.rows.iter().map(row).collect());
    put("caution", json!(CAUTION));
    Value::Object(all)
}

fn value(fact: &Fact) -> Value {
    match &fact.exact {
        Exact::Text(text) => text_or_null(text),
        Exact::Together(numbers) | Exact::Each(numbers) => object(numbers),
    }
}
