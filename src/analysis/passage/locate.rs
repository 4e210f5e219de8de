//! Where a number changes sign along a step.

/// Evaluations of a search.
const MOST: usize = 40;

/// Relative width at which a place is known.
const KNOWN: f64 = 1e-12;

/// A place between 0 and `length` where a number is 0 that is `first` at 0 and of the other sign at `length`; false
/// position with the weight of a side that stays halved (the Illinois rule; Dowell & Jarratt 1971, from memory). The last
/// evaluation is at the place. `None` where it cannot be evaluated on the way, or has no other sign.
pub(in crate::analysis) fn crossing(at: &mut dyn FnMut(f64) -> Option<f64>, first: f64, length: f64) -> Option<f64> {
    let (mut low, mut high) = ((0.0, first), (length, at(length)?));
    if first == 0.0 {
        at(0.0)?;
        return Some(0.0);
    }
    if high.1 == 0.0 {
        return Some(high.0);
    }
    if low.1.signum() == high.1.signum() {
        return None;
    }
    let mut place = high.0;
    for _ in 0..MOST {
        place = high.0 - high.1 * (high.0 - low.0) / (high.1 - low.1);
        let value = at(place)?;
        if value == 0.0 || (high.0 - low.0).abs() <= KNOWN * length {
            break;
        }
        if value.signum() == high.1.signum() {
            low.1 *= 0.5;
        } else {
            low = high;
        }
        let is_settled = (place - high.0).abs() <= KNOWN * length;
        high = (place, value);
        if is_settled {
            break;
        }
    }
    Some(place)
}

#[cfg(test)]
mod tests {
    use super::crossing;

    #[test]
    fn zeros_are_found_to_the_last_digits() {
        let check = |number: fn(f64) -> f64, length: f64, expected: f64| {
            let mut last = f64::NAN;
            let mut at = |x: f64| {
                last = x;
                Some(number(x))
            };
            let place = crossing(&mut at, number(0.0), length).unwrap();
            assert!((place - expected).abs() <= 1e-11 * length, "{place} for {expected}");
            assert_eq!(place, last);
        };
        check(|x| x * x - 2.0, 2.0, 2f64.sqrt());
        check(|x| 1.0 - x.exp(), 3.0, 0.0);
        check(|x| x.powi(9) - 0.5, 1.0, 0.5f64.powf(1.0 / 9.0));
        check(|x| 0.5 - x, 0.5, 0.5);
        assert_eq!(crossing(&mut |x| Some(x + 1.0), 1.0, 1.0), None);
        assert_eq!(crossing(&mut |_| None, 1.0, 1.0), None);
    }
}
