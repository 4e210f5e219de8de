//! The linear part of the equations at an equilibrium: Jacobian, eigenvalues, type, what is proved of it, and what the
//! nonlinear terms say where the linear ones are silent.
//!
//! The words here are the contract's. [`Kind`] and [`Linearisation::stable`] speak of the linear part alone;
//! [`Nonlinear`] answers where an eigenvalue is critical: real part 0, for a map modulus 1.

use super::equilibria::Derivative;
use crate::num::eigen::{Spectrum, Unsolved};
use crate::num::interval::Interval;

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
    /// Its value, in the normalisation that the test's module gives.
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
    /// Eigenvalues in the contract's order, and their vectors.
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
