//! What happens at a point of a branch, entered: the threshold that it is, and what is to be followed from there.

use std::rc::Rc;

use nalgebra::Complex;

use super::{Picture, Start};
use crate::analysis::response::curve::{Curve, Sample};
use crate::analysis::response::locate::{self, Located};
use crate::analysis::response::piece::Piece;
use crate::analysis::response::switch::Meaning;
use crate::analysis::response::walk::{Event, LARGE};
use crate::analysis::response::{Threshold, ThresholdKind};
use crate::model::SpeciesId;

/// Thresholds nearer to each other than these are one: share of the range, and of each abundance.
const SAME: [f64; 2] = [1e-6, 1e-4];

/// A defining system's root further than this share of the range from where an event was bracketed is another's.
const HERE: f64 = 1e-5;
/// An eigenvalue this near to the border, as a share of the largest, is critical at a threshold.
const CRITICAL: f64 = 1e-5;

impl Picture<'_> {
    /// Enters what happens at a point of a branch, and what is to be followed from there.
    pub(super) fn note(
        &mut self,
        piece: &Rc<Piece>,
        sample: &Sample,
        event: &Event,
        beyond: Option<&(Rc<Piece>, Sample)>,
    ) -> Option<usize> {
        let mut state = self.whole(piece, &sample.at);
        let meaning = Meaning::of(self, piece, event, &state);
        for &i in &meaning.vanish {
            state[i] = 0.0;
        }
        if !self.is_feasible(&state) {
            return None;
        }
        // Each of the others meets as many again.
        if self.equations.species > LARGE && !self.bounds_stable(event) {
            return None;
        }
        let found = self.threshold(piece, sample, event, beyond, &meaning, state);
        let mut direction = vec![0.0; self.equations.species + 1];
        piece.moving.iter().zip(&sample.direction).for_each(|(&i, &part)| direction[i] = part);
        direction[self.equations.species] = sample.direction[piece.moving.len()];
        for (present, is_across) in meaning.leads_to {
            let across = is_across.then(|| direction.clone());
            self.starts.push_back(Start { present, state: found.state.clone(), control: found.at, across });
        }
        Some(self.merged(found))
    }

    /// Whether nothing repels beside what is critical at an event.
    fn bounds_stable(&self, event: &Event) -> bool {
        let excess = |z: &Complex<f64>| if self.is_map() { z.norm() - 1.0 } else { z.re };
        let largest = event.eigenvalues.iter().fold(0.0f64, |most, z| most.max(z.norm()));
        event.eigenvalues.iter().all(|z| excess(z) <= CRITICAL * largest)
    }

    /// The threshold that an event is, by the system that defines it; where that has no root, as it was bracketed.
    fn threshold(
        &mut self,
        piece: &Rc<Piece>,
        sample: &Sample,
        event: &Event,
        beyond: Option<&(Rc<Piece>, Sample)>,
        meaning: &Meaning,
        state: Vec<f64>,
    ) -> Threshold {
        if let Some(sign) = meaning.sign.clone() {
            let [before, after] = &event.bracket;
            let asked = locate::Event { face: &piece.face, sign, before, after };
            if let Some(found) = self.located(&asked, sample) {
                let mut threshold = self.describer.threshold(self.equations, &asked, &found);
                if meaning.kind == ThresholdKind::Pitchfork {
                    threshold.kind = meaning.kind;
                }
                threshold.species = meaning.species.map(SpeciesId).or(threshold.species);
                return threshold;
            }
        }
        Threshold {
            kind: meaning.kind,
            at: sample.control(),
            state,
            eigenvalues: event.eigenvalues.clone(),
            other_side: beyond.map(|(next, start)| self.eigenvalues(next, start)),
            criticality: None,
            species: meaning.species.map(SpeciesId),
            arms: Vec::new(),
            kink: None,
            error: event.error,
        }
    }

    /// An event's root, if it is where the event was.
    fn located(&mut self, asked: &locate::Event<'_>, sample: &Sample) -> Option<Located> {
        let found = self.locator.locate(self.equations, asked)?;
        ((found.at - sample.control()).abs() <= HERE * self.width()).then_some(found)
    }

    fn eigenvalues(&self, piece: &Piece, sample: &Sample) -> Vec<Complex<f64>> {
        let values = self.values.clone();
        let mut curve = Curve::new(piece, &values, self.width(), self.is_map());
        if !curve.evaluate(&sample.at) {
            return Vec::new();
        }
        curve.look(&mut sample.clone());
        curve.eigenvalues().to_vec()
    }

    /// The place of a threshold among those known, itself new or met before.
    fn merged(&mut self, found: Threshold) -> usize {
        let width = self.width();
        let sides = &self.equations.sides;
        let is_same = |known: &Threshold| {
            let near = |i: usize| {
                let room = SAME[1] * known.state[i].abs().max(1e-3 * sides[i][1].abs());
                (known.state[i] - found.state[i]).abs() <= room
            };
            (known.at - found.at).abs() <= SAME[0] * width && (0..found.state.len()).all(near)
        };
        let Some(place) = self.thresholds.iter().position(is_same) else {
            self.thresholds.push(found);
            return self.thresholds.len() - 1;
        };
        let known = &mut self.thresholds[place];
        known.kind = together(known.kind, found.kind);
        known.species = known.species.or(found.species);
        place
    }
}

/// The kind of a threshold that was met twice.
fn together(known: ThresholdKind, found: ThresholdKind) -> ThresholdKind {
    use ThresholdKind::{Exit, Fold, Pitchfork, Transcritical};
    match (known, found) {
        (a, b) if a == b => a,
        (Pitchfork, _) | (_, Pitchfork) | (Transcritical, Fold) | (Fold, Transcritical) => Pitchfork,
        (Transcritical, _) | (_, Transcritical) => Transcritical,
        (Exit, other) => other,
        (known, _) => known,
    }
}
