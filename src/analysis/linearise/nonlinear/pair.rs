//! A pair of eigenvalues on the border: first Lyapunov coefficient, of flows and of maps.
//!
//! With A q = λ q, Aᵀ p = λ̄ p, ⟨p, q⟩ = ⟨q, q⟩ = 1 and ⟨p, v⟩ = Σ p̄ v,
//! flows, λ = iω: l₁ = Re[⟨p, C(q, q, q̄)⟩ − 2⟨p, B(q, A⁻¹B(q, q̄))⟩ + ⟨p, B(q̄, (2iω − A)⁻¹B(q, q))⟩]/(2ω);
//! maps, λ = e^{iθ}: l₁ = Re{e^{−iθ}[⟨p, C(q, q, q̄)⟩ + 2⟨p, B(q, (1 − A)⁻¹B(q, q̄))⟩ + ⟨p, B(q̄, (e^{2iθ} − A)⁻¹B(q, q))⟩]}/2,
//! but at e^{ikθ} = 1, k ≤ 4 (Kuznetsov 2004, eqs. 5.39 and 5.74 from memory). Negative: paths wind inwards. Its sign does
//! not depend on the length of q, which is 1 in the units of the model.

use nalgebra::Complex;

use super::complex::{Scalar, Shifted, Vector, inner, product, quotient};
use super::{Critical, by_sign, open};
use crate::analysis::linearise::place::Border;
use crate::analysis::linearise::{Nonlinear, Test};
use crate::num::interval::Interval;

/// How near λ³ or λ⁴ may be to 1 before the pair counts as strongly resonant; λ and λ² are then no pair.
const RESONANT: f64 = 1e-6;

pub(super) fn judge(critical: &Critical<'_>) -> Nonlinear {
    let proven = critical.is_proven();
    if critical.border == Border::Circle && is_resonant(critical) {
        return open(Test::FirstLyapunov, None);
    }
    match coefficient(critical) {
        Some((l1, _)) => by_sign(l1, Test::FirstLyapunov, proven),
        None => open(Test::FirstLyapunov, None),
    }
}

/// The coefficient, and the sum of the sizes of its terms; `None` also near a strong resonance.
pub(super) fn with_size(critical: &Critical<'_>) -> Option<(Interval, f64)> {
    if critical.border == Border::Circle && is_resonant(critical) { None } else { coefficient(critical) }
}

fn is_resonant(critical: &Critical<'_>) -> bool {
    let Some([re, im]) = critical.on_border() else { return true };
    let value = Complex::new(re.mid(), im.mid());
    (1..=4).any(|k| (value.powi(k) - Complex::new(1.0, 0.0)).norm() <= RESONANT)
}

fn coefficient(critical: &Critical<'_>) -> Option<(Interval, f64)> {
    let n = critical.order();
    let value = critical.on_border()?;
    let [left, right] = critical.vectors()?;
    let shifted = |shift| Shifted { matrix: critical.enclosure, n, shift };
    let at_value = shifted(value);
    let nothing = Vector::real(vec![Interval::ZERO; n]);
    let q = at_value.bordered([&left, &right], &nothing, 1.0, false)?;
    let p = at_value.bordered([&left, &right], &nothing, 1.0, true)?;
    let length = inner(&p, &q);
    let mut forms = critical.forms();
    let on_manifold = |v: &Vector| -> Option<Scalar> { quotient(inner(&p, v), length) };
    let cubic = on_manifold(&forms.cubic(&q)?)?;
    let still = forms.quadratic(&q, &q.conjugate())?;
    let twice = forms.quadratic(&q, &q)?;
    // (A − c)⁻¹ has the sign opposite to that of (c − A)⁻¹, which flows take for the second term only.
    let border = critical.border;
    let [one, double] = match border {
        Border::Axis => [[Interval::ZERO; 2], value.map(|part| part * Interval::point(2.0))],
        Border::Circle => [[Interval::ONE, Interval::ZERO], product(value, value)],
    };
    let slow = shifted(one).solve(&still)?;
    let fast = shifted(double).solve(&twice)?;
    let slow = on_manifold(&forms.quadratic(&q, &slow)?)?;
    let fast = on_manifold(&forms.quadratic(&q.conjugate(), &fast)?)?;
    let two = Interval::point(2.0);
    let sum: Scalar = std::array::from_fn(|k| cubic[k] - two * slow[k] - fast[k]);
    let norm = |z: Scalar| z[0].mag().hypot(z[1].mag());
    let terms = norm(cubic) + 2.0 * norm(slow) + norm(fast);
    Some(match border {
        Border::Axis => (sum[0].div(two * value[1], &mut true), terms / (2.0 * value[1].mid().abs())),
        Border::Circle => (product([value[0], -value[1]], sum)[0] * Interval::point(0.5), 0.5 * terms),
    })
}
