//! How the state answers to lasting presses.

use crate::num::dense::{inverse_unless, norm_one};

use super::NetEffects;
use super::setting::Setting;

/// Condition times rounding beyond which not one digit of the inverse means anything.
const FEWEST_DIGITS: f64 = 0.1;

/// What is inverted, counted in units of the state: S⁻¹MS with M = −A, for a map I − A, S the state (1 for the absent).
pub(super) struct Press {
    n: usize,
    scale: Vec<f64>,
    /// (S⁻¹MS)⁻¹, row by row.
    inverse: Vec<f64>,
    /// ‖·‖₁ of S⁻¹MS times that of its inverse, couplings to the absent left out.
    condition: f64,
}

impl Press {
    /// Among some species; `None` where M is singular.
    pub(super) fn new(setting: &Setting<'_>, species: &[usize], stop: &dyn Fn() -> bool) -> Option<Self> {
        let n = species.len();
        let is_present: Vec<bool> = species.iter().map(|i| setting.present.contains(i)).collect();
        let scale: Vec<f64> =
            species.iter().zip(&is_present).map(|(&i, &there)| if there { setting.state[i] } else { 1.0 }).collect();
        let own = f64::from(u8::from(setting.step.is_some()));
        let mut scaled = setting.block(species);
        for (k, entry) in scaled.iter_mut().enumerate() {
            let (i, j) = (k / n, k % n);
            *entry = if i == j { own - *entry } else { -*entry * (scale[j] / scale[i]) };
        }
        let mut inverse = inverse_unless(&scaled, n, stop)?;
        let condition = {
            let [matrix, inverse] = [&scaled, &inverse].map(|matrix| norm_one(&decoupled(matrix, &is_present), n));
            matrix * inverse
        };
        // −0 has no meaning here.
        for entry in &mut inverse {
            *entry += 0.0;
        }
        condition.is_finite().then_some(Self { n, scale, inverse, condition })
    }

    /// Whether fewer than half of the digits are left.
    pub(super) fn is_nearly_singular(&self) -> bool {
        self.condition * f64::EPSILON > f64::EPSILON.sqrt()
    }

    /// M⁻¹ b.
    pub(super) fn answer(&self, press: &[f64]) -> Vec<f64> {
        let scaled: Vec<f64> = press.iter().zip(&self.scale).map(|(b, s)| b / s).collect();
        let row = |(row, s): (&[f64], &f64)| s * row.iter().zip(&scaled).map(|(a, b)| a * b).sum::<f64>();
        self.inverse.chunks_exact(self.n.max(1)).zip(&self.scale).map(row).collect()
    }

    fn effects(self) -> Option<NetEffects> {
        if self.condition * f64::EPSILON > FEWEST_DIGITS {
            return None;
        }
        let n = self.n;
        let entry = |k: usize| self.inverse[k] * (self.scale[k / n] / self.scale[k % n]);
        let matrix: Vec<f64> = (0..n * n).map(entry).collect();
        let nearly_singular = self.is_nearly_singular();
        let effects = NetEffects { matrix, condition: self.condition, nearly_singular };
        effects.matrix.iter().all(|x| x.is_finite()).then_some(effects)
    }
}

/// The matrix as it is when the absent are vanishingly few: what they do to those present does not count. Only where those
/// present do nothing to the absent, so that the inverse is that of the rest.
fn decoupled(matrix: &[f64], is_present: &[bool]) -> Vec<f64> {
    let n = is_present.len();
    let couples = |k: usize, from: bool| is_present[k % n] == from && is_present[k / n] != from;
    if (0..n * n).any(|k| couples(k, true) && matrix[k] != 0.0) {
        return matrix.to_vec();
    }
    (0..n * n).map(|k| if couples(k, false) { 0.0 } else { matrix[k] }).collect()
}

/// −A⁻¹, for a map (I − A)⁻¹ (Bender, Case & Gilpin 1984; Yodzis 1988), over all species.
///
/// `None` where A (I − A) is singular, but for rounding.
pub(super) fn net_effects(setting: &Setting<'_>, stop: &dyn Fn() -> bool) -> Option<NetEffects> {
    let all: Vec<usize> = (0..setting.n).collect();
    Press::new(setting, &all, stop)?.effects()
}
