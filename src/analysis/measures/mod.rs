//! What a linearisation means for the community: how fast it returns, how far a knock grows, who can invade, who answers
//! to whom, what it yields. One quantity a file; [`Measures`] holds them all.
//!
//! A = the Jacobian at the equilibrium, rows and columns in species order. Every quantity has its formula, unit and source
//! beside its function; what does not exist, or could not be found within the bounds on the work, is `None`, never NaN. All
//! numbers here are numerical: none of them is proved. [`measure`] does one equilibrium; a [`Meter`] keeps what all
//! equilibria of a scenario share. To add a quantity: a field of [`Measures`], a file, a line in `Meter::linear`.

mod amplification;
mod elasticity;
mod invasion;
mod leading;
mod meter;
mod press;
mod reactivity;
mod setting;
mod stochastic;
mod values;
mod yields;

use crate::model::{ParameterId, SpeciesId};

pub use meter::{Meter, measure};

/// The largest growth of a deviation, and when.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Amplification {
    /// max over t ≥ 0 of ‖exp(At)‖₂, for a map max over k of ‖Aᵏ‖₂; no unit, at least 1.
    pub factor: f64,
    /// When it is reached, in time units; 0 where nothing grows.
    pub time: f64,
}

/// How the state answers to lasting presses.
#[derive(Clone, Debug, PartialEq)]
pub struct NetEffects {
    /// Row i, column j: −A⁻¹, for a map (I − A)⁻¹; the long-run answer of i to a sustained press on j. Row by row.
    ///
    /// Units of i per unit of j and time (for a map, per unit of j added at each step). Column j of an absent species is
    /// the answer to its being brought in: where it can invade, the state so answered has a negative abundance of it.
    pub matrix: Vec<f64>,
    /// Condition number of what was inverted, in the norm of column sums, abundances being counted in units of the state
    /// and the absent as vanishingly few; no unit.
    pub condition: f64,
    /// Whether the condition leaves fewer than half of the digits.
    pub nearly_singular: bool,
}

/// Elasticities to one parameter: relative change for a relative change of the parameter.
#[derive(Clone, Debug, PartialEq)]
pub struct Elasticity {
    /// The parameter.
    pub parameter: ParameterId,
    /// (p/x) dx/dp of each species; `None` where the state or the parameter is 0.
    pub state: Vec<Option<f64>>,
    /// (p/μ) dμ/dp of the leading eigenvalue's real part (for a map, of its modulus), the shift of the state included;
    /// `None` where it is not simple, or 0.
    pub leading: Option<f64>,
}

/// A population of several stages, ages, sexes or patches.
#[derive(Clone, Debug, PartialEq)]
pub struct Group {
    /// Its name.
    pub name: String,
    /// Its stages.
    pub members: Vec<SpeciesId>,
    /// Sum of their abundances.
    pub total: f64,
    /// Where it is absent: leading eigenvalue of its block, as a rate of growth when rare, per time unit; `None` also where
    /// others feed it.
    pub invasion: Option<f64>,
}

/// What one harvest yields at the equilibrium.
#[derive(Clone, Debug, PartialEq)]
pub struct HarvestYield {
    /// The harvest's name.
    pub name: String,
    /// Amount of each species that it takes or counts, per time unit (for a map per step); without those that have no value
    /// at the equilibrium.
    pub amounts: Vec<(SpeciesId, f64)>,
    /// Prices times amounts less cost, per time unit (for a map per step); `None` where neither
    /// price nor cost is given, or a part has no value.
    pub value: Option<f64>,
}

/// Everything measured at one equilibrium.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Measures {
    /// −max Re λ; for a map −ln|λ₁|/T. Per time unit, signed.
    pub resilience: Option<f64>,
    /// Its reciprocal, where positive. Time units.
    pub return_time: Option<f64>,
    /// 2π/|Im λ₁|; for a map 2πT/|arg λ₁|. Time units; `None` where nothing turns.
    pub period: Option<f64>,
    /// −Re λ₁/|λ₁|; for a map −ln|λ₁|/|ln λ₁|. No unit.
    pub damping_ratio: Option<f64>,
    /// Fastest growth of a deviation at once, in absolute abundances. Per time unit.
    pub reactivity: Option<f64>,
    /// The same in proportional deviations of those present; `None` where nobody is. Per time unit.
    pub reactivity_proportional: Option<f64>,
    /// The largest growth of a deviation; `None` where there is none.
    pub amplification: Option<Amplification>,
    /// Reactivity of those present alone, where others are absent.
    pub reactivity_present: Option<f64>,
    /// Amplification among those present alone, where others are absent.
    pub amplification_present: Option<Amplification>,
    /// Growth when rare of each absent species that is its own population; per time unit.
    pub invasion: Vec<(SpeciesId, Option<f64>)>,
    /// Populations of several stages.
    pub groups: Vec<Group>,
    /// Answers to lasting presses.
    pub net_effects: Option<NetEffects>,
    /// One entry a parameter that the equations use.
    pub elasticities: Vec<Elasticity>,
    /// Stationary covariance under white noise of unit intensity on each species present, row by row over all species.
    pub covariance: Option<Vec<f64>>,
    /// 1/(2 ‖(A⊗I + I⊗A)⁻¹‖₂) among those present: 1 over twice the largest stationary covariance, in the norm of Frobenius,
    /// that noise of unit covariance in that norm gives; for a map 1/(2T ‖(I − A⊗A)⁻¹‖₂). Per time unit.
    pub invariability: Option<f64>,
    /// One entry a harvest in force, with or without a linearisation.
    pub yields: Vec<HarvestYield>,
}
