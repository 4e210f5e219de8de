//! How much the state varies under noise that never ends.

use crate::num::stationary::{self, Time};

use super::Measures;
use super::setting::Setting;

/// Beyond this order the covariance is a table that nobody reads, and takes seconds.
const LARGEST: usize = 40;

/// Stationary covariance C under white noise of unit intensity on each species present, and invariability.
///
/// AC + CAᵀ + I = 0, for a map C = ACAᵀ + I with noise of unit variance at each step, among those present; 0 for the
/// absent. Squared units of abundance. Invariability I_S = 1/(2 ‖(A⊗I + I⊗A)⁻¹‖₂), per time unit (Arnoldi, Loreau &
/// Haegeman 2016): half the worst noise-to-variance ratio over all covariances of the noise, which for one species is its
/// resilience. For a map 1/(2T ‖(I − A⊗A)⁻¹‖₂): noise of unit intensity per time unit adds T at each step, and the two
/// agree as T goes to 0. Neither where the state is not stable, where nobody is present, or beyond 40 species (the
/// invariability: 12).
pub(super) fn fill(measures: &mut Measures, setting: &Setting<'_>, stop: &dyn Fn() -> bool) {
    let (n, present) = (setting.n, &setting.present);
    let m = present.len();
    if !setting.is_stable() || m == 0 || m > LARGEST {
        return;
    }
    let block = setting.block(present);
    let time = if setting.step.is_some() { Time::Steps } else { Time::Runs };
    measures.covariance = stationary::covariance(&block, m, &vec![1.0; m], time, stop).map(|small| {
        let mut whole = vec![0.0; n * n];
        (0..m * m).for_each(|k| whole[present[k / m] * n + present[k % m]] = small[k]);
        whole
    });
    let response = stationary::response(&block, m, time, stop);
    measures.invariability = response.map(|response| setting.per_time(0.5 / response)).filter(|x| x.is_finite());
}
