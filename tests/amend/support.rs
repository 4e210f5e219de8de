//! What an amended text is held against: the bytes that were there, and both texts as the loader reads them.

use std::fs;
use std::path::{Path, PathBuf};

use restpoint::model::amend::{Addition, with_scenario};
use restpoint::model::load::{Files, load};
use restpoint::model::{Harvest, Model, ParameterId, Process, Term};
use unicode_normalization::UnicodeNormalization;

pub(crate) fn addition(name: &str, base: Option<&str>, values: &[(&str, f64)]) -> Addition {
    let values = values.iter().map(|&(name, value)| (name.to_owned(), value)).collect();
    Addition { name: name.to_owned(), base: base.map(str::to_owned), values }
}

/// The folder of a model file.
pub(crate) struct Folder(PathBuf);

impl Files for Folder {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        fs::read(self.0.join(path)).map_err(|error| error.to_string())
    }
}

/// Every model file in and below some folders.
pub(crate) fn files_with(folders: &[&str]) -> Vec<(PathBuf, String, Folder)> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut open: Vec<PathBuf> = folders.iter().map(|folder| root.join(folder)).collect();
    let mut found = Vec::new();
    while let Some(folder) = open.pop() {
        for path in fs::read_dir(&folder).expect("a folder").map(|entry| entry.expect("an entry").path()) {
            if path.is_dir() {
                open.push(path);
            } else if path.extension().is_some_and(|extension| extension == "yaml")
                && let Ok(text) = fs::read_to_string(&path)
            {
                found.push((path, text, Folder(folder.clone())));
            }
        }
    }
    found
}

pub(crate) fn model(text: &str, files: &dyn Files) -> Option<Model> {
    load("m.yaml", text.as_bytes(), files).0
}

pub(crate) fn old_and_new(old: &str, new: &str, files: &dyn Files) -> (Model, Model) {
    let read = |text| model(text, files).unwrap_or_else(|| panic!("not sound:\n{text}"));
    (read(old), read(new))
}

/// Adds a scenario, and checks bytes and meaning.
pub(crate) fn check(text: &str, tried: &Addition, files: &dyn Files) -> String {
    let new = with_scenario(text, tried, files).unwrap_or_else(|refusal| panic!("{refusal}: {tried:?}\n{text}"));
    assert!(is_only_added(text, &new), "more than added:\n{text}\n--- became\n{new}");
    let (old, amended) = old_and_new(text, &new, files);
    let base = tried.base.as_deref().and_then(|name| old.scenario(name));
    let added = amended.scenarios.len() - 1;
    assert_eq!(added, old.scenarios.len(), "{new}");
    for scenario in 0..added {
        assert_eq!(meaning(&old, scenario, &[]), meaning(&amended, scenario, &[]), "{new}");
    }
    let composed = |name: &str| name.nfc().collect::<String>();
    let known = |name: &str| old.parameters.iter().position(|parameter| parameter.name == composed(name));
    let set: Vec<(usize, f64)> = tried.values.iter().filter_map(|(name, value)| Some((known(name)?, *value))).collect();
    assert_eq!(set.len(), tried.values.len());
    let (mut wanted, mut found) = (meaning(&old, base.unwrap_or(usize::MAX), &set), meaning(&amended, added, &[]));
    (wanted.name, found.name) = (String::new(), String::new());
    assert_eq!(wanted, found, "{new}");
    new
}

/// Whether `old` comes back when one run of bytes, or a comma and one run, is taken out; where it has a null in place
/// of scenarios, that may be gone.
fn is_only_added(old: &str, new: &str) -> bool {
    let (old, new) = (old.as_bytes(), new.as_bytes());
    let same_start = old.iter().zip(new).take_while(|(a, b)| a == b).count();
    let same_end = old.iter().rev().zip(new.iter().rev()).take_while(|(a, b)| a == b).count();
    let middle = old.get(same_start..old.len().saturating_sub(same_end)).unwrap_or_default();
    let after_comma = new.get(same_start..).and_then(|rest| rest.strip_prefix(b" ,").or(rest.strip_prefix(b",")));
    middle.is_empty() || middle == b"null" || middle == b"~" || after_comma.is_some_and(|rest| rest.starts_with(middle))
}

/// A scenario as it is read, without places.
#[derive(Debug, PartialEq)]
struct Meaning {
    name: String,
    values: Option<Vec<u64>>,
    parts: Vec<String>,
}

fn meaning(model: &Model, scenario: usize, set: &[(usize, f64)]) -> Meaning {
    let set: Vec<_> = set.iter().map(|&(id, value)| (ParameterId(id), value)).collect();
    let values = model.values(scenario, &set).ok();
    let processes = model.processes_under(scenario).into_iter().map(process);
    let harvests = model.harvests_under(scenario).into_iter().map(harvest);
    Meaning {
        name: model.scenarios.get(scenario).map(|scenario| scenario.name.clone()).unwrap_or_default(),
        values: values.map(|values| values.into_iter().map(f64::to_bits).collect()),
        parts: processes.chain(harvests).collect(),
    }
}

fn process(process: &Process) -> String {
    format!("{}: {} {}", process.name, process.rate.text, terms(&process.effect))
}

fn harvest(harvest: &Harvest) -> String {
    let cost = harvest.cost.as_ref().map(|cost| cost.text.as_str());
    let Harvest { name, when, accounting, amounts, price, .. } = harvest;
    format!("{name}: {when:?} {accounting:?} {} {} {cost:?}", terms(amounts), terms(price))
}

fn terms(terms: &[Term]) -> String {
    terms.iter().map(|term| format!("{}: {}", term.species.0, term.formula.text)).collect::<Vec<_>>().join("; ")
}
