//! `restpoint check`: reads a model and says what was understood.

use std::path::Path;

use serde_json::Value;

use crate::diag::{Diagnostic, Sources};
use crate::model::Model;
use crate::model::lint::lint;
use crate::model::system::System;
use crate::model::units::check_units;
use crate::report::check::{Style, Subject, json as report_json, text as report_text};
use crate::report::table::Form;
use crate::shell::models::{Reading, read};

use super::arguments::{Format, Options};
use super::model::{errors, pretty, remarks, wrong};
use super::{Exit, Outcome};

/// Reads the model at `path`, or the one compiled in, and says what was understood.
pub(super) fn check(path: Option<&Path>, options: &Options, color: bool) -> Outcome {
    if !matches!(options.format, Format::Text | Format::Json) {
        let word = Form::from(options.format).word();
        return Outcome::only(
            format!("error: check writes text or json, not {word}; table writes {word}\n"),
            Exit::Usage,
        );
    }
    match read(path) {
        Reading::Unreadable(reason) => Outcome::only(format!("error: {reason}\n"), Exit::Fault),
        Reading::Wrong(sources, found) => wrong(&found, &sources, options, color),
        Reading::Model(original) => understood(&original.model, options, color),
    }
}

fn understood(model: &Model, options: &Options, color: bool) -> Outcome {
    let mut system = match System::new(model, &[]) {
        Ok(system) => system,
        Err(found) => return wrong(&found, &model.sources, options, color),
    };
    let units = check_units(model);
    let mut warnings = units.warnings.clone();
    let (bounds, missing) = match system.bounds(model) {
        Ok(bounds) => {
            warnings.extend(lint(model, &system, &bounds));
            (Some(bounds), Vec::new())
        }
        Err(missing) => (None, missing),
    };
    warnings.sort_by_key(|warning| warning.at);
    let subject = Subject { model, units: &units, bounds: bounds.as_deref(), warnings: &warnings };
    let result = match options.format {
        Format::Json => pretty(&with_errors(report_json(&subject), &missing, &model.sources), options),
        _ => report_text(&subject, if options.ascii { Style::Ascii } else { Style::Unicode }),
    };
    let exit = if missing.is_empty() { Exit::Done } else { Exit::Fault };
    Outcome { result, remarks: remarks(&missing, &model.sources, color), exit }
}

fn with_errors(mut report: Value, found: &[Diagnostic], sources: &Sources) -> Value {
    if let (Value::Object(report), false) = (&mut report, found.is_empty()) {
        report.insert("errors".into(), errors(found, sources));
    }
    report
}
