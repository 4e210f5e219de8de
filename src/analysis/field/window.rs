//! What part of a plane is worth showing: the search box is often a thousand times too wide.

use super::frame::DEEPEST;

/// Room beyond the outermost state that matters; a share of its abundance, no unit.
const MARGIN: f64 = 0.15;

/// The side pair of a window along one species: from the box's lower side to a little beyond the largest of `states`,
/// rounded up, never beyond the box; the box itself where no state is above its lower side.
pub fn around([lower, upper]: [f64; 2], states: impl Iterator<Item = f64>) -> [f64; 2] {
    let largest = states.filter(|x| x.is_finite()).fold(lower, f64::max);
    if largest <= lower {
        return [lower, upper];
    }
    let high = rounded(largest + MARGIN * (largest - lower));
    [lower, if high > lower { high.min(upper) } else { upper }]
}

/// How far below the smallest abundance that matters a logarithmic axis begins, as a share of it; no unit.
const BELOW: f64 = 0.1;

/// Where a logarithmic axis begins whose states are all absent, as a share of its upper side; no unit.
const EMPTY: f64 = 1e-3;

/// The side pair of a window with a logarithmic axis: the upper side as [`around`] has it, the lower a tenth of the
/// smallest of `states` above 0, rounded down to a power of ten, but at most 12 decades below the upper.
///
/// Never below the box's lower side where that is above 0. A thousandth of the upper side where no state is above 0.
pub fn above_zero([lower, upper]: [f64; 2], states: impl Iterator<Item = f64> + Clone) -> [f64; 2] {
    let [_, high] = around([lower, upper], states.clone());
    let smallest = states.filter(|x| *x > 0.0 && x.is_finite()).fold(f64::INFINITY, f64::min);
    let low = if smallest < high { BELOW * smallest } else { EMPTY * high };
    let decade = 10f64.powf((low * (1.0 + f64::EPSILON)).log10().floor());
    let low = decade.max(lower).max(DEEPEST * high).max(f64::MIN_POSITIVE);
    [if low < high { low } else { EMPTY * high }, high]
}

/// The smallest number of one or two digits that is not below `x`; steps are 1, 2 or 5 in the second digit. 0 stays 0.
///
/// Not below also where x is near the largest number: then it is x itself.
pub fn rounded(x: f64) -> f64 {
    if !(x > 0.0 && x.is_finite()) {
        return 0.0;
    }
    let decade = 10f64.powf(x.log10().floor());
    let step = match x / decade {
        digits if digits <= 2.0 => decade / 10.0,
        digits if digits <= 5.0 => decade / 5.0,
        _ => decade / 2.0,
    };
    let up = (x / step).ceil() * step;
    if up.is_finite() && up >= x { up } else { x }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rounding_goes_up_by_little() {
        for (x, up) in [(0.0, 0.0), (92.0, 95.0), (1.0, 1.0), (1.11, 1.2), (2.3, 2.4), (6.1, 6.5), (99.0, 100.0)] {
            assert!((rounded(x) - up).abs() < 1e-12, "{x}: {}", rounded(x));
        }
        let mut x = 1e-300;
        while x < 1e300 {
            let up = rounded(x);
            assert!(x <= up && up <= 1.15 * x, "{x}: {up}");
            x *= 1.7;
        }
        assert_eq!(rounded(f64::MAX), f64::MAX);
    }

    #[test]
    fn a_window_holds_what_matters_and_stays_in_the_box() {
        let check = |sides: [f64; 2], states: &[f64], expected: [f64; 2]| {
            assert_eq!(around(sides, states.iter().copied()), expected);
        };
        check([0.0, 1e6], &[0.0, 100.0, 40.0], [0.0, 120.0]);
        check([0.0, 110.0], &[100.0], [0.0, 110.0]);
        check([0.0, 7.0], &[0.0], [0.0, 7.0]);
        check([0.0, 7.0], &[], [0.0, 7.0]);
        check([0.0, 7.0], &[f64::NAN, 900.0], [0.0, 7.0]);
        check([5.0, 1e6], &[105.0], [5.0, 120.0]);
    }

    #[test]
    fn a_logarithmic_window_begins_below_the_smallest_that_is_there() {
        let check = |sides: [f64; 2], states: &[f64], expected: [f64; 2]| {
            let [low, high] = above_zero(sides, states.iter().copied());
            let is_near = |a: f64, b: f64| (a / b - 1.0).abs() < 1e-12;
            assert!(is_near(low, expected[0]) && is_near(high, expected[1]), "{low}, {high}, not {expected:?}");
        };
        check([0.0, 1e6], &[0.0, 100.0, 40.0], [1.0, 120.0]);
        check([0.0, 1e6], &[0.0, 100.0, 10.0], [1.0, 120.0]);
        check([0.0, 1e6], &[100.0, 1e-30], [1e-10 * 1.2, 120.0]);
        check([5.0, 1e6], &[105.0, 20.0], [5.0, 120.0]);
        check([0.0, 7.0], &[0.0], [1e-3, 7.0]);
        check([0.0, 7.0], &[], [1e-3, 7.0]);
    }
}
