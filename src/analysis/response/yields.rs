//! The largest equilibrium yield along a control, over stable states with all kept species.
//!
//! Between two points of a branch the yield Y is largest where dY/ds = Y_x·x'(s) + Y_c c'(s) = 0, s running along the curve
//! and the state solved for at each s: exact derivatives, no interpolation. Where Y grows up to the end of a stable part
//! it is only a supremum if the state is lost there, as under a constant quota at its fold. Start at [`best`].

use super::advice::Ledger;
use super::footing::Standing;
use super::harvested::are_of_one_unit;
use super::stretches::{Stretch, StretchEnd};
use super::{BestYield, Point, Taking};
use crate::analysis::passage::{crossing, dot};
use crate::model::{Aim, Model};

/// A slope below this share of the size of its parts is 0: along a fold the control's own part is.
const FLAT: f64 = 1e-7;

/// A yield is larger where it is so by more than this share.
const LARGER: f64 = 1e-13;

/// For every amount taken of species to be kept, and for all of these together where they are of one unit, the largest yield
/// on the given stretches.
/// Those that no stretch has are left out.
pub(super) fn best(
    ledger: &mut Ledger<'_>,
    model: &Model,
    keeping: &[Stretch],
    stop: &dyn Fn() -> bool,
) -> Vec<BestYield> {
    let takings = &ledger.response.takings;
    // Of one that is to be removed nobody wants the largest catch.
    let is_kept = |taking: &Taking| taking.species.is_some_and(|id| model.species[id.0].aim == Aim::Keep);
    let amounts: Vec<usize> = (0..takings.len()).filter(|&place| is_kept(&takings[place])).collect();
    let mut wanted: Vec<(Option<usize>, Vec<usize>)> =
        amounts.iter().map(|&place| (Some(place), vec![place])).collect();
    if amounts.len() > 1 && are_of_one_unit(model, amounts.iter().map(|&place| &takings[place])) {
        wanted.push((None, amounts));
    }
    wanted.iter().filter_map(|(taking, parts)| largest(ledger, keeping, *taking, parts, stop)).collect()
}

/// A spot of a stretch, with its yield.
struct Candidate {
    amount: f64,
    spot: Vec<f64>,
    /// The end of the stretch that it is.
    end: Option<usize>,
}

fn largest(
    ledger: &mut Ledger<'_>,
    keeping: &[Stretch],
    taking: Option<usize>,
    parts: &[usize],
    stop: &dyn Fn() -> bool,
) -> Option<BestYield> {
    let mut best: Option<BestYield> = None;
    for stretch in keeping {
        if stop() {
            break;
        }
        let response = ledger.response;
        let Some(mut standing) = ledger.standing(stretch) else { continue };
        let Some(found) = highest(&mut standing, stretch.points_of(response), parts) else { continue };
        let end = found.end.map(|which| stretch.end(response, which));
        let state = standing.footing.state(&found.spot);
        let new = BestYield {
            taking,
            amount: found.amount,
            at: found.spot[found.spot.len() - 1],
            state,
            branch: stretch.branch,
            attained: !matches!(end, Some(StretchEnd::Lost(_) | StretchEnd::Unknown)),
            edge: match end {
                Some(StretchEnd::Lost(threshold)) => Some(threshold),
                _ => None,
            },
            nearest: None,
        };
        let new = BestYield { nearest: nearest(ledger, keeping, stretch, new.at), ..new };
        if best.as_ref().is_none_or(|best| is_better(&new, best)) {
            best = Some(new);
        }
    }
    best
}

/// Larger, or as large and attained where the other is not.
fn is_better(new: &BestYield, old: &BestYield) -> bool {
    let room = LARGER * new.amount.abs().max(old.amount.abs());
    new.amount > old.amount + room || (new.amount >= old.amount - room && new.attained && !old.attained)
}

/// The threshold nearest to a value of the control at which the state of a stretch is lost, and its distance as a share of
/// the larger of the two values.
fn nearest(ledger: &Ledger<'_>, all: &[Stretch], stretch: &Stretch, at: f64) -> Option<(usize, f64)> {
    let lost = |side: usize| match stretch.edge(ledger.response, all, side) {
        (StretchEnd::Lost(threshold), edge) => Some((threshold, (edge - at).abs() / edge.abs().max(at.abs()))),
        _ => None,
    };
    let found = [lost(0), lost(1)].into_iter().flatten().min_by(|a, b| a.1.total_cmp(&b.1));
    found.filter(|(_, share)| share.is_finite())
}

/// The highest spot of a stretch.
fn highest(standing: &mut Standing<'_>, points: &[Point], parts: &[usize]) -> Option<Candidate> {
    let spots: Vec<Vec<f64>> = points.iter().map(|point| standing.footing.spot(&point.state, point.at)).collect();
    let mut best: Option<Candidate> = None;
    let mut keep = |new: Candidate| {
        let is_higher = |best: &Candidate| new.amount > best.amount + LARGER * best.amount.abs();
        if best.as_ref().is_none_or(is_higher) {
            best = Some(new);
        }
    };
    for pair in spots.windows(2) {
        if let Some(spot) = stationary(standing, [&pair[0], &pair[1]], parts)
            && let Some(amount) = standing.amount(&spot, parts)
        {
            keep(Candidate { amount, spot, end: None });
        }
    }
    let last = spots.len() - 1;
    for (place, spot) in spots.into_iter().enumerate() {
        let end = match place {
            0 => Some(0),
            _ if place == last => Some(1),
            _ => None,
        };
        if let Some(amount) = standing.amount(&spot, parts) {
            keep(Candidate { amount, spot, end });
        }
    }
    best
}

/// The spot between two at which the yield is largest: its slope along the curve falls through 0 there.
fn stationary(standing: &mut Standing<'_>, ends: [&[f64]; 2], parts: &[usize]) -> Option<Vec<f64>> {
    let chord = standing.chord(ends[0], ends[1]);
    let length = dot(&chord, &chord).sqrt();
    let border: Vec<f64> = chord.iter().map(|part| part / length).collect();
    let slopes = [0, 1].map(|end| slope(standing, ends[end], &border, parts));
    let (first, last) = (slopes[0]?, slopes[1]?);
    if first.value <= first.room || last.value >= -last.room {
        return None;
    }
    let mut found = None;
    let mut at = |share: f64| {
        let mut spot: Vec<f64> = ends[0].iter().zip(ends[1]).map(|(a, b)| a + share * (b - a)).collect();
        standing.correct_across(&mut spot, &border)?;
        let slope = slope(standing, &spot, &border, parts)?;
        found = Some(spot);
        Some(slope.value)
    };
    crossing(&mut at, first.value, 1.0)?;
    found
}

/// A slope, and what it has to exceed to be told from 0.
#[derive(Clone, Copy)]
struct Slope {
    value: f64,
    room: f64,
}

/// The yield's slope along the curve, towards the border.
fn slope(standing: &mut Standing<'_>, spot: &[f64], border: &[f64], parts: &[usize]) -> Option<Slope> {
    let tangent = standing.tangent(spot, border)?;
    let (_, gradient) = standing.taken(spot, parts)?;
    let scaled: Vec<f64> = gradient.iter().zip(&standing.scale).map(|(slope, scale)| slope * scale).collect();
    Some(Slope { value: dot(&scaled, &tangent), room: FLAT * dot(&scaled, &scaled).sqrt() })
}
