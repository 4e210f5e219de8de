//! How fast a deviation can grow at once.

use crate::num::eigen;

use super::setting::Setting;

/// Largest eigenvalue of (A + Aᵀ)/2; for a map ln σ_max(A)/T (Neubert & Caswell 1997; Caswell & Neubert 2005). Per time
/// unit.
///
/// Of all species, absent ones included. `None` where there is none to speak of: a map with A = 0.
pub(super) fn absolute(setting: &Setting<'_>) -> Option<f64> {
    of(setting.jacobian, setting.n, setting.step)
}

/// The same among those present, where others are absent.
pub(super) fn of_present(setting: &Setting<'_>) -> Option<f64> {
    setting.is_border().then(|| of(&setting.block(&setting.present), setting.present.len(), setting.step))?
}

/// The same of A' = D⁻¹AD over those present, D = diag(x): deviations as shares of the state, so that no unit of abundance
/// matters. `None` where nobody is present.
pub(super) fn proportional(setting: &Setting<'_>) -> Option<f64> {
    let x = |place: usize| setting.state[setting.present[place]];
    let m = setting.present.len();
    let mut block = setting.block(&setting.present);
    block.iter_mut().enumerate().for_each(|(k, a)| *a *= x(k % m) / x(k / m));
    of(&block, m, setting.step)
}

fn of(entries: &[f64], n: usize, step: Option<f64>) -> Option<f64> {
    if n == 0 || entries.iter().any(|a| !a.is_finite()) {
        return None;
    }
    let rate = match step {
        None => eigen::largest_symmetric(entries, n).ok()?,
        Some(step) => eigen::largest_singular(entries, n).ok()?.ln() / step,
    };
    rate.is_finite().then_some(rate)
}
