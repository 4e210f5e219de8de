//! What a sound model file may still have wrong: warnings, each with its place.
//!
//! A lint stays silent where interval arithmetic proves that what it is about cannot happen in the search box, and
//! speaks only where it has a witness: a point of the box, a value, a name. [`lint`] runs them all. To add one, write its
//! function in a module of its own, add its row to [`LINTS`], and give it two models in `tests/files/lints`: one that it
//! warns about, and one that only just escapes.

mod below_zero;
mod formulas;
mod gains;
mod kinks;
mod proportional;
mod ranges;
mod reading;
mod scenarios;
mod scene;
mod undefined;
mod unused;

use crate::diag::Diagnostic;
use crate::model::Model;
use crate::model::system::System;
use crate::model::system::bounds::Bound;
use scene::Scene;

/// One thing to look for.
pub struct Lint {
    /// What it is called, in the names of its test files too.
    pub id: &'static str,
    /// What it warns about, in a few words.
    pub about: &'static str,
    find: fn(&Scene<'_>) -> Vec<Diagnostic>,
}

/// Every lint.
pub const LINTS: &[Lint] = &[
    Lint { id: "unused", about: "a parameter or shorthand that no formula uses", find: unused::find },
    Lint { id: "no-gain", about: "a species that nothing adds to, or nothing takes from", find: gains::find },
    Lint { id: "out-of-range", about: "a value outside its own range", find: ranges::find },
    Lint { id: "idle-scenario", about: "a scenario that changes nothing", find: scenarios::find_idle },
    Lint { id: "twin-scenarios", about: "two scenarios that are the same", find: scenarios::find_twins },
    Lint { id: "below-zero", about: "a species that can be driven below zero", find: below_zero::find },
    Lint { id: "undefined", about: "a rate that is not defined somewhere in the search box", find: undefined::find },
    Lint { id: "kink", about: "a kink or a pole inside the search box", find: kinks::find },
    Lint { id: "proportional", about: "two species whose equations are proportional", find: proportional::find },
];

/// All warnings, in the order of the file.
///
/// `system` is the model's own, with `bounds` the search box that it gives.
pub fn lint(model: &Model, system: &System, bounds: &[Bound]) -> Vec<Diagnostic> {
    let scene = Scene::new(model, system, bounds);
    let mut warnings: Vec<Diagnostic> = LINTS.iter().flat_map(|lint| (lint.find)(&scene)).collect();
    warnings.sort_by_key(|warning| warning.at);
    warnings
}
