//! What part of a plane is worth showing: the search box is often a thousand times too wide.

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
}
