//! Every lint has a model that it warns about, with the exact text, and one that only just escapes.

#![expect(clippy::unwrap_used, reason = "without its files a test can only fail")]

use std::fs;
use std::path::{Path, PathBuf};

use restpoint::diag::render::render;
use restpoint::model::lint::{LINTS, lint};
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/files/lints")
}

/// The names of the models in the folder, without `.yaml`, in order.
fn models() -> Vec<String> {
    let entries = fs::read_dir(folder()).unwrap();
    let names = entries.map(|entry| entry.unwrap().file_name().to_string_lossy().into_owned());
    let mut names: Vec<String> = names.filter_map(|name| name.strip_suffix(".yaml").map(str::to_owned)).collect();
    names.sort();
    names
}

/// All warnings about a model of the folder, as they are shown.
fn warnings(name: &str) -> String {
    let text = fs::read(folder().join(format!("{name}.yaml"))).unwrap();
    let (model, sources, problems) = load(&format!("{name}.yaml"), &text, &NoFiles);
    assert!(problems.is_empty(), "{name}: {problems:?}");
    let model = model.unwrap();
    let mut system = System::new(&model, &[]).unwrap();
    let bounds = system.bounds(&model).unwrap();
    let warnings = lint(&model, &system, &bounds);
    warnings.iter().map(|warning| render(warning, &sources, false)).collect::<Vec<_>>().join("\n")
}

#[test]
fn each_model_is_told_what_stands_beside_it() {
    for name in models().iter().filter(|name| !name.ends_with("-near")) {
        let expected = fs::read_to_string(folder().join(format!("{name}.txt"))).unwrap_or_default();
        assert_eq!(warnings(name), expected, "{name}");
    }
}

#[test]
fn what_only_just_escapes_is_silent() {
    for name in models().iter().filter(|name| name.ends_with("-near")) {
        assert_eq!(warnings(name), "", "{name}");
    }
}

#[test]
fn every_lint_has_both_kinds_of_models() {
    let models = models();
    for lint in LINTS {
        for name in [lint.id.to_owned(), format!("{}-near", lint.id)] {
            assert!(models.contains(&name), "no model {name}.yaml, which shows {}", lint.about);
        }
    }
    assert!(models.iter().all(|name| LINTS.iter().any(|lint| name.starts_with(lint.id))), "a model of no lint");
}
