//! Where branches meet: what happens there means, and how the other branch is set out upon.
//!
//! Where an abundance reaches 0 the branch of those who are left passes through the same point; where an absent species
//! begins to grow, the branch with it does. Where two branches of one face cross, the other's tangent lies in the plane of
//! the two null vectors of the slopes; a point beside the crossing at right angles to the known branch, corrected in that
//! plane, lies on the other (Keller 1977; Allgower & Georg 1990, ch. 8, from memory). At a kink the next smooth piece is
//! set out upon in the direction that leads to its own side.

use std::rc::Rc;

use super::ThresholdKind;
use super::curve::{Curve, Sample, dot, normalise};
use super::events::{self, Change};
use super::locate::Sign;
use super::picture::Picture;
use super::piece::Piece;
use super::walk::{Event, distance};
use crate::num::singular::singular;

/// How far beside a crossing the other branch is looked for, in scaled coordinates.
const BESIDE: [f64; 3] = [1e-3, 1e-4, 1e-2];
/// A point found beside a crossing is on the other branch if it is this share of the way off the known one.
const OTHER: f64 = 0.5;
/// Length of the step that tells to which side of a kink a direction leads, in scaled coordinates.
const PROBE: f64 = 1e-6;
/// The pieces on both sides of a kink meet in a point that is this well known, in scaled coordinates.
const MEETS: f64 = 1e-5;

/// What an event means.
pub(super) struct Meaning {
    pub(super) kind: ThresholdKind,
    pub(super) species: Option<usize>,
    /// What changed its sign, as the system that defines it is asked for.
    pub(super) sign: Option<Sign>,
    /// Whose abundance is 0 there.
    pub(super) vanish: Vec<usize>,
    /// Faces whose branch passes there, and whether it crosses the known one within the face.
    pub(super) leads_to: Vec<(Vec<bool>, bool)>,
}

impl Meaning {
    pub(super) fn of(picture: &mut Picture<'_>, piece: &Rc<Piece>, event: &Event, state: &[f64]) -> Self {
        let has = |wanted: Change| event.changes.contains(&wanted);
        let mut vanish = Vec::new();
        let mut arrive = Vec::new();
        let mut leaves = None;
        let mut has_kink = false;
        for change in &event.changes {
            match *change {
                Change::Zero(i) => vanish.push(piece.moving[i]),
                Change::Growth(place) => arrive.push(vec![piece.alone[place]]),
                Change::Together => arrive.push(piece.together.clone()),
                Change::Side(i) => leaves = Some(piece.moving[i]),
                Change::Kink(_) => has_kink = true,
                _ => {}
            }
        }
        let mut meaning = Self { kind: ThresholdKind::Fold, species: None, sign: None, vanish, leads_to: Vec::new() };
        let crosses = if has(Change::Turn) { ThresholdKind::Pitchfork } else { ThresholdKind::Transcritical };
        let without: Vec<bool> =
            piece.present.iter().enumerate().map(|(i, &is)| is && !meaning.vanish.contains(&i)).collect();
        let is_lost = !meaning.vanish.is_empty()
            && picture
                .pieces
                .moving(picture.equations, &without)
                .is_some_and(|left| meaning.vanish.iter().all(|&i| !left[i]));
        if is_lost {
            meaning.kind = crosses;
            meaning.species = meaning.vanish.first().copied();
            meaning.leads_to.push((without, false));
        } else if !arrive.is_empty() {
            meaning.kind = ThresholdKind::Transcritical;
            meaning.species = arrive[0].first().copied();
            for species in arrive {
                let alone = species.len() == 1 && picture.equations.divided[species[0]].is_some();
                let mut present = piece.present.clone();
                for i in species {
                    present[i] = true;
                }
                meaning.leads_to.push((present, !alone));
            }
        } else if has(Change::Crossing) {
            meaning.kind = crosses;
            meaning.leads_to.push((piece.present.clone(), true));
        } else if !meaning.vanish.is_empty() {
            meaning.kind = ThresholdKind::Exit;
            meaning.species = meaning.vanish.first().copied();
        } else {
            meaning.kind = match (has(Change::Turn), has_kink, leaves) {
                (_, true, _) => ThresholdKind::BorderCollision,
                (true, ..) => ThresholdKind::Fold,
                (.., Some(_)) => ThresholdKind::Exit,
                _ if has(Change::Alternation) => ThresholdKind::PeriodDoubling,
                _ if picture.equations.step.is_some() => ThresholdKind::NeimarkSacker,
                _ => ThresholdKind::Hopf,
            };
            meaning.species = leaves.filter(|_| meaning.kind == ThresholdKind::Exit);
        }
        meaning.sign = Self::asked(piece, event, picture, state);
        meaning
    }

