//! What the nonlinear terms say of an equilibrium with a critical eigenvalue and none that repels.
//!
//! The equations reduced to the centre manifold, and their first coefficient that is not 0, enclosed over the bounds of the
//! Jacobian and the state (Kuznetsov 2004, ch. 3, 5 and 8). `single` has one eigenvalue 0, or a multiplier 1 or −1; `pair` a
//! pair on the border; `forms` the derivatives, `complex` the linear systems, `forced`
//! the same where it is known from elsewhere what is critical. Anything else on the border is left open. A
//! coefficient whose bounds hold 0 is taken for 0.

mod complex;
pub(super) mod forced;
mod forms;
mod pair;
mod single;

use nalgebra::Complex;

use super::classify::Class;
use super::jacobian::Rows;
use super::place::{Border, Place};
use super::proof::Proof;
use super::written::AsWritten;
use super::{Kind, Nonlinear, Test, Verdict};
use crate::analysis::equilibria::Equilibrium;
use crate::num::eigen::Spectrum;
use crate::num::interval::Interval;
use complex::Scalar;
use forms::Forms;

/// How far a critical pair may lie from where the f64 numbers have it, relative to its parts: far more than rounding errors
/// of a matrix whose type can be proved at all.
const BESIDE: f64 = 1e-10;

/// Which numbers derivatives are taken for.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Numbers {
    /// The f64 that the program works with.
    AsF64,
    /// Those of the model file.
    AsWritten,
}

/// An equilibrium with a critical eigenvalue.
#[derive(Clone, Copy)]
pub(super) struct Critical<'c> {
    pub(super) rows: &'c Rows,
    pub(super) numbers: Numbers,
    pub(super) equilibrium: &'c Equilibrium,
    /// Bounds of the Jacobian.
    pub(super) enclosure: &'c [Interval],
    pub(super) spectrum: &'c Spectrum,
    pub(super) proof: &'c Proof,
    pub(super) class: &'c Class,
    pub(super) border: Border,
}

/// What the nonlinear terms say; `None` unless an eigenvalue is critical and none repels. Proved only where the numbers as
/// written say the same.
pub(super) fn judge(critical: &Critical<'_>, written: Option<&AsWritten>) -> Option<Nonlinear> {
    let found = of(critical)?;
    if !found.proven {
        return Some(found);
    }
    let again = written.and_then(|AsWritten { equilibrium, jacobian }| {
        of(&Critical { numbers: Numbers::AsWritten, equilibrium, enclosure: jacobian, ..*critical })
    });
    let proven = again.is_some_and(|again| (again.verdict, again.test) == (found.verdict, found.test));
    Some(Nonlinear { proven, ..found })
}

fn of(critical: &Critical<'_>) -> Option<Nonlinear> {
    let dimensions = critical.class.dimensions;
    if dimensions.centre == 0 || dimensions.unstable > 0 {
        return None;
    }
    // Communities too large for an enclosure are too large for this.
    if critical.enclosure.is_empty() {
        return Some(open(Test::Fold, None));
    }
    let found = if critical.class.kind == Kind::Centre { pair::judge(critical) } else { single::judge(critical) };
    let decides = critical.class.kind == Kind::Centre || dimensions.centre == 1;
    Some(if decides { found } else { open(found.test, Some(found.coefficient)) })
}

/// No answer.
fn open(test: Test, coefficient: Option<f64>) -> Nonlinear {
    Nonlinear { verdict: Verdict::Open, test, coefficient: coefficient.unwrap_or(0.0), proven: false }
}

/// The answer that a coefficient gives where the sign −1 attracts.
fn by_sign(coefficient: Interval, test: Test, proven: bool) -> Nonlinear {
    let verdict = if coefficient.hi() < 0.0 {
        Verdict::Attracts
    } else if coefficient.lo() > 0.0 {
        Verdict::Repels
    } else {
        Verdict::Open
    };
    Nonlinear { verdict, test, coefficient: coefficient.mid(), proven: proven && verdict != Verdict::Open }
}

impl Critical<'_> {
    fn order(&self) -> usize {
        self.equilibrium.state.len()
    }

    fn forms(&self) -> Forms<'_> {
        let Rows { whole, exact, written, .. } = self.rows;
        match self.numbers {
            Numbers::AsF64 => Forms::new(whole, exact, &self.equilibrium.enclosure),
            Numbers::AsWritten => Forms::new(whole, written, &self.equilibrium.enclosure),
        }
    }

    /// Left and right eigenvector of the first critical eigenvalue, approximately.
    fn vectors(&self) -> Option<[Vec<Complex<f64>>; 2]> {
        let (n, k) = (self.order(), *self.class.critical.first()?);
        let vectors = self.spectrum.vectors.as_ref()?;
        let column = |all: &[Complex<f64>]| (0..n).map(|i| all[i * n + k]).collect();
        Some([column(&vectors.left), column(&vectors.right)])
    }

    /// Whether it is proved that just these eigenvalues lie on the border, all others below.
    fn is_proven(&self) -> bool {
        let Proof { below, critical, .. } = *self.proof;
        critical == self.class.critical.len() && below + critical == self.order()
    }

    /// The critical pair's eigenvalue above the real axis, as it is proved or, put on the border, as it was computed.
    fn on_border(&self) -> Option<Scalar> {
        if let Some(Place { re, im, .. }) = self.proof.critical_pair {
            // As written it lies elsewhere on the border, by some rounding errors of the entries.
            let around = |x: Interval| match self.numbers {
                Numbers::AsF64 => x,
                Numbers::AsWritten => x * Interval::new(1.0 - BESIDE, 1.0 + BESIDE),
            };
            return Some([around(re), around(im)]);
        }
        let value = self.spectrum.values[*self.class.critical.first()?];
        let value = match self.border {
            Border::Axis => Complex::new(0.0, value.im),
            Border::Circle => value / value.norm(),
        };
        Some([Interval::try_new(value.re, value.re)?, Interval::try_new(value.im, value.im)?])
    }
}
