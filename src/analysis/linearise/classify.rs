//! The type of an equilibrium from its eigenvalues, in the contract's words, and what of it is proved.

use super::critical;
use super::place::{Border, Shape, Side};
use super::planar::Planar;
use super::proof::Proof;
use super::{Dimensions, Kind};
use crate::num::eigen::{Discriminant, Spectrum};
use crate::num::interval::Interval;

/// What the eigenvalues say.
pub(super) struct Class {
    pub(super) kind: Kind,
    pub(super) kind_proven: bool,
    pub(super) stable: Option<bool>,
    pub(super) stable_proven: bool,
    pub(super) dimensions: Dimensions,
    /// Positions of the critical ones in the spectrum.
    pub(super) critical: Vec<usize>,
}

/// How the leading eigenvalues lie to each other; what paths look like beside a node or spiral.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Look {
    Node,
    Spiral,
    Star,
    Improper,
}

/// A Jacobian in every form that a decision may need.
pub(super) struct Linear<'l> {
    pub(super) numbers: &'l [f64],
    /// Of the model as written, by which signs are judged; empty where nothing is known.
    pub(super) enclosure: &'l [Interval],
    /// Of the f64 numbers, by which what is exactly equal is; empty where nothing is known.
    pub(super) exact: &'l [Interval],
    pub(super) spectrum: &'l Spectrum,
    /// What each eigenvalue may be off by, where that is known without vectors.
    pub(super) errors: Option<Vec<f64>>,
    pub(super) proof: &'l Proof,
    pub(super) border: Border,
}

impl Linear<'_> {
    pub(super) fn class(&self) -> Class {
        let found = || critical::errors(self.numbers, self.enclosure, self.spectrum);
        let errors = self.errors.as_ref().map_or_else(found, Vec::clone);
        let sides = critical::sides(self.spectrum, &errors, self.proof, self.border);
        let count = |side| sides.iter().filter(|&&s| s == side).count();
        let dimensions =
            Dimensions { stable: count(Side::Below), centre: count(Side::Critical), unstable: count(Side::Above) };
        let critical: Vec<usize> = (0..sides.len()).filter(|&k| sides[k] == Side::Critical).collect();
        let pair = self.is_pair(&critical, &errors);
        let (look, look_proven) = self.look();
        let kind = kind(dimensions, pair, look);
        let stable = match dimensions {
            Dimensions { unstable: 1.., .. } => Some(false),
            Dimensions { centre: 0, .. } => Some(true),
            _ => None,
        };
        Class {
            kind,
            kind_proven: self.is_proven(kind, look_proven),
            stable,
            stable_proven: self.is_stability_proven(stable),
            dimensions,
            critical,
        }
    }

    /// Whether the critical eigenvalues are one pair: not two real ones that rounding took off the axis.
    fn is_pair(&self, critical: &[usize], errors: &[f64]) -> bool {
        let &[first, _] = critical else { return false };
        self.proof.critical_pair.is_some() || self.spectrum.values[first].im.abs() > errors[first]
    }

    fn look(&self) -> (Look, bool) {
        if let &[a, b, c, d] = self.numbers {
            return self.planar_look([a, b, c, d]);
        }
        let complex = self.spectrum.values.first().is_some_and(|leading| leading.im != 0.0);
        match self.proof.leading(self.border) {
            Shape::Real => (Look::Node, true),
            Shape::Pair => (Look::Spiral, true),
            Shape::Unknown => (if complex { Look::Spiral } else { Look::Node }, false),
        }
    }

    /// By the sign of the discriminant, where it is proved; else at the middle, with the band of equal eigenvalues.
    fn planar_look(&self, numbers: [f64; 4]) -> (Look, bool) {
        let equal = if numbers[1] == 0.0 && numbers[2] == 0.0 { Look::Star } else { Look::Improper };
        if let &[a, b, c, d] = self.enclosure {
            let discriminant = Planar { a, b, c, d }.discriminant();
            if discriminant.lo() > 0.0 {
                return (Look::Node, true);
            } else if discriminant.hi() < 0.0 {
                return (Look::Spiral, true);
            }
        }
        if let &[a, b, c, d] = self.exact
            && (Planar { a, b, c, d }).discriminant() == Interval::ZERO
        {
            let apart = |x: Interval| !x.contains_zero();
            let is_star = b == Interval::ZERO && c == Interval::ZERO;
            let improper = apart(b) || apart(c) || apart(a - d);
            return if is_star { (Look::Star, true) } else { (Look::Improper, improper) };
        }
        let discriminant = Discriminant::of(&numbers);
        let look = if discriminant.is_zero() {
            equal
        } else if discriminant.value > 0.0 {
            Look::Node
        } else {
            Look::Spiral
        };
        (look, false)
    }

    fn is_proven(&self, kind: Kind, look_proven: bool) -> bool {
        let Proof { below, critical, above, .. } = *self.proof;
        let n = self.spectrum.values.len();
        match kind {
            Kind::Saddle => below > 0 && above > 0,
            Kind::Centre => self.proof.critical_pair.is_some() && critical == 2 && below + 2 == n,
            Kind::Undecided => critical > 0 && below + critical == n,
            Kind::StableNode | Kind::StableSpiral | Kind::StableStar | Kind::StableImproperNode => {
                look_proven && below == n
            }
            Kind::UnstableNode | Kind::UnstableSpiral | Kind::UnstableStar | Kind::UnstableImproperNode => {
                look_proven && above > 0 && above + critical == n
            }
        }
    }

    fn is_stability_proven(&self, stable: Option<bool>) -> bool {
        let Proof { below, critical, above, .. } = *self.proof;
        let n = self.spectrum.values.len();
        match stable {
            Some(true) => below == n,
            Some(false) => above > 0,
            None => critical > 0 && below + critical == n,
        }
    }
}

pub(super) fn kind(dimensions: Dimensions, critical_pair: bool, look: Look) -> Kind {
    let Dimensions { stable, centre, unstable } = dimensions;
    // Equal eigenvalues have words of their own only where both are on one side.
    match (unstable > 0, stable > 0, centre > 0) {
        (true, true, _) => Kind::Saddle,
        (false, _, true) if critical_pair => Kind::Centre,
        (false, _, true) => Kind::Undecided,
        (false, _, false) => match look {
            Look::Node => Kind::StableNode,
            Look::Spiral => Kind::StableSpiral,
            Look::Star => Kind::StableStar,
            Look::Improper => Kind::StableImproperNode,
        },
        (true, false, _) => match look {
            Look::Spiral => Kind::UnstableSpiral,
            Look::Star if centre == 0 => Kind::UnstableStar,
            Look::Improper if centre == 0 => Kind::UnstableImproperNode,
            _ => Kind::UnstableNode,
        },
    }
}
