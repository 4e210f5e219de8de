//! Eigenvalues and eigenvectors of real matrices, every iteration bounded.

use nalgebra::Complex;

/// Why there are no eigenvalues.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unsolved {
    /// An entry is not finite, or an eigenvalue would be too large for f64.
    NotFinite,
    /// The iteration did not end in time, nor after an orthogonal similarity.
    NoConvergence,
}

/// Eigenvalues of a matrix of order n, and their vectors where they were asked for.
#[derive(Clone, Debug, PartialEq)]
pub struct Spectrum {
    /// By falling real part, then falling imaginary part; pairs are exactly conjugate.
    pub values: Vec<Complex<f64>>,
    /// Their vectors.
    pub vectors: Option<Vectors>,
}

/// Right and left eigenvectors, each of length 1.
#[derive(Clone, Debug, PartialEq)]
pub struct Vectors {
    /// A v = λ v: entry i of the k-th at i n + k.
    pub right: Vec<Complex<f64>>,
    /// wᴴ A = λ wᴴ: entry i of the k-th at i n + k.
    pub left: Vec<Complex<f64>>,
    /// Condition of each eigenvalue, 1/|wᴴ v|; infinite where the two are orthogonal.
    pub condition: Vec<f64>,
}
