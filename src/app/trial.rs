//! Parameters as values are tried: in which order they stand, what each is, by how much it is stepped.
//!
//! What a key does to them is in `update`. To try another kind of change, begin at [`Study::tried_value`].

use super::study::{Slot, Study};
use crate::analysis::field::nearest;
use crate::model::{Parameter, ParameterId};

/// Fine steps in a coarse one.
pub const COARSE: f64 = 10.0;
/// Fine steps across the range, or to zero where there is no range.
const STEPS: f64 = 100.0;
/// The step of a parameter that is 0 and has no range: nothing says how large it is.
const STEP_OF_ZERO: f64 = 0.01;

impl Study {
    /// All parameters, first those that management can set.
    pub fn parameters(&self) -> Vec<ParameterId> {
        let all = || self.model().parameters.iter().enumerate();
        let of = |control: bool| all().filter(move |(_, one)| one.control == control).map(|(k, _)| ParameterId(k));
        of(true).chain(of(false)).collect()
    }

    /// The one that is selected.
    pub fn parameter(&self) -> Option<(ParameterId, &Parameter)> {
        let id = *self.parameters().get(self.parameter)?;
        Some((id, self.model().parameters.get(id.0)?))
    }

    /// The scenario of the file that values are set over: that of the slot that is looked at.
    pub fn base(&self) -> usize {
        if self.is_tried(self.current) { self.tried.now.base } else { self.slot().map_or(0, |slot| slot.scenario) }
    }

    /// A parameter's value under a scenario of the file; nothing where the scenario has none that is finite.
    pub fn own_value(&self, scenario: usize, id: ParameterId) -> Option<f64> {
        self.model().values(scenario, &self.world.set).ok()?.get(id.0).copied()
    }

    /// The value that is tried over the scenario that is looked at.
    pub fn tried_value(&self, id: ParameterId) -> Option<f64> {
        let now = &self.tried.now;
        let found = now.values.iter().find(|(other, _)| *other == id).map(|(_, value)| *value);
        found.filter(|_| now.base == self.base())
    }

    /// The tried value, else the scenario's own.
    pub fn value(&self, id: ParameterId) -> Option<f64> {
        self.tried_value(id).or_else(|| self.own_value(self.base(), id))
    }

    /// The slot of the file's scenario that values are tried over.
    pub fn base_slot(&self) -> Option<usize> {
        let base = self.tried.now.base;
        (0..self.of_file()).find(|&slot| self.slots.get(slot).is_some_and(|slot| slot.scenario == base))
    }

    /// Whether what was found in a slot is of the values that are tried now; in those of the file it always is.
    pub fn is_of_now(&self, slot: &Slot) -> bool {
        slot.is_fresh() && (slot.world == self.world || slot.world.edition == self.tried.edition)
    }

    /// The slot of the tried values, once it is ready.
    pub fn tried_slot(&self) -> Option<usize> {
        let slot = self.of_file();
        (slot < self.slots.len()).then_some(slot)
    }
}

/// The fine step: a hundredth of the range, else of the value, rounded up to 1, 2 or 5 times a power of ten.
pub fn step(parameter: &Parameter) -> f64 {
    let width = parameter.range.as_ref().map_or(parameter.value.abs(), |range| range.value[1] - range.value[0]);
    let wanted = if width > 0.0 && width.is_finite() { width / STEPS } else { STEP_OF_ZERO };
    let decade = 10f64.powf(wanted.log10().floor());
    // A hundredth of 0.5 is not quite 0.005.
    let is_enough = |step: &f64| *step >= wanted * (1.0 - 1e-9);
    [1.0, 2.0, 5.0, 10.0].map(|step| step * decade).into_iter().find(is_enough).unwrap_or(decade)
}

/// How far steps may go from a value: to the ends of the range, without one not through zero; never past a limit.
pub fn reach(parameter: &Parameter, value: f64) -> [f64; 2] {
    let [low, high] = match &parameter.range {
        Some(range) => range.value,
        None if parameter.value > 0.0 => [0.0, f64::MAX],
        None if parameter.value < 0.0 => [f64::MIN, 0.0],
        None => [f64::MIN, f64::MAX],
    };
    // A value that was typed may lie outside; steps then lead back.
    let low = low.min(value).max(parameter.min.unwrap_or(f64::MIN));
    let high = high.max(value).min(parameter.max.unwrap_or(f64::MAX));
    [low, high]
}

/// A value without the digits that adding steps leaves: a thousandth of the step is kept.
pub fn neat(value: f64, step: f64) -> f64 {
    let decimals = (3.0 - step.log10().floor()).clamp(0.0, 300.0);
    let text = format!("{value:.*}", nearest(decimals, 300));
    text.parse().unwrap_or(value) + 0.0
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn sums_of_steps_are_neat() {
        for (value, step, expected) in [
            (0.1 + 0.2, 0.1, 0.3),
            (0.35 + 0.002, 0.002, 0.352),
            (1.0 - 0.05, 0.05, 0.95),
            (-0.01 + 0.01, 0.01, 0.0),
            (1.234_567_8, 0.01, 1.234_57),
            (3e-12 + 1e-13, 1e-13, 3.1e-12),
            (2e9 + 1e7, 1e7, 2.01e9),
        ] {
            assert_eq!(neat(value, step), expected, "{value:e} in steps of {step:e}");
            assert!(neat(value, step).is_sign_positive());
        }
    }
}
