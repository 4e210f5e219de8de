//! Models of the tests as analyses of a response take them.
#![allow(clippy::panic, clippy::unwrap_used, clippy::expect_used, reason = "a test fails by panicking")]
#![allow(dead_code, reason = "each file uses its own part")]

use restpoint::analysis::response::equations::{Equations, Face};
use restpoint::analysis::response::locate::describe::Describer;
use restpoint::analysis::response::locate::{Event, Located, Locator, Sign};
use restpoint::analysis::response::{Control, Threshold};
use restpoint::analysis::subject::Subject;
use restpoint::model::{Model, ParameterId};

use crate::common::text::{ModelText, Read};

/// A parameter by its name.
pub(crate) fn parameter(model: &Model, name: &str) -> ParameterId {
    let found = model.parameters.iter().position(|parameter| parameter.name == name);
    ParameterId(found.unwrap_or_else(|| panic!("no parameter {name}")))
}

/// The model of a file.
pub(crate) fn read(text: &ModelText) -> Read {
    text.read()
}

/// The scenario as analyses take it.
pub(crate) fn subject(read: &mut Read) -> Subject<'_> {
    let bounds = read.system.bounds(&read.model).expect("bounds");
    let sides = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
    Subject::new(&read.model, &read.system.graph, &read.system.plans[0], sides)
}

/// A control over a range.
pub(crate) fn control(subject: &Subject<'_>, name: &str, from: f64, to: f64) -> Control {
    let parameter = parameter(subject.model, name);
    Control { parameter, from, to, present: subject.plan.values[parameter.0] }
}

/// One scenario with everything that locates thresholds of it.
pub(crate) struct Bench<'s> {
    pub(crate) equations: Equations,
    pub(crate) locator: Locator,
    pub(crate) describer: Describer,
    controls: usize,
    species: usize,
    marker: std::marker::PhantomData<&'s ()>,
}

impl<'s> Bench<'s> {
    pub(crate) fn new(subject: &Subject<'s>, controls: &[&str]) -> Self {
        let controls: Vec<ParameterId> = controls.iter().map(|name| parameter(subject.model, name)).collect();
        Self {
            equations: Equations::new(subject, &controls),
            locator: Locator::new(),
            describer: Describer::new(subject, &controls),
            controls: controls.len(),
            species: subject.species(),
            marker: std::marker::PhantomData,
        }
    }

    /// The face on which these are present.
    pub(crate) fn face(&mut self, present: &[usize]) -> Face {
        let present: Vec<bool> = (0..self.species).map(|i| present.contains(&i)).collect();
        self.equations.face(&present).expect("a face")
    }

    /// What is located between two points.
    pub(crate) fn locate(&mut self, face: &Face, sign: Sign, before: &[f64], after: &[f64]) -> Option<Located> {
        let event = Event { face, sign, before, after };
        self.locator.locate(&mut self.equations, &event)
    }

    /// The same with all that is said of it.
    pub(crate) fn threshold(&mut self, face: &Face, sign: Sign, before: &[f64], after: &[f64]) -> Option<Threshold> {
        let located = self.locate(face, sign.clone(), before, after)?;
        let event = Event { face, sign, before, after };
        Some(self.describer.threshold(&mut self.equations, &event, &located))
    }

    /// Of a state of all species the part on a face, then the controls.
    pub(crate) fn point(&self, face: &Face, state: &[f64], controls: &[f64]) -> Vec<f64> {
        assert_eq!(controls.len(), self.controls, "controls");
        face.moving.iter().map(|&i| state[i]).chain(controls.iter().copied()).collect()
    }
}

/// Every model that comes with the program.
pub(crate) fn shipped() -> Vec<(String, Model)> {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let mut paths: Vec<_> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    paths.sort();
    paths.retain(|path| path.extension().is_some_and(|extension| extension == "yaml"));
    let model = |path: &std::path::PathBuf| match restpoint::shell::models::read(Some(path)) {
        restpoint::shell::models::Reading::Model(original) => {
            (path.file_stem().unwrap().to_string_lossy().into_owned(), original.model)
        }
        _ => panic!("{}", path.display()),
    };
    paths.iter().map(model).collect()
}
