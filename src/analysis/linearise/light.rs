//! The type of a state by its eigenvalues alone, for the many points of a branch: the same words as everywhere, no proofs.
//!
//! [`by_eigenvalues`] decides where every eigenvalue is far from the border; near it, and where two may be equal,
//! [`by_jacobian`] weighs them as it is done at an equilibrium.

use nalgebra::Complex;

use super::Kind;
use super::classify::{Linear, Look, kind};
use super::critical::excess;
use super::place::Border;
use super::proof::Proof;
use super::{Dimensions, Spectrum};
use crate::num::eigen::{Discriminant, spectrum};

/// An eigenvalue nearer to the border than this share of the largest is looked at closely.
const CLEAR: f64 = 1e-6;

/// What the eigenvalues say.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(in crate::analysis) struct Light {
    /// The type.
    pub(in crate::analysis) kind: Kind,
    /// Whether all attract; `None` where one is critical and none repels.
    pub(in crate::analysis) stable: Option<bool>,
}

/// From all eigenvalues, the leading one first, and for two species the Jacobian where it is known whole. `None` where
/// that is too little.
pub(in crate::analysis) fn by_eigenvalues(
    values: &[Complex<f64>],
    planar: Option<&[f64; 4]>,
    is_map: bool,
) -> Option<Light> {
    let border = border(is_map);
    let largest = values.iter().fold(0.0f64, |most, z| most.max(z.norm_sqr())).sqrt();
    let mut dimensions = Dimensions::default();
    for &value in values {
        let above = excess(value, border);
        if above > CLEAR * largest {
            dimensions.unstable += 1;
        } else if above < -CLEAR * largest {
            dimensions.stable += 1;
        } else {
            return None;
        }
    }
    let look = match (values, planar) {
        ([_, _], Some(entries)) => planar_look(entries),
        ([first, second], None) if (first - second).norm() <= CLEAR * largest => return None,
        _ if values.first().is_some_and(|leading| leading.im != 0.0) => Look::Spiral,
        _ => Look::Node,
    };
    Some(Light { kind: kind(dimensions, false, look), stable: Some(dimensions.unstable == 0) })
}

/// From the Jacobian, row by row; `None` where it has no eigenvalues.
pub(in crate::analysis) fn by_jacobian(numbers: &[f64], n: usize, is_map: bool) -> Option<Light> {
    let border = border(is_map);
    let found: Spectrum = spectrum(numbers, n).ok()?;
    let spectrum = if is_map { found.by_modulus() } else { found };
    let proof = Proof::default();
    let linear =
        Linear { numbers, enclosure: &[], exact: &[], spectrum: &spectrum, errors: None, proof: &proof, border };
    let class = linear.class();
    Some(Light { kind: class.kind, stable: class.stable })
}

fn planar_look(entries: &[f64; 4]) -> Look {
    let discriminant = Discriminant::of(entries);
    if discriminant.is_zero() {
        if entries[1] == 0.0 && entries[2] == 0.0 { Look::Star } else { Look::Improper }
    } else if discriminant.value > 0.0 {
        Look::Node
    } else {
        Look::Spiral
    }
}

fn border(is_map: bool) -> Border {
    if is_map { Border::Circle } else { Border::Axis }
}
