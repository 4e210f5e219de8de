//! Numbers for people: rounded in this one place, to significant digits. Files get exact numbers instead.

/// Digits that a number for people has at least.
const DIGITS: i32 = 4;

/// Exponents of ten of the numbers that are written out; others get a power of ten.
const WRITTEN_OUT: std::ops::RangeInclusive<i32> = -4..=6;

/// A number to four significant digits, all digits before the point kept: `80.00`, `0.01235`, `123457`, `1.235e-9`.
///
/// Zero has no minus; what is not a finite number is said in words.
#[must_use]
pub fn human(x: f64) -> String {
    if x.is_nan() {
        return "not a number".to_owned();
    }
    if x.is_infinite() {
        return if x > 0.0 { "unbounded" } else { "unbounded below" }.to_owned();
    }
    if x == 0.0 {
        return "0".to_owned();
    }
    let scientific = format!("{x:.*e}", (DIGITS - 1) as usize);
    let exponent = exponent(&scientific);
    if WRITTEN_OUT.contains(&exponent) {
        format!("{x:.*}", usize::try_from(DIGITS - 1 - exponent).unwrap_or(0))
    } else {
        scientific
    }
}

/// As [`human`], but never above `x`.
#[must_use]
pub fn human_below(x: f64) -> String {
    let text = human(x);
    if text.parse().is_ok_and(|shown: f64| shown > x) { human(x - unit(x)) } else { text }
}

/// As [`human`], but never below `x`.
#[must_use]
pub fn human_above(x: f64) -> String {
    let text = human(x);
    if text.parse().is_ok_and(|shown: f64| shown < x) { human(x + unit(x)) } else { text }
}

/// An upper bound of a size that is not negative, to one digit and never below it: `3e-16`; 0 is `0`.
#[must_use]
pub fn bound(x: f64) -> String {
    if x == 0.0 || !x.is_finite() {
        return human(x);
    }
    let text = format!("{x:.0e}");
    let is_enough = text.parse().is_ok_and(|shown: f64| shown >= x);
    if is_enough { text } else { format!("{:.0e}", x + power(exponent(&text))) }
}

/// One in the last place that [`human`] shows.
fn unit(x: f64) -> f64 {
    let exponent = exponent(&format!("{x:e}"));
    let last = exponent - DIGITS + 1;
    power(if WRITTEN_OUT.contains(&exponent) { last.min(0) } else { last })
}

/// A power of ten, read from text because `powi` is 0 where the power is subnormal.
fn power(exponent: i32) -> f64 {
    format!("1e{exponent}").parse().unwrap_or(f64::INFINITY)
}

/// The exponent of a number in scientific form.
fn exponent(scientific: &str) -> i32 {
    scientific.split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_for_people() {
        for (x, text) in [
            (0.0, "0"),
            (-0.0, "0"),
            (80.0, "80.00"),
            (-80.0, "-80.00"),
            (312.46, "312.5"),
            (9.9996, "10.00"),
            (0.012_345_6, "0.01235"),
            (0.000_123_449, "0.0001234"),
            (0.000_012_345_6, "1.235e-5"),
            (123_456.7, "123457"),
            (9_999_999.0, "1.000e7"),
            (12_345_678.0, "1.235e7"),
            (-2.4e-18, "-2.400e-18"),
            (f64::MIN_POSITIVE, "2.225e-308"),
            (f64::NAN, "not a number"),
            (f64::INFINITY, "unbounded"),
            (f64::NEG_INFINITY, "unbounded below"),
        ] {
            assert_eq!(human(x), text, "{x:e}");
        }
    }

    #[test]
    fn bounds_are_rounded_outward() {
        for (x, text) in [(0.0, "0"), (2e-16, "2e-16"), (2.01e-16, "3e-16"), (9.5e-16, "1e-15"), (9.1, "1e1")] {
            assert_eq!(bound(x), text, "{x:e}");
        }
        let mut x = 1.234_567e-320;
        while x < 1e300 {
            for x in [x, -x] {
                let read = |text: String| text.parse::<f64>().unwrap_or(f64::NAN);
                assert!(read(human_below(x)) <= x && x <= read(human_above(x)), "{x:e}");
                assert!(read(bound(x.abs())) >= x.abs(), "{x:e}");
            }
            x *= 3.7;
        }
    }
}
