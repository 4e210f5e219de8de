//! The coefficient of an eigenvalue that is critical by what is known from elsewhere: at a threshold, whose value of the
//! control is f64, the eigenvalue nearest to the border stands for the one on it.

use super::super::classify::Class;
use super::super::place::Border;
use super::super::proof::Proof;
use super::super::{Dimensions, Kind, Lineariser};
use super::{Critical, Numbers, pair, single};
use crate::analysis::equilibria::{Derivative, Equilibrium};
use crate::analysis::subject::Subject;
use crate::expr::tape::written::Written;
use crate::model::ParameterId;
use crate::model::system::Plan;
use crate::num::eigen::spectrum;
use crate::num::interval::Interval;
use nalgebra::Complex;

/// What is critical.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Forced {
    /// An eigenvalue 0, or multiplier 1, whose quadratic coefficient is 0.
    Cubic,
    /// A multiplier −1.
    Flip,
    /// A pair.
    Pair,
}

/// A coefficient of the normal form, in the normalisation of its test.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Coefficient {
    /// Its value; negative where what is born is stable (for a multiplier −1, positive).
    pub value: f64,
    /// Sum of the sizes of its terms: what its value is small or large against.
    pub terms: f64,
    /// Whether all other eigenvalues attract.
    pub others_attract: bool,
}

impl Lineariser {
    /// Compiles a scenario's equations for any value of these parameters; they have no value of account until [`Lineariser::set`].
    pub fn open(subject: &Subject<'_>, parameters: &[ParameterId]) -> Self {
        let mut values = subject.plan.values.clone();
        // Not 0, whatever it is in the scenario: terms of a parameter that is 0 are left out.
        for parameter in parameters {
            values[parameter.0] = 1.0;
        }
        let plan = Plan { values, ..subject.plan.clone() };
        Self::new(&mut Subject { plan: &plan, ..subject.clone() })
    }

    /// Sets one of the parameters that the equations were compiled for any value of; nothing where the value is not finite.
    pub fn set(&mut self, parameter: ParameterId, value: f64) {
        if !value.is_finite() {
            return;
        }
        self.rows.values[parameter.0] = value;
        self.rows.exact[parameter.0] = Interval::point(value);
        self.rows.written[parameter.0] = Written::of(value);
    }

    /// Eigenvalues of the Jacobian at a state, in the contract's order, as computed; `None` where there are none.
    pub fn eigenvalues(&self, state: &[f64]) -> Option<Vec<Complex<f64>>> {
        let mut numbers = self.rows.numbers(state);
        if numbers.iter().any(|entry| !entry.is_finite()) {
            // x g(x) has a derivative at x = 0 where g has none.
            let there = Equilibrium { derivative: Derivative::Missing, ..at_point(state)? };
            numbers = self.rows.enclosure(&there).ok()?.iter().map(|entry| entry.mid()).collect();
        }
        let found = spectrum(&numbers, state.len()).ok()?;
        Some(self.ordered(found).values)
    }

    /// The coefficient at a state at which an eigenvalue of that kind is critical: the nearest to the border. `None` where
    /// there is none such, the rates are not smooth enough, or nothing decides.
    pub fn forced(&self, state: &[f64], which: Forced) -> Option<Coefficient> {
        let n = state.len();
        let enclosure: Vec<Interval> = state.iter().map(|&x| Interval::try_new(x, x)).collect::<Option<_>>()?;
        let equilibrium =
            Equilibrium { state: state.to_vec(), enclosure, proven: false, derivative: Derivative::Exists };
        let enclosure = self.rows.enclosure(&equilibrium).ok().filter(|entries| !entries.is_empty())?;
        let numbers: Vec<f64> = enclosure.iter().map(|entry| entry.mid()).collect();
        let spectrum = self.ordered(spectrum(&numbers, n).ok()?);
        let critical = nearest(&spectrum.values, which, self.border)?;
        let attracts = |&k: &usize| super::super::critical::excess(spectrum.values[k], self.border) < 0.0;
        let others_attract = (0..n).filter(|k| !critical.contains(k)).all(|k| attracts(&k));
        let class = Class {
            kind: if which == Forced::Pair { Kind::Centre } else { Kind::Undecided },
            kind_proven: false,
            stable: None,
            stable_proven: false,
            dimensions: Dimensions { stable: n - critical.len(), centre: critical.len(), unstable: 0 },
            critical,
        };
        let proof = Proof::default();
        let critical = Critical {
            rows: &self.rows,
            numbers: Numbers::AsF64,
            equilibrium: &equilibrium,
            enclosure: &enclosure,
            spectrum: &spectrum,
            proof: &proof,
            class: &class,
            border: self.border,
        };
        let (value, terms) = match which {
            Forced::Cubic => single::cubic_with_size(&critical)?,
            Forced::Flip => single::flip_with_size(&critical)?,
            Forced::Pair => pair::with_size(&critical)?,
        };
        Some(Coefficient { value: value.mid(), terms, others_attract })
    }
}

/// A state as an equilibrium of which nothing is proved; `None` where a number is not finite.
fn at_point(state: &[f64]) -> Option<Equilibrium> {
    let enclosure = state.iter().map(|&x| Interval::try_new(x, x)).collect::<Option<_>>()?;
    Some(Equilibrium { state: state.to_vec(), enclosure, proven: false, derivative: Derivative::Exists })
}

/// Positions of the eigenvalue, or of the pair, that is nearest to where it would be critical.
fn nearest(values: &[Complex<f64>], which: Forced, border: Border) -> Option<Vec<usize>> {
    let target = match (which, border) {
        (Forced::Flip, _) => -1.0,
        (_, Border::Circle) => 1.0,
        (_, Border::Axis) => 0.0,
    };
    let distance = |k: &usize| match which {
        Forced::Pair => super::super::critical::excess(values[*k], border).abs() / values[*k].norm(),
        Forced::Cubic | Forced::Flip => (values[*k].re - target).abs(),
    };
    let is_kind = |k: &usize| if which == Forced::Pair { values[*k].im > 0.0 } else { values[*k].im == 0.0 };
    let first = (0..values.len()).filter(is_kind).min_by(|a, b| distance(a).total_cmp(&distance(b)))?;
    let mate = (0..values.len()).find(|&k| which == Forced::Pair && values[k] == values[first].conj());
    Some(std::iter::once(first).chain(mate).collect())
}
