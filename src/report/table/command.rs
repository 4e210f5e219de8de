//! The command that makes a table again, as a shell reads it.

use std::fmt;

use super::Form;
use crate::model::{Model, ParameterId};

/// What a table was asked for by, without the options that make no difference to it.
#[derive(Clone, Copy, Debug)]
pub struct Command<'c> {
    /// Its word: `table`, `compare`, `response`.
    pub word: &'c str,
    /// The model's path as it was given; without, the model that is compiled in.
    pub path: Option<&'c str>,
    /// The model.
    pub model: &'c Model,
    /// Parameters that are varied, each over this range where it is not its own.
    pub varied: &'c [(ParameterId, Option<[f64; 2]>)],
    /// The scenarios, where not all.
    pub scenarios: &'c [usize],
    /// Parameters set from outside.
    pub set: &'c [(ParameterId, f64)],
    /// Seconds for each scenario, where not as usual.
    pub budget: Option<f64>,
    /// The columns, where others than usual.
    pub columns: Option<&'c str>,
    /// The form.
    pub form: Form,
}

impl fmt::Display for Command<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("restpoint")?;
        if let Some(path) = self.path {
            write!(f, " {} {}", self.word, quoted(path))?;
        }
        for (id, range) in self.varied {
            let name = self.model.parameters.get(id.0).map_or("", |parameter| &parameter.name);
            write!(f, " --of {}", quoted(name))?;
            if let Some([from, to]) = range {
                write!(f, " --from {from} --to {to}")?;
            }
        }
        for scenario in self.scenarios.iter().filter_map(|&scenario| self.model.scenarios.get(scenario)) {
            write!(f, " --scenario {}", quoted(&scenario.name))?;
        }
        for &(id, value) in self.set {
            let name = self.model.parameters.get(id.0).map_or("", |parameter| &parameter.name);
            write!(f, " --set {}", quoted(&format!("{name}={value}")))?;
        }
        if let Some(seconds) = self.budget {
            write!(f, " --budget {seconds}")?;
        }
        if let Some(list) = self.columns {
            write!(f, " --columns {}", quoted(list))?;
        }
        match self.form {
            Form::Text => Ok(()),
            form => write!(f, " --format {}", form.word()),
        }
    }
}

/// A word as a shell reads it.
fn quoted(word: &str) -> String {
    let is_plain = |c: char| c.is_alphanumeric() || "-_./=+,:@%".contains(c);
    if !word.is_empty() && word.chars().all(is_plain) {
        word.to_owned()
    } else {
        format!("'{}'", word.replace('\'', "'\\''"))
    }
}
