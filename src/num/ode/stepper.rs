//! One accepted step after another, with the length chosen by the error and the method by stiffness.
//!
//! Lengths follow the proportional-integral rule of Gustafsson (1991) with the constants of Hairer & Wanner (1996, IV.2).
//! The explicit method gives way to the implicit one for good when it finds itself held up by stability, not by accuracy.

use super::{Flow, Stopped, Tolerance, dormand_prince, rosenbrock};
use crate::num::elementary;

/// Trials for one step before it is given up: each halves at least, so time cannot resolve more.
const MOST_TRIALS: usize = 60;
/// A step may be so many times longer, or shorter, than the one before.
const LONGER: f64 = 5.0;
const SHORTER: f64 = 0.1;
const SAFETY: f64 = 0.9;
/// Exponent of the integral part, for a method of order 5.
const BETA: f64 = 0.04;
/// The explicit method is stable up to about this value of h|λ|.
const STABLE: f64 = 3.25;
/// So many steps in a row at the edge of stability are taken for stiffness; so many others clear the suspicion.
const STIFF_STEPS: u32 = 15;
const CLEARING_STEPS: u32 = 6;

/// Which method takes the steps.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Method {
    /// Explicit, of order 5.
    Explicit,
    /// Implicit, of order 4.
    Implicit,
}

/// The solution over the last step, as a polynomial: with s = 1 − θ and coefficients c,
/// y(θ) = c₀ + θ (c₁ + s (c₂ + θ (c₃ + s c₄))).
#[derive(Clone, Debug)]
pub struct Dense {
    coefficients: [Vec<f64>; 5],
}

impl Dense {
    /// Coordinate i at a share θ of the step, 0 ≤ θ ≤ 1.
    pub fn coordinate(&self, i: usize, share: f64) -> f64 {
        let rest = 1.0 - share;
        let c = |k: usize| self.coefficients[k][i];
        c(0) + share * (c(1) + rest * (c(2) + share * (c(3) + rest * c(4))))
    }

    /// All coordinates at a share of the step.
    pub fn at(&self, share: f64, out: &mut [f64]) {
        for (i, out) in out.iter_mut().enumerate() {
            *out = self.coordinate(i, share);
        }
    }
}

/// Where a path stands, and what it needs to go on.
#[derive(Clone, Debug)]
pub struct Stepper {
    time: f64,
    before: f64,
    y: Vec<f64>,
    /// Rates at the state.
    rates: Vec<f64>,
    /// The next step's length; negative to go back in time.
    h: f64,
    tolerance: Vec<Tolerance>,
    method: Method,
    explicit: dormand_prince::Stages,
    implicit: Option<rosenbrock::Stages>,
    dense: Dense,
    last_error: f64,
    suspicion: u32,
    cleared: u32,
}

impl Stepper {
    /// Starts at time 0, forwards, or backwards where `direction` is negative; one tolerance a coordinate.
    ///
    /// # Errors
    /// Where the start or its rates are not finite.
    ///
    /// # Panics
    /// If tolerances and coordinates are not as many.
    pub fn new(flow: &mut dyn Flow, y: &[f64], tolerance: &[Tolerance], direction: f64) -> Result<Self, Stopped> {
        let n = y.len();
        assert_eq!(tolerance.len(), n, "tolerances");
        let mut stepper = Self {
            time: 0.0,
            before: 0.0,
            y: y.to_vec(),
            rates: vec![0.0; n],
            h: direction.signum(),
            tolerance: tolerance.to_vec(),
            method: Method::Explicit,
            explicit: dormand_prince::Stages::new(n),
            implicit: None,
            dense: Dense { coefficients: std::array::from_fn(|_| y.to_vec()) },
            last_error: 1e-4,
            suspicion: 0,
            cleared: 0,
        };
        if !y.iter().all(|y| y.is_finite()) {
            return Err(Stopped::NotFinite);
        }
        if !flow.rates(y, &mut stepper.rates) {
            return Err(Stopped::Undefined);
        }
        stepper.h *= stepper.first_length(flow);
        Ok(stepper)
    }

    /// The time reached.
    pub fn time(&self) -> f64 {
        self.time
    }

    /// The time at which the last step began.
    pub fn before(&self) -> f64 {
        self.before
    }

    /// The state reached.
    pub fn state(&self) -> &[f64] {
        &self.y
    }

    /// The rates there.
    pub fn rates(&self) -> &[f64] {
        &self.rates
    }

    /// The solution over the last step.
    pub fn dense(&self) -> &Dense {
        &self.dense
    }

    /// Which method takes the next step.
    pub fn method(&self) -> Method {
        self.method
    }

    /// Takes all further steps by this method, until the explicit one proves stiff.
    pub fn set_method(&mut self, method: Method) {
        self.method = method;
    }

    /// Keeps further steps to other tolerances.
    ///
    /// # Panics
    /// If they are not as many as the coordinates.
    pub fn set_tolerance(&mut self, tolerance: &[Tolerance]) {
        assert_eq!(tolerance.len(), self.y.len(), "tolerances");
        self.tolerance.copy_from_slice(tolerance);
    }

