//! A tried set of values saved as a new scenario in the text of a model file, every other byte left as it is.
//!
//! The text is read (`syntax` has the bytes of each node), the new entry written (`write`) and put in its place
//! (`place`); then the result is loaded and compared with what was there and what was asked for (`same`), so that a text
//! that would mean anything else is refused, never given out. No file is touched here. Start at [`with_scenario`].

mod place;
mod same;
mod syntax;
mod write;

use std::fmt;

use super::load::{Files, load};
use super::tree::{Kind, Node, Tree, normal};
use super::{Model, Name, ParameterId, yaml};
use crate::diag::Sources;
use crate::diag::cleanse::{cleanse, clip, is_hostile};
use place::{Edit, Entries};
use write::Part;

/// Characters of a scenario's name.
pub const NAME_LIMIT: usize = 120;

/// Characters of a name that are repeated in a refusal.
const SHOWN: usize = 60;

/// The mark that some editors put before the first byte of a text.
const BYTE_ORDER_MARK: char = '\u{feff}';

/// A scenario to be added.
#[derive(Clone, Debug, PartialEq)]
pub struct Addition {
    /// What it is called.
    pub name: String,
    /// The scenario that it starts from; `None` for the model as it is without any.
    pub base: Option<String>,
    /// Parameters and their values, each in the parameter's unit; of two for the same parameter the later one counts.
    pub values: Vec<(String, f64)>,
}

/// Why a scenario was not added.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Refusal {
    /// The text is not a sound model to begin with.
    Unsound,
    /// The name cannot be a scenario's.
    Name(&'static str),
    /// There is a scenario of that name.
    Taken(String),
    /// There is no scenario to start from.
    NoBase(String),
    /// No parameter is called so.
    NoParameter(String),
    /// A value is no finite number.
    NotFinite(String),
    /// The file is written in a way that leaves no place for it; as it reads after "because".
    NoPlace(String),
    /// The result would not have meant what was asked for.
    Changed,
}

impl fmt::Display for Refusal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let shown = |name: &str| clip(&cleanse(name), SHOWN).into_owned();
        match self {
            Self::Unsound => write!(f, "the model file has errors now; mend it first, then save again"),
            Self::Name(reason) => write!(f, "the scenario needs another name: {reason}"),
            Self::Taken(name) => {
                write!(f, "there is a scenario \"{}\" already; choose another name", shown(name))
            }
            Self::NoBase(name) => write!(
                f,
                "the file has no scenario \"{}\" any more to start from; choose one of those that it has",
                shown(name)
            ),
            Self::NoParameter(name) => {
                write!(f, "the file has no parameter \"{}\" any more; leave it out", shown(name))
            }
            Self::NotFinite(name) => write!(f, "the value of \"{}\" is no finite number; set another", shown(name)),
            Self::NoPlace(reason) => {
                write!(f, "the scenario cannot be added because {reason}; write it into the file by hand")
            }
            Self::Changed => write!(
                f,
                "the scenario cannot be added without changing what the file means; write it into the file by hand"
            ),
        }
    }
}

impl std::error::Error for Refusal {}

/// The text of a model file with one more scenario, the last: the overlay of the base with the given values set.
///
/// Nothing is changed but that bytes are added, at one place or, where a comma is needed, two; only an explicit null in
/// place of scenarios gives way. Comments, line breaks of either kind, a byte-order mark and a missing last line break stay.
/// What is copied from the base is written out anew: aliases resolved, its comments and layout left behind.
///
/// A file without scenarios has one all the same, called `base`. It would vanish with the first that is written, so
/// `base: {}` is added before it.
///
/// `files` has the tables that the model names, for the result is loaded before it is given out.
///
/// # Errors
///
/// Why not, and what to do; then nothing is to be written.
pub fn with_scenario(text: &str, addition: &Addition, files: &dyn Files) -> Result<String, Refusal> {
    let name = fit_name(&addition.name)?;
    let bare = text.strip_prefix(BYTE_ORDER_MARK).unwrap_or(text);
    let old = read(bare, files).ok_or(Refusal::Unsound)?;
    if old.scenario(&name).is_some() {
        return Err(Refusal::Taken(name));
    }
    let base = match &addition.base {
        None => None,
        Some(base) => Some(old.scenario(&normal(base)).ok_or_else(|| Refusal::NoBase(base.clone()))?),
    };
    let set = settings(&old, &addition.values)?;
    let edits = edits(bare, &old, &name, base, &set)?;
    let amended = apply(bare, &edits);
    let new = read(&amended, files).ok_or(Refusal::Changed)?;
    if !same::compare(&old, &new, &name, base, &set) {
        return Err(Refusal::Changed);
    }
    Ok(if bare.len() < text.len() { format!("{BYTE_ORDER_MARK}{amended}") } else { amended })
}

