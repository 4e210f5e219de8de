//! Roots to the last digit: what an approximate root leaves of the equations, without the rounding of their terms.
//!
//! The terms of a rate nearly cancel at an equilibrium, so that an interval residual, and with it the enclosure of a root,
//! is as wide as the rounding of the largest term. In numbers of 32 digits the residual is sharp, and one step of
//! Krawczyk's operator (1969) takes the enclosure down to neighbouring f64.

use super::newton::{Equations, Proved, Region};
use crate::expr::tape::Tape;
use crate::expr::tape::number::Number;
use crate::expr::tape::run::Run;
use crate::expr::tape::written::Written;
use crate::num::dense::inverse;
use crate::num::double::Double;
use crate::num::interval::Interval;

/// Steps on one root. One is enough but for an ill-conditioned root, where each about squares the width.
const STEPS: usize = 6;

/// The equations of one face, evaluated at points with all that rounding takes: for the f64 parameters over [`Double`], for
/// those as written over [`Written`].
pub(super) struct Residual<'t, T> {
    tape: &'t Tape,
    parameters: Vec<f64>,
    /// Made when it is first asked for: most faces have no root.
    run: Option<Run<'t, T>>,
}

/// A number of some 32 digits.
pub(super) trait Sharp: Number {
    /// A coordinate, which is exact.
    fn coordinate(x: f64) -> Self;
    fn enclosure(&self) -> Interval;
}

impl Sharp for Double {
    fn coordinate(x: f64) -> Self {
        Self::exact(x)
    }

    fn enclosure(&self) -> Interval {
        Self::enclosure(*self)
    }
}

impl Sharp for Written {
    fn coordinate(x: f64) -> Self {
        Self(Double::exact(x))
    }

    fn enclosure(&self) -> Interval {
        self.0.enclosure()
    }
}

impl<'t, T: Sharp> Residual<'t, T> {
    pub(super) fn new(tape: &'t Tape, parameters: &[f64]) -> Self {
        Self { tape, parameters: parameters.to_vec(), run: None }
    }

    /// Enclosures of all rows at a point; `None` where one is not defined.
    pub(super) fn at(&mut self, point: &[f64]) -> Option<Vec<Interval>> {
        let run = self.run.get_or_insert_with(|| {
            let parameters: Vec<T> = self.parameters.iter().map(|&p| T::constant(p)).collect();
            self.tape.start(&parameters)
        });
        let exact: Vec<T> = point.iter().map(|&x| T::coordinate(x)).collect();
        run.at(&exact).defined.then(|| run.outputs().map(Sharp::enclosure).collect())
    }
}

impl Equations<'_> {
    /// Narrows a proved root's enclosure as far as f64 goes, and puts its point at the f64 nearest to the root.
    pub(super) fn sharpen(&mut self, root: &mut Proved) {
        for _ in 0..STEPS {
            if root.enclosure.iter().all(|side| is_sharp(*side)) {
                return;
            }
            let Some((offset, smooth)) = self.offset(&root.point, &root.enclosure) else { return };
            if !narrow(&mut root.point, &mut root.enclosure, &offset) {
                return;
            }
            root.smooth |= smooth;
        }
    }

    /// Holds the root less the point: −C f(x) + (I − C J(X)) (X − x), and whether X is free of kinks. `None` where a rate
    /// has no value or the Jacobian no inverse.
    fn offset(&mut self, point: &[f64], region: &Region) -> Option<(Region, bool)> {
        let n = self.n;
        let values = self.residual.at(point)?;
        let inverse = inverse(&self.slopes_at(point), n)?;
        let over = self.linear(region);
        if !over.domain.defined {
            return None;
        }
        let shift = self.preconditioned(&inverse, &values);
        let defect = self.defect(&inverse, &over.slopes);
        let offset = |i: usize| {
            let away = |j: usize| region[j] - Interval::point(point[j]);
            (0..n).fold(-shift[i], |sum, j| sum + defect[i * n + j] * away(j))
        };
        Some(((0..n).map(offset).collect(), over.domain.smooth))
    }
}

/// Cuts an enclosure to where the root is found to lie beside a point, and moves the point to the f64 nearest to it.
/// Whether that gained anything. What may be 0 stays so: whether it is, the last digits of the parameters may decide.
pub(super) fn narrow(point: &mut [f64], enclosure: &mut Region, offset: &[Interval]) -> bool {
    let cut = |((offset, &x), side): ((&Interval, &f64), &Interval)| {
        if side.contains_zero() { *side } else { side.intersect(Interval::point(x) + *offset) }
    };
    let narrowed: Region = offset.iter().zip(&*point).zip(&*enclosure).map(cut).collect();
    // Empty would contradict the proof of the root; the enclosure that there is stays.
    if narrowed.iter().any(|side| side.is_empty()) || narrowed == *enclosure {
        return false;
    }
    for ((x, offset), side) in point.iter_mut().zip(offset).zip(&narrowed) {
        let nearest = *x + offset.mid();
        *x = if side.contains(nearest) { nearest } else { side.mid() };
    }
    *enclosure = narrowed;
    true
}

/// Whether an enclosure is as narrow as the f64 around a number allow, or may hold 0.
pub(super) fn is_sharp(side: Interval) -> bool {
    side.lo().next_up().next_up() >= side.hi() || side.contains_zero()
}
