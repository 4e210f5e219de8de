//! What is said of a model that cannot be used, for readers and for programs.

use serde_json::{Value, json};

use crate::diag::cleanse::is_hostile;
use crate::diag::render::{position, render};
use crate::diag::{Diagnostic, Severity, Sources};

use super::arguments::{Format, Options};
use super::{Exit, Outcome};

/// A model that cannot be used: the messages for a reader, and for a program where one is asked for.
pub(super) fn wrong(found: &[Diagnostic], sources: &Sources, options: &Options, color: bool) -> Outcome {
    let result = match options.format {
        Format::Json => pretty(&json!({ "errors": errors(found, sources) }), options),
        Format::Text | Format::Csv | Format::Markdown | Format::Latex => String::new(),
    };
    Outcome { result, remarks: remarks(found, sources, color), exit: Exit::Fault }
}

/// Each error as data: where it is, what is wrong, what was expected, what to do.
pub(super) fn errors(found: &[Diagnostic], sources: &Sources) -> Value {
    let error = |diagnostic: &Diagnostic| {
        let (file, line, column) = position(sources, diagnostic.at);
        json!({
            "file": file,
            "line": line,
            "column": column,
            "message": diagnostic.message,
            "expected": diagnostic.expected,
            "help": diagnostic.help,
        })
    };
    Value::Array(found.iter().map(error).collect())
}

/// Diagnostics for a reader: each in full, then how many there are.
pub(super) fn remarks(found: &[Diagnostic], sources: &Sources, color: bool) -> String {
    let mut text: Vec<String> = found.iter().map(|diagnostic| render(diagnostic, sources, color)).collect();
    let errors = found.iter().filter(|diagnostic| diagnostic.severity == Severity::Error).count();
    if errors > 1 {
        text.push(format!("{errors} errors\n"));
    }
    text.join("\n")
}

/// JSON that ends in a line break, harmless to a terminal, and in ASCII where asked for.
pub(super) fn pretty(value: &Value, options: &Options) -> String {
    let text = format!("{value:#}\n");
    // Line breaks between the lines are the only control characters that stand for themselves.
    let is_escaped = |c: char| (options.ascii && !c.is_ascii()) || (is_hostile(c) && c != '\n');
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
