//! What happens between two points of a branch, told by what has changed its sign.

use super::curve::Sample;
use super::piece::Piece;

/// An abundance this share of the box's side below 0 is there by rounding.
const ROUNDING: f64 = 1e-12;

/// Something that changes between two points.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Change {
    /// The control turns back.
    Turn,
    /// The abundance of a coordinate goes through 0.
    Zero(usize),
    /// The abundance of a coordinate goes through the upper (or a positive lower) side of the box.
    Side(usize),
    /// The own growth of an absent species goes through 0: its place in `alone`.
    Growth(usize),
    /// The leading growth of those who are absent together goes through 0.
    Together,
    /// The branch crosses another: its orientation turns over.
    Crossing,
    /// A pair of eigenvalues of those who move crosses the border.
    Pair,
    /// A multiplier of those who move passes −1.
    Alternation,
    /// The state goes over a kink, by its place among the face's kinks.
    Kink(usize),
}

/// All that changes between two points of one piece, but for kinks.
pub(super) fn changes(piece: &Piece, sides: &[[f64; 2]], before: &Sample, after: &Sample, out: &mut Vec<Change>) {
    let m = piece.moving.len();
    let turns = before.direction[m] * after.direction[m] < 0.0;
    let mut reversals = 0;
    if turns {
        out.push(Change::Turn);
        reversals += 1;
    }
    if before.orientation != after.orientation {
        out.push(Change::Crossing);
        reversals += 1;
    }
    for (i, &[lower, upper]) in sides.iter().enumerate() {
        let (x, y) = (before.at[i], after.at[i]);
        let nothing = -ROUNDING * upper.abs();
        if (x < nothing) != (y < nothing) {
            out.push(Change::Zero(i));
            reversals += usize::from(piece.is_divided[i]);
        }
        if (x > upper) != (y > upper) || (lower > 0.0 && (x < lower) != (y < lower)) {
            out.push(Change::Side(i));
        }
    }
    for place in 0..piece.alone.len() {
        if (before.beside[place] < 0.0) != (after.beside[place] < 0.0) {
            out.push(Change::Growth(place));
        }
    }
    if (before.typed.together < 0.0) != (after.typed.together < 0.0) {
        out.push(Change::Together);
    }
    if (before.typed.alternating < 0.0) != (after.typed.alternating < 0.0) {
        out.push(Change::Alternation);
        reversals += 1;
    }
    if let (Some(first), Some(second)) = (before.typed.unstable, after.typed.unstable) {
        // One real eigenvalue for each of the others; what is left must be pairs.
        let left = first.abs_diff(second).saturating_sub(reversals);
        if left >= 2 || (reversals == 0 && left == 1 && piece.moving.len() > 1 && first.abs_diff(second) % 2 == 0) {
            out.push(Change::Pair);
        }
    }
}

/// Kinks that lie between two points: those of the second on whose other side it is.
pub(super) fn kinks(piece: &Piece, after: &Sample) -> impl Iterator<Item = usize> {
    let is_beyond = |(side, difference): (&bool, &f64)| (*difference < 0.0) == *side;
    piece
        .sides
        .iter()
        .zip(&after.beside[piece.differences..])
        .map(is_beyond)
        .enumerate()
        .filter_map(|(k, is)| is.then_some(k))
        .collect::<Vec<_>>()
        .into_iter()
}

/// The number that is 0 where a change happens, at a point; `None` for changes that are only counted.
pub(super) fn number(change: Change, piece: &Piece, sides: &[[f64; 2]], before: &Sample, at: &Sample) -> Option<f64> {
    let m = piece.moving.len();
    match change {
        Change::Turn => Some(at.direction[m]),
        Change::Zero(i) => Some(at.at[i]),
        Change::Side(i) => {
            let [lower, upper] = sides[i];
            let near = if before.at[i] > upper || at.at[i] > f64::midpoint(lower, upper) { upper } else { lower };
            Some(at.at[i] - near)
        }
        Change::Growth(place) => Some(at.beside[place]),
        Change::Together => Some(at.typed.together),
        Change::Alternation => Some(at.typed.alternating),
        Change::Kink(k) => Some(at.beside[piece.differences + k]),
        Change::Crossing | Change::Pair => None,
    }
}

/// Whether a counted change has happened by a point.
pub(super) fn has_happened(change: Change, before: &Sample, at: &Sample) -> bool {
    match change {
        Change::Crossing => before.orientation != at.orientation,
        _ => match (before.typed.unstable, at.typed.unstable) {
            (Some(first), Some(second)) => first != second,
            // On the border itself: as near as can be.
            _ => true,
        },
    }
}