    /// Lets the next step be no longer than this.
    pub fn limit(&mut self, longest: f64) {
        self.h = self.h.clamp(-longest.abs(), longest.abs());
    }

    /// Takes one step.
    ///
    /// # Errors
    /// Where none can be taken; the state stays as it was.
    pub fn step(&mut self, flow: &mut dyn Flow) -> Result<(), Stopped> {
        let mut undefined = false;
        for trial in 0..MOST_TRIALS {
            let end = self.time + self.h;
            if !end.is_finite() {
                return Err(Stopped::NotFinite);
            }
            if end == self.time {
                return Err(if undefined { Stopped::Undefined } else { Stopped::TooShort });
            }
            let error = match self.method {
                Method::Explicit => self.try_explicit(flow),
                Method::Implicit => self.try_implicit(flow),
            };
            let Some(error) = error.filter(|error| error.is_finite()) else {
                undefined = true;
                self.h *= 0.25;
                continue;
            };
            if error <= 1.0 {
                self.keep(error, trial > 0);
                return Ok(());
            }
            self.h *= (SAFETY * elementary::pow(error, -self.exponent())).max(SHORTER);
        }
        Err(if undefined { Stopped::Undefined } else { Stopped::TooShort })
    }

    fn exponent(&self) -> f64 {
        match self.method {
            Method::Explicit => 0.2,
            Method::Implicit => 0.25,
        }
    }

    fn try_explicit(&mut self, flow: &mut dyn Flow) -> Option<f64> {
        self.explicit.k[0].copy_from_slice(&self.rates);
        let trial = dormand_prince::attempt(flow, &self.y, self.h, &self.tolerance, &mut self.explicit)?;
        if trial.error <= 1.0 {
            dormand_prince::interpolate(&self.y, self.h, &self.explicit, &mut self.dense.coefficients);
            self.y.copy_from_slice(&self.explicit.end);
            self.rates.copy_from_slice(&self.explicit.k[dormand_prince::STAGES - 1]);
            self.watch(trial.stiffness);
        }
        Some(trial.error)
    }

    fn try_implicit(&mut self, flow: &mut dyn Flow) -> Option<f64> {
        let stages = self.implicit.get_or_insert_with(|| rosenbrock::Stages::new(self.y.len()));
        let error = rosenbrock::attempt(flow, &self.y, self.h, &self.tolerance, stages)?;
        if error <= 1.0 {
            // The rates at the end are part of the step: a step to where there are none is not kept.
            if !flow.rates(&stages.end, &mut self.explicit.end) {
                return None;
            }
            self.rates.copy_from_slice(&self.explicit.end);
            rosenbrock::interpolate(&self.y, stages, &mut self.dense.coefficients);
            self.y.copy_from_slice(&stages.end);
        }
        Some(error)
    }

    /// Moves time on, and chooses the next length; it does not grow after a trial that failed.
    fn keep(&mut self, error: f64, had_failed: bool) {
        self.before = self.time;
        self.time += self.h;
        let error = error.max(1e-10);
        let (proportional, integral) = (self.exponent() - 0.75 * BETA, BETA);
        let factor = SAFETY * elementary::pow(error, -proportional) * elementary::pow(self.last_error, integral);
        self.last_error = error.max(1e-4);
        self.h *= factor.clamp(SHORTER, if had_failed { 1.0 } else { LONGER });
    }

    fn watch(&mut self, stiffness: f64) {
        if stiffness > STABLE {
            self.cleared = 0;
            self.suspicion += 1;
            if self.suspicion == STIFF_STEPS {
                self.method = Method::Implicit;
            }
        } else {
            self.cleared += 1;
            if self.cleared == CLEARING_STEPS {
                self.suspicion = 0;
            }
        }
    }

    /// A first length by the size of the rates and how fast they change (Hairer, Nørsett & Wanner 1993, II.4).
    fn first_length(&mut self, flow: &mut dyn Flow) -> f64 {
        let norm =
            |v: &mut dyn Iterator<Item = f64>| (v.map(|v| v * v).sum::<f64>() / self.y.len().max(1) as f64).sqrt();
        let allowed: Vec<f64> = self.y.iter().zip(&self.tolerance).map(|(y, t)| t.allows(*y, *y)).collect();
        let speed = norm(&mut self.rates.iter().zip(&allowed).map(|(f, a)| f / a));
        let size = norm(&mut self.y.iter().zip(&allowed).map(|(y, a)| y / a));
        let guess = if speed > 1e-10 && size > 1e-5 { 0.01 * size / speed } else { 1e-6 };
        let guess = guess.clamp(1e-100, 1e100);
        let beyond: Vec<f64> = self.y.iter().zip(&self.rates).map(|(y, f)| y + self.h * guess * f).collect();
        let mut there = vec![0.0; self.y.len()];
        if !flow.rates(&beyond, &mut there) {
            return guess;
        }
        let bend = norm(&mut there.iter().zip(&self.rates).zip(&allowed).map(|((a, b), s)| (a - b) / s)) / guess;
        let steepest = speed.max(bend);
        let length = if steepest <= 1e-15 {
            (guess * 1e-3).max(1e-6)
        } else {
            elementary::pow(0.01 / steepest, self.exponent())
        };
        (100.0 * guess).min(length)
    }
}
