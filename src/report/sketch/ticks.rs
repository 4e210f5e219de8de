//! Round numbers along an axis, and where their labels stand so that none touches another.

use crate::analysis::field::nearest;

/// A number on an axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Tick {
    /// The column or row that it marks.
    pub place: usize,
    /// What it reads.
    pub label: String,
}

/// Numbers from here on are written with a power of ten.
const LARGE: f64 = 1e6;
/// Steps below this as well.
const SMALL: f64 = 1e-4;

/// Ticks of a horizontal axis of so many columns: as many round numbers as can be told apart at a glance.
pub fn across(sides: [f64; 2], columns: usize) -> Vec<Tick> {
    (2..=columns / 6).rev().map(|most| ticks(sides, columns, most)).find(|ticks| are_apart(ticks)).unwrap_or_default()
}

/// Ticks of a vertical axis of so many rows, with labels of at most `width` characters.
pub fn upwards(sides: [f64; 2], rows: usize, width: usize) -> Vec<Tick> {
    let mut ticks = ticks(sides, rows, (rows / 3).max(2));
    ticks.retain(|tick| tick.label.len() <= width);
    ticks
}

/// The multiples of a step of 1, 2 or 5 times a power of ten that lie between two sides, at most `most` of them; none
/// where the sides are too close to tell them apart.
pub fn round_numbers([low, high]: [f64; 2], most: usize) -> (f64, Vec<f64>) {
    let width = high - low;
    if !(width > 0.0 && width.is_finite()) || most == 0 {
        return (1.0, Vec::new());
    }
    let decade = (width / most as f64).log10().floor();
    // From a step that is surely too small upwards; the fifth holds ten times as many as the first.
    let steps = [1.0, 2.0, 5.0, 10.0, 20.0].map(|step| step * 10f64.powf(decade));
    for step in steps {
        let (first, last) = ((low / step).ceil(), (high / step).floor());
        let count = last - first + 1.0;
        if step > 0.0 && count <= most as f64 && first.abs().max(last.abs()) < 1e12 {
            let numbers = (0..nearest(count, most)).map(|k| (first + k as f64) * step + 0.0);
            return (step, numbers.collect());
        }
    }
    (1.0, Vec::new())
}

fn ticks(sides: [f64; 2], cells: usize, most: usize) -> Vec<Tick> {
    let (step, numbers) = round_numbers(sides, most);
    let place = |x: f64| nearest((x - sides[0]) / (sides[1] - sides[0]) * (cells - 1) as f64, cells - 1);
    numbers.into_iter().map(|x| Tick { place: place(x), label: label(x, step) }).collect()
}

/// A multiple of a step, to as many digits as the step has.
fn label(x: f64, step: f64) -> String {
    if x == 0.0 {
        return "0".to_owned();
    }
    // More digits than this are rounding.
    let decimals = |exponent: f64| nearest(exponent, 15);
    let last = step.log10().floor();
    if x.abs() >= LARGE || step < SMALL {
        let first = x.abs().log10().floor();
        return format!("{x:.*e}", decimals(first - last));
    }
    format!("{x:.*}", decimals(-last))
}

/// Where a label begins that is to stand in the middle below its mark.
pub(super) fn start(tick: &Tick) -> usize {
    tick.place.saturating_sub(tick.label.len() / 2)
}

/// Whether labels in one line have two blanks between them.
fn are_apart(ticks: &[Tick]) -> bool {
    ticks.windows(2).all(|pair| start(&pair[0]) + pair[0].label.len() + 2 <= start(&pair[1]))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::num::random::Source;

    #[test]
    fn labels_have_the_digits_of_their_step() {
        for (x, step, text) in [
            (0.0, 0.5, "0"),
            (1.5, 0.5, "1.5"),
            (100.0, 20.0, "100"),
            (0.025, 0.005, "0.025"),
            (2e6, 5e5, "2.0e6"),
            (3e9, 1e9, "3e9"),
            (-4e-7, 2e-7, "-4e-7"),
        ] {
            assert_eq!(label(x, step), text);
        }
    }

    #[test]
    fn ticks_are_round_inside_and_apart() {
        let mut source = Source::new(5);
        for _ in 0..20_000 {
            let size = 10f64.powf(source.between(-12.0, 12.0));
            let low = if source.unit() < 0.5 { 0.0 } else { size * source.between(-3.0, 3.0) };
            let sides = [low, low + size * source.between(0.01, 3.0)];
            let cells = nearest(source.between(8.0, 250.0), 250);
            let (step, numbers) = round_numbers(sides, cells / 3);
            let digits = step / 10f64.powf(step.log10().floor());
            assert!([1.0, 2.0, 5.0, 10.0].iter().any(|d| (digits / d - 1.0).abs() < 1e-9), "step {step}");
            assert!(!numbers.is_empty() && numbers.len() <= cells / 3, "{sides:?}: {numbers:?}");
            let slack = 1e-12 * sides[0].abs().max(sides[1].abs());
            for x in numbers {
                assert!(sides[0] - slack <= x && x <= sides[1] + slack, "{x} in {sides:?}");
                assert!(((x / step) - (x / step).round()).abs() < 1e-6, "{x} by {step}");
            }
            let ticks = across(sides, cells);
            assert!(are_apart(&ticks) && ticks.iter().all(|tick| tick.place < cells), "{ticks:?}");
            let up = upwards(sides, cells, 7);
            assert!(up.windows(2).all(|pair| pair[0].place + 2 <= pair[1].place), "{up:?}");
            for tick in ticks.iter().chain(&up) {
                let read: f64 = tick.label.parse().unwrap();
                let exact = (read - sides[0]) / (sides[1] - sides[0]) * (cells - 1) as f64;
                assert!((exact - tick.place as f64).abs() < 0.501, "{tick:?} at {exact} in {sides:?}");
            }
        }
    }

    #[test]
    fn an_axis_without_width_has_no_ticks() {
        for sides in [[1.0, 1.0], [0.0, f64::INFINITY], [f64::NAN, 1.0], [2.0, 1.0], [1e15, 1e15 + 0.25]] {
            assert!(across(sides, 80).is_empty() && upwards(sides, 20, 7).is_empty(), "{sides:?}");
        }
    }
}
