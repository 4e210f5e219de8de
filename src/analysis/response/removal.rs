//! The least control from which on no stable state has a species that is to be removed.
//!
//! Read off the picture, whose thresholds are located already. A species may live on in cycles where no equilibrium with it
//! is stable, so it is said too whether a stable state without it is there from then on. Start at [`removals`].

use super::stretches::{Stretch, StretchEnd, stretches};
use super::{Removal, Response};
use crate::model::{Aim, Model, SpeciesId};

/// Stretches that end and begin within this share of the range of each other leave no hole between.
const NO_HOLE: f64 = 1e-9;

/// One for each species to be removed; none where the picture shows no stable state at all.
pub(super) fn removals(model: &Model, response: &Response) -> Vec<Removal> {
    let pests = model.species.iter().enumerate().filter(|(_, species)| species.aim == Aim::Remove);
    pests.filter_map(|(i, _)| removal(response, SpeciesId(i))).collect()
}

fn removal(response: &Response, species: SpeciesId) -> Option<Removal> {
    let with = stretches(response, &|_, point| point.state[species.0] > 0.0);
    let without = stretches(response, &|_, point| point.state[species.0] == 0.0);
    if with.is_empty() && without.is_empty() {
        return None;
    }
    let control = &response.control;
    let last = with.iter().max_by(|a, b| a.span(response)[1].total_cmp(&b.span(response)[1]));
    let (at, threshold) = match last {
        None => (Some(control.from), None),
        Some(last) => match last.edge(response, &with, 1) {
            (StretchEnd::Lost(threshold), at) => (Some(at), Some(threshold)),
            _ => (None, None),
        },
    };
    let settles_without = at.is_some_and(|at| cover(response, &without, at));
    Some(Removal { species, at, threshold, settles_without })
}

/// Whether stretches leave no hole from a value of the control to the end of the range.
fn cover(response: &Response, all: &[Stretch], from: f64) -> bool {
    let control = &response.control;
    let room = NO_HOLE * (control.to - control.from);
    let mut spans: Vec<[f64; 2]> = all.iter().map(|stretch| stretch.span(response)).collect();
    spans.sort_by(|a, b| a[0].total_cmp(&b[0]));
    let mut reached = from;
    for [low, high] in spans {
        if low <= reached + room {
            reached = reached.max(high);
        }
    }
    reached >= control.to - room
}
