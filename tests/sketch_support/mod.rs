//! A model seen from in front, as a test needs it: solved one scenario at a time, with the linear part of planar models by
//! the closed form of 2 x 2 eigenvalues rather than by the program's own routines.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]
#![allow(dead_code, unreachable_pub, missing_docs, reason = "each file uses its own part")]

use nalgebra::Complex;
use restpoint::analysis::assess::{Assessed, Assessment};
use restpoint::analysis::equilibria::{Budget, OneByOne, all};
use restpoint::analysis::field::{LINEAR, Scale, Slice, Window};
use restpoint::analysis::linearise::{Dimensions, Kind, Linearisation};
use restpoint::analysis::measures::Measures;
use restpoint::analysis::subject::Subject;
use restpoint::expr::tape::Tape;
use restpoint::model::Model;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;
use restpoint::model::system::bounds::Bound;
use restpoint::num::eigen::{Spectrum, Vectors};
use restpoint::report::sketch::{Canvas, Extras, Picture, Plot, Size, Style, View, draw, fit, text};
use restpoint::report::table::{Names, Page, Solved};

/// A model with its equations.
pub struct Loaded {
    pub model: Model,
    pub system: System,
    pub bounds: Vec<Bound>,
}

pub fn loaded(yaml: &str) -> Loaded {
    let (model, _, found) = load("m.yaml", yaml.as_bytes(), &NoFiles);
    let model = model.unwrap_or_else(|| panic!("{found:?}"));
    let mut system = System::new(&model, &[]).unwrap();
    let bounds = system.bounds(&model).unwrap();
    Loaded { model, system, bounds }
}

/// The shipped model of that name.
pub fn shipped(name: &str) -> Loaded {
    let path = format!("{}/scenarios/{name}.yaml", env!("CARGO_MANIFEST_DIR"));
    loaded(&std::fs::read_to_string(path).unwrap())
}

impl Loaded {
    pub fn subject(&self, scenario: usize) -> Subject<'_> {
        let sides = self.bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
        Subject::new(&self.model, &self.system.graph, &self.system.plans[scenario], sides)
    }

    pub fn solved(&self, scenario: usize) -> Solved {
        let mut subject = self.subject(scenario);
        let (graph, problem) = subject.problem();
        let budget = Budget { boxes: 20_000, stop: &|| false, workers: &OneByOne, observer: None };
        let equilibria = all(graph, &problem, &budget);
        let linear = |state: &Vec<f64>| Assessed {
            linear: Ok(planar(&mut subject, state)),
            measures: Measures::default(),
            settles: None,
        };
        let is_planar = self.model.species.len() == 2;
        let list = if is_planar { equilibria.list.iter().map(|e| &e.state).map(linear).collect() } else { Vec::new() };
        let assessment = Assessment { equilibria: list, from_now: None };
        Solved { values: self.system.plans[scenario].values.clone(), equilibria, assessment }
    }

    /// Everything that a sketch of a scenario is made of, handed to `use_it`.
    pub fn with<T>(&self, seen: Seen, use_it: impl Fn(&View<'_>, &Picture) -> T) -> T {
        let solved = self.solved(seen.scenario);
        let names = Names::alone(solved.equilibria.list.len());
        let ids = names.of(0);
        let axes = seen.axes.unwrap_or_else(|| Slice::axes(&self.model));
        let mut subject = self.subject(seen.scenario);
        let slice = Slice::new(&subject, axes, &solved.equilibria, &solved.assessment);
        let scales = seen.scales;
        let window = seen.window.unwrap_or_else(|| fit(&self.model, &self.bounds, &[&solved], axes, scales));
        let scenario = seen.scenario;
        let view = View { model: &self.model, scenario, solved: &solved, ids, slice: &slice, window, scales };
        let picture = Picture::new(&mut subject, &view, &Plot::of(seen.size));
        use_it(&view, &picture)
    }

    pub fn canvas(&self, seen: Seen, style: Style) -> Canvas {
        self.with(seen, |view, picture| draw(view, picture, &Extras::default(), style))
    }

    pub fn text(&self, seen: Seen, style: Style) -> String {
        let page = Page { width: seen.size.columns, style, color: false };
        self.with(seen, |view, picture| text(view, picture, page))
    }
}