fn read(text: &str, files: &dyn Files) -> Option<Model> {
    load("model", text.as_bytes(), files).0
}

/// The name as it will stand in the file, composed as all names are.
fn fit_name(name: &str) -> Result<String, Refusal> {
    let name = normal(name);
    let blank = |c: Option<char>| c.is_some_and(char::is_whitespace);
    if name.is_empty() {
        return Err(Refusal::Name("it is empty"));
    }
    if name.contains(is_hostile) {
        return Err(Refusal::Name("a name has one line and no invisible characters"));
    }
    if blank(name.chars().next()) || blank(name.chars().next_back()) {
        return Err(Refusal::Name("it begins or ends with a space"));
    }
    if name.chars().count() > NAME_LIMIT {
        return Err(Refusal::Name("it is longer than 120 characters"));
    }
    Ok(name)
}

/// The parameters by index, in the order given, each once.
fn settings(model: &Model, values: &[(String, f64)]) -> Result<Vec<(ParameterId, f64)>, Refusal> {
    let mut found: Vec<(ParameterId, f64)> = Vec::with_capacity(values.len());
    for (name, value) in values {
        let Some(&Name::Parameter(id)) = model.names.get(&normal(name)) else {
            return Err(Refusal::NoParameter(name.clone()));
        };
        if !value.is_finite() {
            return Err(Refusal::NotFinite(name.clone()));
        }
        match found.iter_mut().find(|(other, _)| *other == id) {
            Some(earlier) => earlier.1 = *value,
            None => found.push((id, *value)),
        }
    }
    Ok(found)
}

fn edits(
    text: &str,
    model: &Model,
    name: &str,
    base: Option<usize>,
    set: &[(ParameterId, f64)],
) -> Result<Vec<Edit>, Refusal> {
    let document = syntax::read(text).ok_or(Refusal::Unsound)?;
    let (_, Tree { root: Some(root), .. }) = yaml::read("model", text.as_bytes(), &mut Sources::default()) else {
        return Err(Refusal::Unsound);
    };
    let written = scenarios(&root);
    let overlay = base.and_then(|base| written.get(base)).map(|(_, node)| *node);
    let entry = (name.to_owned(), overlaid(model, overlay, set));
    let unwritten: &Entries = match (&written[..], &model.scenarios[..]) {
        ([], [only]) => &[(only.name.clone(), Part::Map(Vec::new()))],
        _ => &[],
    };
    place::edits(text, &document, &[entry], unwritten).map_err(Refusal::NoPlace)
}

/// The scenarios that the file writes, in its order.
fn scenarios(root: &Node) -> Vec<(&str, &Node)> {
    let of = |node: &'_ Node, name: &str| match &node.kind {
        Kind::Mapping(entries) => entries.iter().position(|entry| entry.key == name),
        _ => None,
    };
    let (Kind::Mapping(sections), Some(at)) = (&root.kind, of(root, "scenarios")) else { return Vec::new() };
    match &sections[at].value.kind {
        Kind::Mapping(entries) => entries.iter().map(|entry| (entry.key.as_str(), entry.value.as_ref())).collect(),
        _ => Vec::new(),
    }
}

/// A scenario's parts with values set: those of the base in their order, then the others.
fn overlaid(model: &Model, base: Option<&Node>, set: &[(ParameterId, f64)]) -> Part {
    let mut parts = match base.map(Part::copy) {
        Some(Part::Map(parts)) => parts,
        _ => Vec::new(),
    };
    if set.is_empty() {
        return Part::Map(parts);
    }
    let at = parts.iter().position(|(key, _)| key == "values");
    let mut values = match at.map(|at| parts.remove(at)) {
        Some((_, Part::Map(values))) => values,
        _ => Vec::new(),
    };
    for &(id, value) in set {
        let name = &model.parameters[id.0].name;
        match values.iter_mut().find(|(key, _)| key == name) {
            Some((_, part)) => *part = Part::Number(value),
            None => values.push((name.clone(), Part::Number(value))),
        }
    }
    parts.insert(at.unwrap_or(parts.len()), ("values".to_owned(), Part::Map(values)));
    Part::Map(parts)
}

/// The text with each span of the edits, which are in order and apart, replaced.
fn apply(text: &str, edits: &[Edit]) -> String {
    let mut out = String::with_capacity(text.len() + edits.iter().map(|edit| edit.text.len()).sum::<usize>());
    let mut at = 0;
    for Edit { span, text: new } in edits {
        out.push_str(&text[at..span.start]);
        out.push_str(new);
        at = span.end;
    }
    out.push_str(&text[at..]);
    out
}
