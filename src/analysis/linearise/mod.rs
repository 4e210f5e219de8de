//! The linear part of the equations at an equilibrium: Jacobian, eigenvalues, type, what is proved of it, and what the
//! nonlinear terms say where the linear ones are silent.
//!
//! The words here are the contract's. [`Kind`] and [`Linearisation::stable`] speak of the linear part alone;
//! [`Nonlinear`] answers where an eigenvalue is critical: real part 0, for a map modulus 1. Start at [`Lineariser`].
//! `jacobian` evaluates, `written` does so for the numbers as the file has them, `proof` (on `planar` and `place`) says what holds for every Jacobian between the bounds, `critical` how
//! much a computed eigenvalue may be off (`clear` where large communities need few vectors for it), `classify` makes words of
//! both (`light` without proofs, for branches), `nonlinear` looks at the higher terms.

mod classify;
mod clear;
mod critical;
mod jacobian;
pub(in crate::analysis) mod light;
mod nonlinear;
mod place;
mod planar;
mod proof;
mod written;

use nalgebra::Complex;

use super::equilibria::{Derivative, Equilibrium};
use super::subject::Subject;
use crate::num::eigen::{Spectrum, Unsolved, eigenvalues, spectrum};
use crate::num::interval::Interval;
use classify::Linear;
use jacobian::Rows;
pub use nonlinear::forced::{Coefficient, Forced};
use place::Border;
use proof::Proof;

/// The type of an equilibrium, by its eigenvalues alone.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Kind {
    /// All attract, the leading one real.
    StableNode,
    /// All attract, the leading ones a complex pair.
    StableSpiral,
    /// Two equal ones that attract, with two eigenvectors; in two dimensions alone.
    StableStar,
    /// Two equal ones that attract, with one eigenvector; in two dimensions alone.
    StableImproperNode,
    /// None attracts, the leading one is real.
    UnstableNode,
    /// None attracts, the leading ones are a complex pair.
    UnstableSpiral,
    /// Two equal ones that repel, with two eigenvectors; in two dimensions alone.
    UnstableStar,
    /// Two equal ones that repel, with one eigenvector; in two dimensions alone.
    UnstableImproperNode,
    /// Some attract, some repel.
    Saddle,
    /// A critical pair, nothing else critical and nothing that repels.
    Centre,
    /// A critical eigenvalue otherwise, nothing that repels.
    Undecided,
}

/// How many eigenvalues attract, are critical, and repel.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Dimensions {
    /// Real part below 0; for a map, modulus below 1.
    pub stable: usize,
    /// Real part 0; for a map, modulus 1.
    pub centre: usize,
    /// Real part above 0; for a map, modulus above 1.
    pub unstable: usize,
}

/// What the nonlinear terms say of an equilibrium with a critical eigenvalue.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// Paths that start close by, with no abundance negative, approach it.
    Attracts,
    /// Some path that starts close by, with no abundance negative, leaves.
    Repels,
    /// Paths on one side approach it, paths on the other leave.
    SemiStable,
    /// The terms looked at do not decide.
    Open,
}

/// Which coefficient decides.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Test {
    /// Quadratic coefficient on the centre manifold, in the interior.
    Fold,
    /// Quadratic coefficient where an absent species' own growth rate is 0.
    Transcritical,
    /// Cubic coefficient, the quadratic one being 0 by symmetry.
    Pitchfork,
    /// Cubic coefficient, the quadratic one being 0 otherwise.
    Cusp,
    /// Of a pure imaginary pair; for a map, of a pair on the unit circle.
    FirstLyapunov,
    /// Of a multiplier −1.
    Flip,
}

/// What the nonlinear terms answer, and by which coefficient.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Nonlinear {
    /// The answer, on the side where no abundance is negative.
    pub verdict: Verdict,
    /// The coefficient's name.
    pub test: Test,
    /// Its value, in the normalisation that the test's module gives; 0 where the terms looked at do not have one, and the
    /// verdict is open.
    pub coefficient: f64,
    /// Whether an enclosure of the coefficient has one sign, and the criticality itself is proved.
    pub proven: bool,
}

/// The linear part at an equilibrium.
#[derive(Clone, Debug, PartialEq)]
pub struct Linearisation {
    /// Row i, column j: derivative of species i's rate (of a map's next state) with respect to species j; row by row, in
    /// units of i per unit of j and of time.
    pub jacobian: Vec<f64>,
    /// Holds the Jacobian at the equilibrium itself; row by row. Empty for communities too large to prove anything of.
    pub enclosure: Vec<Interval>,
    /// Eigenvalues in the contract's order, and their vectors; without these for large communities to which all deviations
    /// return, unless at most two species are present.
    pub spectrum: Spectrum,
    /// The type.
    pub kind: Kind,
    /// Whether the type is proved.
    pub kind_proven: bool,
    /// Whether all eigenvalues attract; `None` where only the nonlinear terms decide.
    pub stable: Option<bool>,
    /// Whether that is proved.
    pub stable_proven: bool,
    /// How many eigenvalues attract, are critical, repel.
    pub dimensions: Dimensions,
    /// Whether the leading multiplier of a map is real and negative.
    pub alternating: bool,
    /// What the nonlinear terms say; `None` unless an eigenvalue is critical and none repels.
    pub nonlinear: Option<Nonlinear>,
}