/// How a model is looked at.
#[derive(Clone, Copy)]
pub struct Seen {
    pub scenario: usize,
    pub axes: Option<[usize; 2]>,
    pub window: Option<Window>,
    pub scales: [Scale; 2],
    pub size: Size,
}

pub const USUAL: Seen =
    Seen { scenario: 0, axes: None, window: None, scales: LINEAR, size: Size { columns: 80, rows: 24 } };

/// The linear part of a planar model at a state.
fn planar(subject: &mut Subject<'_>, state: &[f64]) -> Linearisation {
    let rows = subject.plan.rows.clone();
    let jacobian = subject.graph.jacobian(&rows);
    let tape = Tape::new(&subject.graph, &jacobian);
    let mut run = tape.start(&subject.plan.values);
    run.at(state);
    let entries: Vec<f64> = run.outputs().copied().collect();
    let [a, b, c, d] = entries[..] else { panic!("a planar model has four partial derivatives") };
    linear([a, b, c, d], subject.step().is_some())
}

/// The linear part that a matrix [[a, b], [c, d]] stands for; only what a sketch uses is filled in.
pub fn linear([a, b, c, d]: [f64; 4], is_map: bool) -> Linearisation {
    let (half, product) = (f64::midpoint(a, d), a * d - b * c);
    let discriminant = half * half - product;
    let root = Complex::new(discriminant, 0.0).sqrt();
    let values = vec![root + half, -root + half];
    // (A - λ) v = 0 by whichever row is not nought.
    let vector = |value: Complex<f64>| {
        let first = [Complex::new(b, 0.0), value - a];
        let second = [value - d, Complex::new(c, 0.0)];
        let size = |v: &[Complex<f64>; 2]| v[0].norm().hypot(v[1].norm());
        let v = if size(&first) >= size(&second) { first } else { second };
        let length = size(&v);
        v.map(|part| if length > 0.0 { part / length } else { part })
    };
    let [v, mut w] = [vector(values[0]), vector(values[1])];
    if b == 0.0 && c == 0.0 && a == d {
        w = [Complex::new(0.0, 0.0), Complex::new(1.0, 0.0)];
    }
    let sizes = values.iter().map(|value| if is_map { value.norm() - 1.0 } else { value.re });
    let signs: Vec<f64> = sizes.collect();
    let count = |wanted: fn(&f64) -> bool| signs.iter().copied().filter(wanted).count();
    let dimensions =
        Dimensions { stable: count(|s| *s < 0.0), centre: count(|s| *s == 0.0), unstable: count(|s| *s > 0.0) };
    let kind = match (dimensions.stable, dimensions.unstable, discriminant < 0.0) {
        (2, _, false) => Kind::StableNode,
        (2, _, true) => Kind::StableSpiral,
        (_, 2, false) => Kind::UnstableNode,
        (_, 2, true) => Kind::UnstableSpiral,
        (1, 1, _) => Kind::Saddle,
        (0, 0, true) => Kind::Centre,
        _ => Kind::Undecided,
    };
    let right = vec![v[0], w[0], v[1], w[1]];
    let vectors = Vectors { left: right.clone(), right, condition: vec![1.0; 2] };
    Linearisation {
        jacobian: vec![a, b, c, d],
        enclosure: Vec::new(),
        spectrum: Spectrum { values, vectors: Some(vectors) },
        kind,
        kind_proven: true,
        stable: Some(dimensions.stable == 2),
        stable_proven: true,
        dimensions,
        alternating: false,
        nonlinear: None,
    }
}
