//! Straight paths: those along the real eigenvectors of a node or a saddle, as the linear part has them.

use super::Slice;
use crate::analysis::linearise::{Kind, Linearisation};

/// How much of a vector of length 1 may point out of the plane, and how much two may differ and be one line; no unit.
/// Eigenvectors of a face are in it but for rounding.
pub(super) const ROUNDING: f64 = 1e-9;

/// A straight path through an equilibrium, to both sides of it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Straight {
    /// Along the axes, in their units; of any length.
    pub along: [f64; 2],
    /// Whether paths on it approach the equilibrium rather than leave.
    pub approaches: bool,
}

/// The straight paths that lie in a slice; none around spirals, centres and stars, where there are none or only such.
///
/// Eigenvalues with an imaginary part are passed over. For a map approaching is modulus below 1.
pub fn straight(linear: &Linearisation, slice: &Slice, is_map: bool) -> Vec<Straight> {
    let is_wanted = matches!(
        linear.kind,
        Kind::StableNode | Kind::UnstableNode | Kind::Saddle | Kind::StableImproperNode | Kind::UnstableImproperNode
    );
    let (Some(vectors), Some(up), true) = (&linear.spectrum.vectors, slice.y, is_wanted) else { return Vec::new() };
    let order = linear.spectrum.values.len();
    let mut lines: Vec<Straight> = Vec::new();
    for (k, value) in linear.spectrum.values.iter().enumerate() {
        let entry = |i: usize| vectors.right.get(i * order + k).map_or(f64::NAN, |entry| entry.re);
        let off: f64 = (0..order).filter(|&i| slice.holds(i)).map(|i| entry(i).abs()).sum();
        let along = [entry(slice.x), entry(up)];
        let size = if is_map { value.norm() - 1.0 } else { value.re };
        let is_line = value.im == 0.0 && size != 0.0 && off <= ROUNDING && along.iter().all(|x| x.is_finite());
        if is_line && lines.iter().all(|other| !parallel(other.along, along)) {
            lines.push(Straight { along, approaches: size < 0.0 });
        }
    }
    lines
}

fn parallel([a, b]: [f64; 2], [c, d]: [f64; 2]) -> bool {
    (a * d - b * c).abs() <= ROUNDING * a.hypot(b) * c.hypot(d)
}
