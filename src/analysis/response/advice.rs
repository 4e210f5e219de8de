//! What a response says of catches: best yields, what removes a pest, where open access settles.
//!
//! Works on the branches of a finished picture and on the equations, so that what it gives is solved for and not read off
//! points. [`advise`] puts together what `yields`, `removal` and `open_access` find; `band` (in `bands`) needs the picture
//! alone.

use std::collections::HashMap;

use super::equations::Equations;
use super::footing::{Footing, Line, Standing};
use super::stretches::{Stretch, stretches};
use super::{Advice, Branch, Point, Response, open_access, removal, yields};
use crate::analysis::subject::Subject;
use crate::model::{Aim, Model, Role};

/// Best yields, removals and open access of a response. Once `stop` says so the rest is left out.
pub fn advise(subject: &mut Subject<'_>, response: &Response, stop: &dyn Fn() -> bool) -> Advice {
    let kept = kept_populations(subject.model);
    let has_kept = |_: &Branch, point: &Point| has_all(&kept, &point.state);
    let keeping = stretches(response, &has_kept);
    let stable = stretches(response, &|_, _| true);
    let mut ledger = Ledger::new(subject, response);
    Advice {
        best: yields::best(&mut ledger, subject.model, &keeping, stop),
        removals: removal::removals(subject.model, response),
        open_access: open_access::settling(&mut ledger, &stable, stop),
    }
}

/// Species by species, those that are one population together; only populations that are to be kept.
fn kept_populations(model: &Model) -> Vec<Vec<usize>> {
    let mut kept: Vec<(Option<&str>, Vec<usize>)> = Vec::new();
    for (i, species) in model.species.iter().enumerate() {
        if species.role != Role::Population || species.aim != Aim::Keep {
            continue;
        }
        let name = species.population.as_deref();
        match kept.iter_mut().find(|(known, _)| name.is_some() && *known == name) {
            Some((_, members)) => members.push(i),
            None => kept.push((name, vec![i])),
        }
    }
    kept.into_iter().map(|(_, members)| members).collect()
}

/// Whether some of every population is there.
pub(super) fn has_all(populations: &[Vec<usize>], state: &[f64]) -> bool {
    populations.iter().all(|members| members.iter().any(|&i| state[i] > 0.0))
}

/// As [`has_all`] for the populations that a model is to keep.
pub(super) fn has_kept(model: &Model, state: &[f64]) -> bool {
    has_all(&kept_populations(model), state)
}

/// A response with the equations that it is of.
pub(super) struct Ledger<'r> {
    pub(super) response: &'r Response,
    equations: Equations,
    footings: HashMap<Vec<bool>, Option<Footing>>,
}

impl<'r> Ledger<'r> {
    fn new(subject: &Subject<'_>, response: &'r Response) -> Self {
        let equations = Equations::new(subject, &[response.control.parameter]);
        Self { response, equations, footings: HashMap::new() }
    }

    /// The face that a stretch is on, in units that fit it; `None` where it has none.
    pub(super) fn standing(&mut self, stretch: &Stretch) -> Option<Standing<'_>> {
        let present = &self.response.branches[stretch.branch].present;
        if !self.footings.contains_key(present) {
            let footing = Footing::new(&mut self.equations, present);
            self.footings.insert(present.clone(), footing);
        }
        let footing = self.footings.get(present)?.as_ref()?;
        let points = stretch.points_of(self.response);
        let largest = |&i: &usize| points.iter().fold(0.0f64, |most, point| most.max(point.state[i].abs()));
        let sized = |size: f64| if size > 0.0 { size } else { 1.0 };
        let control = &self.response.control;
        let scale = footing.face.moving.iter().map(largest).map(sized).chain([control.to - control.from]).collect();
        Some(Standing::new(footing, Line::of_one(), scale))
    }
}