    fn asked(piece: &Piece, event: &Event, picture: &Picture<'_>, state: &[f64]) -> Option<Sign> {
        let sign = |change: &Change| match *change {
            Change::Turn => Sign::Turn,
            Change::Zero(i) => Sign::Abundance(piece.moving[i]),
            Change::Side(i) => {
                let i = piece.moving[i];
                let [lower, upper] = picture.equations.sides[i];
                Sign::Side(i, usize::from((state[i] - upper).abs() < (state[i] - lower).abs()))
            }
            Change::Growth(place) => Sign::Growth(piece.alone[place]),
            Change::Together => Sign::Block(piece.together.clone()),
            Change::Crossing => Sign::Crossing,
            Change::Pair => Sign::Pair(None),
            Change::Alternation => Sign::Flip(None),
            Change::Kink(k) => Sign::Kink(piece.kinks[k].node),
        };
        let rank = |change: &&Change| match change {
            Change::Kink(_) => 0,
            Change::Zero(_) => 1,
            Change::Growth(_) | Change::Together => 2,
            Change::Crossing => 3,
            Change::Turn => 4,
            Change::Alternation => 5,
            Change::Pair => 6,
            Change::Side(_) => 7,
        };
        event.changes.iter().min_by_key(rank).map(sign)
    }
}

/// A point of the branch that crosses a known one, beside the crossing; `known` is the direction of that, over the piece's
/// coordinates.
pub(super) fn across(curve: &mut Curve<'_>, at: &[f64], known: &[f64]) -> Option<Sample> {
    let n = curve.order();
    if !curve.evaluate(at) {
        return None;
    }
    let mut known: Vec<f64> = known.iter().zip(&curve.scale).map(|(part, scale)| part / scale).collect();
    normalise(&mut known);
    let mut slopes: Vec<f64> =
        curve.slopes.iter().enumerate().map(|(place, slope)| slope * curve.scale[place % n]).collect();
    for row in slopes.chunks_exact_mut(n) {
        let largest = row.iter().fold(0.0f64, |most, x| most.max(x.abs()));
        if largest > 0.0 {
            for x in row {
                *x /= largest;
            }
        }
    }
    slopes.extend(std::iter::repeat_n(0.0, n));
    let parts = singular(&slopes, n)?;
    let column = |k: usize| -> Vec<f64> { (0..n).map(|i| parts.right[i * n + k]).collect() };
    // Of the plane of the two null vectors the direction at right angles to the known branch.
    let plane = [column(n.checked_sub(2)?), column(n - 1)];
    let shares = [dot(&plane[0], &known), dot(&plane[1], &known)];
    let mut aside: Vec<f64> = (0..n).map(|i| plane[0][i] * shares[1] - plane[1][i] * shares[0]).collect();
    normalise(&mut aside);
    for stride in BESIDE {
        for sign in [1.0, -1.0] {
            let mut point: Vec<f64> =
                at.iter().zip(&aside).zip(&curve.scale).map(|((x, t), s)| x + sign * stride * t * s).collect();
            let Some(corrected) = curve.correct(&mut point, &aside) else { continue };
            if distance(&point, at, &curve.scale) > stride / OTHER * 20.0 {
                continue;
            }
            let mut sample = Sample { at: point, ..Sample::default() };
            curve.describe(&mut sample, corrected.orientation);
            return Some(sample);
        }
    }
    None
}

/// The piece beyond a kink and the point on it from which it is followed; `None` where the branch ends there.
pub(super) fn over_kink(
    picture: &mut Picture<'_>,
    piece: &Rc<Piece>,
    k: usize,
    last: &Sample,
) -> Option<(Rc<Piece>, Sample)> {
    let mut sides = piece.sides.clone();
    sides[k] = !sides[k];
    for _ in 0..=piece.kinks.len() {
        let next = picture.pieces.piece(picture.equations, &piece.present, &sides)?;
        let (directed, others) = directed(picture, &next, k, last)?;
        match others {
            None => return Some((next, directed)),
            // Two kinks in one place: over both.
            Some(other) => sides[other] = !sides[other],
        }
    }
    None
}

/// A point on a piece in the direction that leads to its own side of a kink, and another kink on whose wrong side that is.
fn directed(picture: &mut Picture<'_>, next: &Piece, k: usize, last: &Sample) -> Option<(Sample, Option<usize>)> {
    let values = picture.equations.values.clone();
    let mut curve = picture.curve(next, &values, &last.at);
    let mut start = curve.settled(&last.at)?;
    if distance(&start.at, &last.at, &curve.scale) > MEETS {
        return None;
    }
    start.at.clone_from(&last.at);
    let mut best = None;
    for sign in [1.0, -1.0] {
        let mut probe: Vec<f64> =
            start.at.iter().zip(&start.direction).map(|(x, part)| x + sign * PROBE * part).collect();
        let border = curve.unit(&start.direction);
        let Some(corrected) = curve.correct(&mut probe, &border) else { continue };
        let mut sample = Sample { at: probe, ..Sample::default() };
        curve.describe(&mut sample, corrected.orientation);
        let wrong: Vec<usize> = events::kinks(next, &sample).collect();
        if wrong.contains(&k) {
            continue;
        }
        let mut turned = start.clone();
        if sign < 0.0 {
            turned.direction.iter_mut().for_each(|part| *part = -*part);
            turned.orientation = -turned.orientation;
        }
        let other = wrong.first().copied();
        if best.is_none() || other.is_none() {
            best = Some((turned, other));
        }
    }
    best
}
