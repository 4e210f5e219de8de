//! How far a deviation can grow before it dies out.

use crate::num::transient::{flow_peak, map_peak};

use super::Amplification;
use super::setting::{Setting, leading_rate};

/// Above this order the search would take seconds.
const LARGEST: usize = 40;

/// Eigenvalues nearer to critical than so many rounding errors of A's size are not taken to attract.
const ROUNDINGS: f64 = 64.0;

/// max over t ≥ 0 of ‖exp(At)‖₂, for a map max over k of ‖Aᵏ‖₂ at kT (Neubert & Caswell 1997).
///
/// Of all species. `None` where the state is not stable, beyond 40 species, and where the maximum was not found within the
/// bounds on the work.
pub(super) fn of_all(setting: &Setting<'_>, stop: &dyn Fn() -> bool) -> Option<Amplification> {
    setting.is_stable().then(|| of(setting.jacobian, setting.n, setting.step, stop))?
}

/// The same among those present, where others are absent; those may well be able to invade.
pub(super) fn of_present(setting: &Setting<'_>, stop: &dyn Fn() -> bool) -> Option<Amplification> {
    if !setting.is_border() {
        return None;
    }
    let m = setting.present.len();
    let block = setting.block(&setting.present);
    let size = block.iter().fold(0.0f64, |largest, a| largest.max(a.abs()));
    let rounding = ROUNDINGS * m as f64 * f64::EPSILON;
    let attracts = match setting.step {
        // Nothing but zeros: gone at the next step.
        Some(_) if size == 0.0 => true,
        Some(step) => leading_rate(&block, m, Some(step)).is_none_or(|rate| rate * step < -rounding * size.max(1.0)),
        None => leading_rate(&block, m, None)? < -rounding * size,
    };
    attracts.then(|| of(&block, m, setting.step, stop))?
}

fn of(entries: &[f64], n: usize, step: Option<f64>, stop: &dyn Fn() -> bool) -> Option<Amplification> {
    if n > LARGEST {
        return None;
    }
    let peak = match step {
        None => flow_peak(entries, n, stop)?,
        Some(_) => map_peak(entries, n, stop)?,
    };
    Some(Amplification { factor: peak.factor, time: peak.time * step.unwrap_or(1.0) })
}
