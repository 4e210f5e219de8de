//! Whether a state is on a branch that was followed: near one of its stretches, and on it when corrected.

use super::Point;
use super::curve::Curve;
use super::picture::Picture;
use super::walk::distance;

/// A point is on a branch when its correction to it is no longer than this, in scaled coordinates.
const ON: f64 = 1e-6;
/// A stretch is looked at closely where the point is nearer to it than this share of its length,
const BESIDE: f64 = 0.2;
/// or than this, in scaled coordinates.
const NEAR: f64 = 1e-5;
/// Stretches that are looked at closely.
const MOST_TRIED: usize = 8;

impl Picture<'_> {
    /// Whether a branch of just those who move passes through a state.
    pub(super) fn passes(&mut self, present: &[bool], state: &[f64], control: f64) -> bool {
        (0..self.branches.len()).any(|b| self.branches[b].present == present && self.is_on(b, state, control))
    }

    /// The branch, of whomever, that passes through a state: those who are absent there may be 0 along it.
    pub(super) fn branch_through(&mut self, state: &[f64], control: f64) -> Option<usize> {
        let mut fitting: Vec<usize> = (0..self.branches.len())
            .filter(|&b| state.iter().zip(&self.branches[b].present).all(|(&x, &moves)| moves || x == 0.0))
            .collect();
        // Where branches cross, the one of fewer is the state's own.
        fitting.sort_by_key(|&b| self.branches[b].present.iter().filter(|&&moves| moves).count());
        fitting.into_iter().find(|&b| self.is_on(b, state, control))
    }

    fn is_on(&mut self, b: usize, state: &[f64], control: f64) -> bool {
        let scale = self.scale_of(b);
        let point: Vec<f64> = state.iter().copied().chain([control]).collect();
        let points = &self.branches[b].points;
        let mut near: Vec<(f64, Vec<f64>, Vec<f64>)> =
            points.windows(2).filter_map(|pair| foot(&joined(&pair[0]), &joined(&pair[1]), &point, &scale)).collect();
        near.sort_by(|a, b| a.0.total_cmp(&b.0));
        near.truncate(MOST_TRIED);
        let present = self.branches[b].present.clone();
        let Some(piece) = self.pieces.at(self.equations, &present, state, control) else { return false };
        let values = self.equations.values.clone();
        let mut curve = Curve::new(&piece, &values, 1.0, self.equations.step.is_some());
        let moving: Vec<usize> = piece.moving.iter().copied().chain([state.len()]).collect();
        curve.scale = moving.iter().map(|&i| scale[i]).collect();
        let wanted: Vec<f64> = moving.iter().map(|&i| point[i]).collect();
        near.iter().any(|(off, foot, direction)| {
            let mut at: Vec<f64> = moving.iter().map(|&i| foot[i]).collect();
            let border: Vec<f64> = moving.iter().map(|&i| direction[i]).collect();
            match curve.correct(&mut at, &border) {
                Some(_) => distance(&at, &wanted, &curve.scale) <= ON,
                // Nothing can be corrected where branches cross.
                None => *off <= NEAR,
            }
        })
    }

    fn scale_of(&self, b: usize) -> Vec<f64> {
        let peaks = self.branches[b].peaks.iter().zip(&self.equations.sides);
        let width = self.control.to - self.control.from;
        peaks.map(|(&peak, side)| peak.max(1e-6 * side[1].abs())).chain([width]).collect()
    }
}

fn joined(point: &Point) -> Vec<f64> {
    point.state.iter().copied().chain([point.at]).collect()
}

/// Of a stretch that a point lies beside: how far off it is, its foot on the stretch, and the stretch's unit direction.
fn foot(a: &[f64], b: &[f64], point: &[f64], scale: &[f64]) -> Option<(f64, Vec<f64>, Vec<f64>)> {
    let mut direction: Vec<f64> = b.iter().zip(a).zip(scale).map(|((b, a), s)| (b - a) / s).collect();
    let length = direction.iter().map(|x| x * x).sum::<f64>().sqrt();
    if length == 0.0 {
        return None;
    }
    for x in &mut direction {
        *x /= length;
    }
    let to_point: Vec<f64> = point.iter().zip(a).zip(scale).map(|((p, a), s)| (p - a) / s).collect();
    let along: f64 = to_point.iter().zip(&direction).map(|(x, y)| x * y).sum();
    let square: f64 = to_point.iter().map(|x| x * x).sum();
    let off = (square - along * along).max(0.0).sqrt();
    let room = BESIDE * length + NEAR;
    if off > room || along < -room || along > length + room {
        return None;
    }
    let foot = a.iter().zip(&direction).zip(scale).map(|((a, d), s)| a + along * d * s).collect();
    Some((off, foot, direction))
}
