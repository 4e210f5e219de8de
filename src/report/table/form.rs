//! The forms that a table can have: their words on the command line, the endings of their files, and the table in each.

use serde_json::Value;

use super::{Page, Table, csv, json, latex, markdown, text};
use crate::diag::cleanse::is_hostile;
use crate::report::check::Style;

/// A form of a table.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// For reading.
    Text,
    /// For spreadsheets and statistics.
    Csv,
    /// For reports and wikis.
    Markdown,
    /// For programs.
    Json,
    /// For reports.
    Latex,
}

/// Every form, its word and the ending of its files.
pub const FORMS: [(Form, &str, &str); 5] = [
    (Form::Text, "text", "txt"),
    (Form::Csv, "csv", "csv"),
    (Form::Markdown, "markdown", "md"),
    (Form::Json, "json", "json"),
    (Form::Latex, "latex", "tex"),
];

impl Form {
    /// As it is typed on the command line.
    pub fn word(self) -> &'static str {
        FORMS.iter().find(|(form, ..)| *form == self).map_or("", |(_, word, _)| word)
    }

    /// That of files with this ending, in capitals or not.
    pub fn of_ending(ending: &str) -> Option<Self> {
        FORMS.iter().find(|(.., known)| ending.eq_ignore_ascii_case(known)).map(|(form, ..)| *form)
    }
}

/// A table in a form.
pub fn written(table: &Table<'_>, form: Form, page: Page) -> String {
    match form {
        Form::Text => text(table, page),
        Form::Csv => csv(table, page.style),
        Form::Markdown => markdown(table, page),
        Form::Json => pretty(&json(table), page.style),
        Form::Latex => latex(table, page),
    }
}

/// JSON that ends in a line break, harmless to a terminal, and in ASCII where asked for.
pub fn pretty(value: &Value, style: Style) -> String {
    let text = format!("{value:#}\n");
    // Line breaks between the lines are the only control characters that stand for themselves.
    let is_escaped = |c: char| (style == Style::Ascii && !c.is_ascii()) || (is_hostile(c) && c != '\n');
    if !text.contains(is_escaped) {
        return text;
    }
    let mut escaped = String::with_capacity(text.len() + 64);
    for c in text.chars() {
        // Only strings hold such characters, and there every one may be written as its UTF-16 units.
        if is_escaped(c) {
            escaped.extend(c.encode_utf16(&mut [0; 2]).iter().map(|unit| format!("\\u{unit:04x}")));
        } else {
            escaped.push(c);
        }
    }
    escaped
}
