//! What is said of a model that cannot be used, for readers and for programs.

use serde_json::{Value, json};

use crate::diag::render::{position, render};
use crate::diag::{Diagnostic, Severity, Sources};
use crate::report::table::{self, Style};

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

/// JSON as the options want it.
pub(super) fn pretty(value: &Value, options: &Options) -> String {
    table::pretty(value, if options.ascii { Style::Ascii } else { Style::Unicode })
}