/// Why there is no linearisation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unavailable {
    /// The rates have no derivative there: a kink, or 0/0.
    NoDerivative(Derivative),
    /// The eigenvalues could not be computed.
    Eigenvalues(Unsolved),
}

/// Up to this order elasticities of the leading eigenvalue are found, which need its vectors; and all bounds of entries are
/// of smaller ones.
const ALWAYS_WITH_VECTORS: usize = 100;

/// One scenario's equations, compiled once for all of its equilibria.
#[derive(Clone, Debug)]
pub struct Lineariser {
    rows: Rows,
    border: Border,
}

/// The linear part at one equilibrium; for several of one scenario keep a [`Lineariser`].
pub fn linearise(subject: &mut Subject<'_>, equilibrium: &Equilibrium) -> Result<Linearisation, Unavailable> {
    Lineariser::new(subject).at(equilibrium)
}

impl Lineariser {
    /// Compiles a scenario's equations and their divided forms.
    pub fn new(subject: &mut Subject<'_>) -> Self {
        let border = if subject.step().is_some() { Border::Circle } else { Border::Axis };
        Self { rows: Rows::new(subject), border }
    }

    /// The linear part at an equilibrium of the scenario.
    ///
    /// Everything proved is proved for an exact equilibrium, so only where it is proved that there is one; and of the model
    /// as the file has it, decimals and all, so only where that has one as well.
    ///
    /// # Panics
    /// If the equilibrium is not one of as many species.
    pub fn at(&self, equilibrium: &Equilibrium) -> Result<Linearisation, Unavailable> {
        let enclosure = self.rows.enclosure(equilibrium).map_err(Unavailable::NoDerivative)?;
        let middle = equilibrium.proven || equilibrium.derivative != Derivative::Exists;
        let jacobian = if middle && !enclosure.is_empty() {
            enclosure.iter().map(|entry| entry.mid()).collect()
        } else {
            self.rows.numbers(&equilibrium.state)
        };
        let n = equilibrium.state.len();
        let (spectrum, errors) = self.spectrum(&jacobian, equilibrium).map_err(Unavailable::Eigenvalues)?;
        let exact = if equilibrium.proven { &enclosure[..] } else { &[] };
        let written = if exact.is_empty() { None } else { self.rows.as_written(equilibrium) };
        let proof = written
            .as_ref()
            .map_or_else(Proof::default, |written| Proof::as_written(&written.jacobian, exact, n, self.border));
        let linear = Linear {
            numbers: &jacobian,
            enclosure: written.as_ref().map_or(exact, |written| &written.jacobian),
            exact,
            spectrum: &spectrum,
            errors,
            proof: &proof,
            border: self.border,
        };
        let class = linear.class();
        let critical = nonlinear::Critical {
            rows: &self.rows,
            numbers: nonlinear::Numbers::AsF64,
            equilibrium,
            enclosure: &enclosure,
            spectrum: &spectrum,
            proof: &proof,
            class: &class,
            border: self.border,
        };
        let nonlinear = nonlinear::judge(&critical, written.as_ref());
        let leading = spectrum.values.first();
        Ok(Linearisation {
            alternating: self.border == Border::Circle && leading.is_some_and(|z| z.im == 0.0 && z.re < 0.0),
            kind: class.kind,
            kind_proven: class.kind_proven,
            stable: class.stable,
            stable_proven: class.stable_proven,
            dimensions: class.dimensions,
            nonlinear,
            jacobian,
            enclosure,
            spectrum,
        })
    }

    /// In the contract's order, and what each eigenvalue may be off by where vectors were left out.
    ///
    /// Vectors cost more than values, and in a large community only three things ask for them: how much an eigenvalue near
    /// the border is off, where paths go beside an unstable state, and straight paths in the plane of a sketch.
    fn spectrum(&self, jacobian: &[f64], equilibrium: &Equilibrium) -> Result<(Spectrum, Option<Vec<f64>>), Unsolved> {
        let n = equilibrium.state.len();
        let crowded = || (0..n).filter(|&i| equilibrium.has(i)).nth(2).is_some();
        if n > ALWAYS_WITH_VECTORS && crowded() {
            let alone = self.ordered(Spectrum { values: eigenvalues(jacobian, n)?, vectors: None });
            if let Some(errors) = clear::errors(jacobian, &alone.values, self.border) {
                return Ok((alone, Some(errors)));
            }
        }
        Ok((self.ordered(spectrum(jacobian, n)?), None))
    }

    /// The contract's order: that of the spectrum, for maps by falling modulus.
    fn ordered(&self, spectrum: Spectrum) -> Spectrum {
        match self.border {
            Border::Axis => spectrum,
            Border::Circle => spectrum.by_modulus(),
        }
    }
}

impl Linearisation {
    /// How many species.
    pub fn order(&self) -> usize {
        self.spectrum.values.len()
    }

    /// The leading eigenvalue: of largest real part, for a map of largest modulus; of a pair the one above the real axis.
    /// `None` only without species.
    pub fn leading(&self) -> Option<Complex<f64>> {
        self.spectrum.values.first().copied()
    }

    /// How the entry of row i, column j lies in [`Linearisation::jacobian`].
    pub fn entry(&self, i: usize, j: usize) -> f64 {
        self.jacobian[i * self.order() + j]
    }
}
