//! Pure numerics, one method a file: interval arithmetic and what rests on it. Knows nothing of models.
//!
//! [`interval`] is the number type that proofs are made of; [`round`] gives the directed bounds under it, [`elementary`]
//! the scalar functions that every number type shares, [`quotient`] the functions f(u)/u that stay smooth at 0; [`double`]
//! carries 32 digits with a rigorous error. [`solve`] encloses solutions of linear systems, [`complementarity`] pivots to a
//! community that no absent species invades. [`eigen`] has eigenvalues and their vectors, [`verified`] what is proved of
//! them, [`lyapunov`] solves the equations of Lyapunov and Stein, on which [`stationary`] covariances rest, [`exponential`]
//! and [`transient`] say how far linear paths stray, [`ode`] follows paths that are not linear. [`dense`] has what small
//! matrices share. [`philox`], [`permutation`] and [`sobol`] make points that look random or fill a cube, [`normal`], [`beta`]
//! and [`student`] are distributions, [`correlation`] says which variables can hang together so; [`sum`], [`quantiles`] and
//! [`ranks`] count in parts what is the same as counted at once. To add a function, give its scalar form in [`elementary`], its enclosure in [`interval`], and rows of
//! references to `tests/data/interval_references.py`.

pub mod beta;
pub mod chi_square;
pub mod complementarity;
pub mod correlation;
pub mod dense;
pub mod double;
pub mod eigen;
pub mod elementary;
pub mod exponential;
pub mod gamma;
pub mod interval;
pub mod lyapunov;
pub mod normal;
pub mod ode;
pub mod permutation;
pub mod philox;
pub mod quadratic;
pub mod quantiles;
pub mod quotient;
pub mod random;
pub mod ranks;
pub mod rapid;
pub mod round;
pub mod singular;
pub mod sobol;
pub mod solve;
pub mod stationary;
pub mod student;
pub mod sum;
pub mod transient;
pub mod verified;
pub mod wide;
