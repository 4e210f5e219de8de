//! What the leading eigenvalue alone says: resilience, return time, period, damping ratio.

use std::f64::consts::TAU;

use nalgebra::Complex;

use super::Measures;
use super::setting::Setting;

/// Resilience −Re λ₁, return time 1/resilience (Pimm & Lawton 1977), period 2π/|Im λ₁|, damping ratio −Re λ₁/|λ₁|.
///
/// For a map with step T: −ln|λ₁|/T, its reciprocal, 2πT/|arg λ₁| (2T where λ₁ < 0), −ln|λ₁|/|ln λ₁|. Resilience is signed
/// and, where the leading eigenvalue is critical, exactly 0; the return time is there only where resilience is positive.
/// λ₁ = 0 of a map: no resilience, return time 0. The damping ratio is the engineer's: 1 returns without swinging, 0 swings
/// for ever, below 0 grows; there is none for an eigenvalue at which it would be 0/0.
pub(super) fn fill(measures: &mut Measures, setting: &Setting<'_>) {
    let Some(&leading) = setting.linear.spectrum.values.first() else { return };
    // As an exponent, so that maps and flows read alike.
    let exponent = if setting.step.is_some() { leading.ln() } else { leading };
    let dimensions = setting.linear.dimensions;
    let is_critical = dimensions.unstable == 0 && dimensions.centre > 0;
    let rate = if is_critical { 0.0 } else { 0.0 - exponent.re };
    measures.period = period(leading, setting.step);
    if rate.is_finite() {
        let resilience = setting.per_time(rate);
        measures.resilience = Some(resilience);
        measures.return_time = (resilience > 0.0).then(|| 1.0 / resilience).filter(|time| time.is_finite());
        measures.damping_ratio = Some(rate / exponent.norm()).filter(|ratio| ratio.is_finite());
    } else if leading == Complex::new(0.0, 0.0) {
        measures.return_time = Some(0.0);
    }
}

fn period(leading: Complex<f64>, step: Option<f64>) -> Option<f64> {
    let turning = if step.is_some() { leading.arg().abs() } else { leading.im.abs() };
    let period = TAU / turning * step.unwrap_or(1.0);
    (turning > 0.0 && period.is_finite()).then_some(period)
}
