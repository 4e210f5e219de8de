//! Round numbers along an axis, and where their labels stand so that none touches another.

use crate::analysis::field::{Scale, nearest};

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
pub fn across(sides: [f64; 2], scale: Scale, columns: usize) -> Vec<Tick> {
    choices(sides, scale, columns, columns / 6).find(|ticks| are_apart(ticks)).unwrap_or_default()
}

/// Ticks of a vertical axis of so many rows, with labels of at most `width` characters.
pub fn upwards(sides: [f64; 2], scale: Scale, rows: usize, width: usize) -> Vec<Tick> {
    let most = (rows / 3).max(2);
    let has_room = |ticks: &Vec<Tick>| ticks.windows(2).all(|pair| pair[0].place + 2 <= pair[1].place);
    let mut ticks = match scale {
        Scale::Linear => linear(sides, scale, rows, most),
        Scale::Logarithmic => choices(sides, scale, rows, most).find(has_room).unwrap_or_default(),
    };
    ticks.retain(|tick| tick.label.len() <= width);
    ticks
}

/// Sets of ticks, at most `most` each, the fullest first.
///
/// A logarithmic axis has 1, 2 and 5 of every decade, else powers of ten, else every second, third or further one of them;
/// over less than a decade or two round numbers, as a linear one.
fn choices(sides: [f64; 2], scale: Scale, cells: usize, most: usize) -> Box<dyn Iterator<Item = Vec<Tick>>> {
    let linear = move || (2..=most).rev().map(move |most| linear(sides, scale, cells, most));
    if scale == Scale::Linear {
        return Box::new(linear());
    }
    let decades = MULTIPLES.into_iter().map(move |(digits, every)| logarithmic(sides, cells, digits, every));
    let decades = decades.filter(move |ticks| (2..=most.max(2)).contains(&ticks.len()));
    if sides[1] / sides[0] < FEW_DECADES {
        return Box::new(linear().filter(|ticks| ticks.len() > 1).chain(decades));
    }
    Box::new(decades.chain(linear()))
}

/// Ratio of the sides of a logarithmic axis below which round numbers a step apart read better than decades.
const FEW_DECADES: f64 = 8.0;

/// Digits that are ticked, and in which of the decades.
const MULTIPLES: [(&[f64], usize); 9] = [
    (&[1.0, 2.0, 5.0], 1),
    (&[1.0, 3.0], 1),
    (&[1.0], 1),
    (&[1.0], 2),
    (&[1.0], 3),
    (&[1.0], 5),
    (&[1.0], 10),
    (&[1.0], 50),
    (&[1.0], 100),
];

/// Multiples of the powers of ten between two sides.
fn logarithmic(sides: [f64; 2], cells: usize, digits: &[f64], every: usize) -> Vec<Tick> {
    let every = every as f64;
    let (first, last) = ((sides[0].log10() / every).floor(), (sides[1].log10() / every).floor());
    if !(first.is_finite() && last.is_finite()) {
        return Vec::new();
    }
    let decades = (0..=nearest(last - first, 700)).map(|k| (first + k as f64) * every);
    // Read from text, because a power of ten that is computed may be beside it.
    let decades = decades.filter_map(|exponent| format!("1e{exponent:.0}").parse::<f64>().ok());
    let numbers = decades.flat_map(|decade| digits.iter().map(move |digit| (digit * decade, decade)));
    let slack = 1e-12;
    let inside = |&(x, _): &(f64, f64)| x >= sides[0] * (1.0 - slack) && x <= sides[1] * (1.0 + slack);
    let place = |x: f64| place(sides, Scale::Logarithmic, cells, x);
    numbers.filter(inside).map(|(x, decade)| Tick { place: place(x), label: label(x, decade) }).collect()
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

fn linear(sides: [f64; 2], scale: Scale, cells: usize, most: usize) -> Vec<Tick> {
    let (step, numbers) = round_numbers(sides, most);
    let tick = |x: f64| Tick { place: place(sides, scale, cells, x), label: label(x, step) };
    numbers.into_iter().map(tick).collect()
}

fn place(sides: [f64; 2], scale: Scale, cells: usize, x: f64) -> usize {
    nearest(scale.share(sides, x) * (cells - 1) as f64, cells - 1)
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
pub(in crate::report) fn start(tick: &Tick) -> usize {
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
            let ticks = across(sides, Scale::Linear, cells);
            assert!(are_apart(&ticks) && ticks.iter().all(|tick| tick.place < cells), "{ticks:?}");
            let up = upwards(sides, Scale::Linear, cells, 7);
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
            for scale in [Scale::Linear, Scale::Logarithmic] {
                assert!(across(sides, scale, 80).is_empty() && upwards(sides, scale, 20, 7).is_empty(), "{sides:?}");
            }
        }
    }
}
