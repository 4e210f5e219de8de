//! Integrators of autonomous differential equations, step by step, every iteration bounded.
//!
//! [`stepper`] is the way in: it takes one accepted step after another, and changes from the explicit method
//! ([`dormand_prince`]) to the implicit one ([`rosenbrock`]) where the equations prove stiff. [`lanes`] takes 64 paths at
//! once, explicitly. How many steps are taken is the caller's to bound. Nothing here knows what the coordinates mean.

pub mod dormand_prince;
pub mod lanes;
pub mod rosenbrock;
pub mod stepper;

/// The right-hand side of dy/dt = f(y).
pub trait Flow {
    /// Writes f(y), one number a coordinate. `false` where it is not defined, or not finite.
    fn rates(&mut self, y: &[f64], out: &mut [f64]) -> bool;

    /// Writes the derivatives of f, row by row. `false` where there are none.
    fn slopes(&mut self, y: &[f64], out: &mut [f64]) -> bool;
}

/// A flow from a closure for the rates and one for the slopes.
pub struct Closures<F, J> {
    /// See [`Flow::rates`].
    pub rates: F,
    /// See [`Flow::slopes`].
    pub slopes: J,
}

impl<F, J> Flow for Closures<F, J>
where
    F: FnMut(&[f64], &mut [f64]) -> bool,
    J: FnMut(&[f64], &mut [f64]) -> bool,
{
    fn rates(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        (self.rates)(y, out)
    }

    fn slopes(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        (self.slopes)(y, out)
    }
}

/// The error that one step may leave in one coordinate: absolute + relative |y|.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tolerance {
    /// In the coordinate's unit, positive.
    pub absolute: f64,
    /// No unit.
    pub relative: f64,
}

impl Tolerance {
    /// The larger of what the two values allow.
    fn allows(self, y: f64, z: f64) -> f64 {
        self.absolute + self.relative * y.abs().max(z.abs())
    }
}

/// Why no further step was taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stopped {
    /// The rates are not defined at the state reached, or nowhere that a step can be short enough to see.
    Undefined,
    /// No step that time can resolve keeps the error within the tolerance.
    TooShort,
    /// A state or the time is not finite.
    NotFinite,
}

/// Root mean square of the errors over what is allowed; at most 1 for a step that is kept.
fn error_norm(error: &[f64], old: &[f64], new: &[f64], tolerance: &[Tolerance]) -> f64 {
    let sum: f64 = error
        .iter()
        .zip(old.iter().zip(new))
        .zip(tolerance)
        .map(|((e, (a, b)), t)| (e / t.allows(*a, *b)).powi(2))
        .sum();
    (sum / error.len().max(1) as f64).sqrt()
}
