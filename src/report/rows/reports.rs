//! Rows for reports: rounded numbers, and of a long course as many rows as can be looked through.

use serde_json::Value;

use super::super::table::layout::{Align, Cell, Head};
use super::super::table::sheet::Sheet;
use super::super::table::{self, CAUTION, Page, human};
use super::Rows;

/// The rows as Markdown, ending in a line break.
pub(super) fn markdown(rows: &Rows, page: Page) -> String {
    let escaped = |text: &str| table::markdown::escaped(text, &page);
    let mut parts = vec![
        format!("# {}", escaped(&rows.title)),
        table::markdown::facts(facts(rows), &page),
        format!("## {}", escaped(&rows.what)),
    ];
    parts.extend(rows.said.iter().map(|said| escaped(said)));
    let (shown, left) = shown(rows);
    parts.extend((!shown.is_empty()).then(|| table::markdown::grid(&sheet(rows, &shown), &page)));
    parts.extend(left);
    parts.push(CAUTION.to_owned());
    parts.join("\n\n") + "\n"
}

/// Rows of one table on a page.
const ON_A_PAGE: usize = 40;

/// The rows as LaTeX, ending in a line break.
pub(super) fn latex(rows: &Rows, page: Page) -> String {
    let escaped = |text: &str| table::latex::escaped(text, &page);
    let mut parts = vec![
        table::latex::HEAD.to_owned(),
        format!("\\subsection*{{{}}}", escaped(&rows.title)),
        table::latex::facts(facts(rows), &page),
        format!("\\subsubsection*{{{}}}", escaped(&rows.what)),
    ];
    parts.extend(rows.said.iter().map(|said| escaped(said)));
    let (shown, left) = shown(rows);
    // TeX does not break a tabular.
    parts.extend(shown.chunks(ON_A_PAGE).flat_map(|some| table::latex::grids(&sheet(rows, some), &page)));
    parts.extend(left);
    parts.push(CAUTION.to_owned());
    parts.join("\n\n") + "\n"
}

fn facts(rows: &Rows) -> impl Iterator<Item = (&str, &str)> {
    rows.facts.iter().filter(|fact| !fact.text.is_empty()).map(|fact| (fact.label, fact.text.as_str()))
}

/// The rows that are shown, and where these are not all, a sentence on it.
fn shown(rows: &Rows) -> (Vec<&Vec<Value>>, Option<String>) {
    let all = rows.rows.len();
    match rows.most {
        Some(most) if most < all => {
            let some = (0..most).filter_map(|k| rows.rows.get(k * (all - 1) / (most - 1).max(1))).collect();
            let said = format!("Of {all} rows {most} are shown, evenly chosen; a file for data (.csv, .json) has all.");
            (some, Some(said))
        }
        _ => (rows.rows.iter().collect(), None),
    }
}

/// Rounded cells; a column of numbers only lines up by its points.
fn sheet(rows: &Rows, shown: &[&Vec<Value>]) -> Sheet {
    let is_word = |column: usize| rows.rows.iter().any(|row| row.get(column).is_some_and(Value::is_string));
    let align = |column: usize| if is_word(column) { Align::Left } else { Align::Point };
    let heads = rows.headings.iter().enumerate().map(|(column, title)| Head::new(title, align(column)));
    let cells = |row: &&Vec<Value>| row.iter().map(cell).collect();
    Sheet { heads: heads.collect(), rows: shown.iter().map(cells).collect() }
}

fn cell(value: &Value) -> Cell {
    Cell::new(match value {
        Value::Null => String::new(),
        Value::String(text) => text.clone(),
        Value::Number(number) => number.as_f64().map_or_else(|| number.to_string(), human),
        other => other.to_string(),
    })
}
