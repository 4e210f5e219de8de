//! Scenarios of a model, solved and joined.

use restpoint::analysis::equilibria::{Budget, Equilibrium, OneByOne, all};
use restpoint::analysis::passage::{Found, Passage, Ways};
use restpoint::analysis::prepare::Prepared;
use restpoint::model::Model;
use restpoint::model::load::{NoFiles, load};
use restpoint::shell::models::{Reading, read};

/// A model with the equilibria of all its scenarios.
pub(crate) struct Solved {
    pub(crate) model: Model,
    pub(crate) prepared: Prepared,
    pub(crate) lists: Vec<Vec<Equilibrium>>,
}

impl Solved {
    pub(crate) fn of(model: Model) -> Self {
        let prepared = Prepared::new(&model, &[]).unwrap();
        let budget = Budget { boxes: 20_000, stop: &|| false, workers: &OneByOne, observer: None };
        let list = |scenario| {
            let mut subject = prepared.subject(&model, scenario).unwrap();
            let (graph, problem) = subject.problem();
            all(graph, &problem, &budget).list
        };
        let lists = (0..model.scenarios.len()).map(list).collect();
        Self { model, prepared, lists }
    }

    pub(crate) fn read(yaml: &str) -> Self {
        let (model, _, found) = load("model.yaml", yaml.as_bytes(), &NoFiles);
        Self::of(model.unwrap_or_else(|| panic!("{found:?}")))
    }

    pub(crate) fn ways(&self) -> Ways {
        Ways::new(&self.model, &self.prepared)
    }

    pub(crate) fn found(&self, scenario: usize) -> Found<'_> {
        Found { scenario, list: &self.lists[scenario] }
    }

    pub(crate) fn passage(&self, from: usize, to: usize) -> Passage {
        self.ways().passage([self.found(from), self.found(to)], &|| false)
    }
}

/// Every model that comes with the program.
pub(crate) fn shipped() -> Vec<(String, Model)> {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let mut paths: Vec<_> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    paths.sort();
    paths.retain(|path| path.extension().is_some_and(|extension| extension == "yaml"));
    let model = |path: &std::path::PathBuf| match read(Some(path)) {
        Reading::Model(original) => (path.file_stem().unwrap().to_string_lossy().into_owned(), original.model),
        _ => panic!("{}", path.display()),
    };
    paths.iter().map(model).collect()
}
