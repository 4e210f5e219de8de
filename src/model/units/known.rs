//! The units whose size is known, and what every other name means: itself.
//!
//! One row a unit; to add one, add a row. Only units of a fixed, undisputed size belong here: a "ton" or a "basket" is a
//! name of its own, which agrees with itself and nothing else. So is every currency, since rates of exchange move.

/// What a unit measures.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Base {
    /// Reckoned in kilograms.
    Mass,
    /// Reckoned in metres.
    Length,
    /// Reckoned in days.
    Time,
    /// Reckoned in individuals.
    Count,
    /// Something that only its own name tells.
    Own(String),
}

/// A unit of known size.
struct Known {
    /// How it is shown, then how else it may be written.
    spellings: &'static [&'static str],
    /// Size in the units that [`Base`] reckons in.
    size: f64,
    /// What it measures, to which power; `None` for a plain number.
    measures: Option<(Base, f64)>,
}

const fn row(spellings: &'static [&'static str], size: f64, base: Base, power: f64) -> Known {
    Known { spellings, size, measures: Some((base, power)) }
}

const fn number(spellings: &'static [&'static str], size: f64) -> Known {
    Known { spellings, size, measures: None }
}

const UNITS: &[Known] = &[
    number(&["%", "percent"], 0.01),
    number(&["‰"], 0.001),
    number(&["ppm"], 1e-6),
    number(&["dozen"], 12.0),
    number(&["thousand", "thousands"], 1e3),
    number(&["million", "millions"], 1e6),
    row(&["ug", "µg", "μg"], 1e-9, Base::Mass, 1.0),
    row(&["mg"], 1e-6, Base::Mass, 1.0),
    row(&["g", "gram", "grams"], 1e-3, Base::Mass, 1.0),
    row(&["kg"], 1.0, Base::Mass, 1.0),
    row(&["t", "tonne", "tonnes"], 1e3, Base::Mass, 1.0),
    row(&["kt"], 1e6, Base::Mass, 1.0),
    row(&["Mt"], 1e9, Base::Mass, 1.0),
    row(&["lb", "lbs"], 0.453_592_37, Base::Mass, 1.0),
    row(&["um", "µm", "μm"], 1e-6, Base::Length, 1.0),
    row(&["mm"], 1e-3, Base::Length, 1.0),
    row(&["cm"], 1e-2, Base::Length, 1.0),
    row(&["m", "metre", "metres", "meter", "meters"], 1.0, Base::Length, 1.0),
    row(&["km"], 1e3, Base::Length, 1.0),
    row(&["nmi"], 1852.0, Base::Length, 1.0),
    row(&["ft"], 0.3048, Base::Length, 1.0),
    row(&["ha", "hectare", "hectares"], 1e4, Base::Length, 2.0),
    row(&["acre", "acres"], 4_046.856_422_4, Base::Length, 2.0),
    row(&["mL", "ml"], 1e-6, Base::Length, 3.0),
    row(&["L", "l", "litre", "litres", "liter", "liters"], 1e-3, Base::Length, 3.0),
    row(&["s", "sec", "second", "seconds"], 1.0 / 86_400.0, Base::Time, 1.0),
    row(&["min", "minute", "minutes"], 1.0 / 1_440.0, Base::Time, 1.0),
    row(&["h", "hr", "hour", "hours"], 1.0 / 24.0, Base::Time, 1.0),
    row(&["d", "day", "days"], 1.0, Base::Time, 1.0),
    row(&["wk", "week", "weeks"], 7.0, Base::Time, 1.0),
    // The Julian year; a month is its twelfth part, so that rates per month and per year convert by 12.
    row(&["month", "months"], 365.25 / 12.0, Base::Time, 1.0),
    row(&["yr", "y", "year", "years"], 365.25, Base::Time, 1.0),
    row(&["ind", "inds", "individual", "individuals"], 1.0, Base::Count, 1.0),
];

/// Names of their own that may carry a `k` or an `M` in front.
const PREFIXED: &[&str] = &[
    "EUR", "USD", "GBP", "NOK", "SEK", "DKK", "ISK", "CHF", "CAD", "AUD", "NZD", "JPY", "ZAR", "CLP", "PEN", "INR",
    "CNY", "KRW", "RUB", "BRL", "MXN", "XAF", "XOF", "TZS", "KES", "J", "W", "Wh", "cal",
];

/// What a unit's name means: how large it is, and what it measures.
pub(super) struct Meaning {
    /// Decimal logarithm of its size.
    pub(super) log10: f64,
    /// What it measures, to which power.
    pub(super) measures: Option<(Base, f64)>,
}

/// What `name` means; a name that nobody knows measures itself.
pub(super) fn meaning(name: &str) -> Meaning {
    if let Some(known) = find(name) {
        return Meaning { log10: known.size.log10(), measures: known.measures.clone() };
    }
    let (log10, own) = match (name.strip_prefix('k'), name.strip_prefix('M')) {
        (Some(rest), _) if PREFIXED.contains(&rest) => (3.0, rest),
        (_, Some(rest)) if PREFIXED.contains(&rest) => (6.0, rest),
        _ => (0.0, name),
    };
    Meaning { log10, measures: Some((Base::Own(own.to_owned()), 1.0)) }
}

/// How `name` is shown: the first spelling of a known unit, else as it is.
pub(super) fn shown(name: &str) -> String {
    find(name).and_then(|known| known.spellings.first()).map_or_else(|| name.replace('€', "EUR"), ToString::to_string)
}

/// Whether `name` is a unit of known size, so that digits right after it are a power.
pub(super) fn is_known(name: &str) -> bool {
    find(name).is_some()
}

/// Whether `name` is a length, whose powers are written without a sign between: `km2`.
pub(super) fn is_length(name: &str) -> bool {
    matches!(meaning(name).measures, Some((Base::Length, power)) if power == 1.0)
}

/// Where `name` stands in a product: amounts first, then lengths, then times.
pub(super) fn rank(name: &str) -> u8 {
    match meaning(name).measures {
        Some((Base::Length, _)) => 1,
        Some((Base::Time, _)) => 2,
        _ => 0,
    }
}

fn find(name: &str) -> Option<&'static Known> {
    UNITS.iter().find(|known| known.spellings.contains(&name))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_spelling_stands_twice() {
        let mut all: Vec<_> = UNITS.iter().flat_map(|known| known.spellings).chain(PREFIXED).collect();
        let count = all.len();
        all.sort_unstable();
        all.dedup();
        assert_eq!(all.len(), count);
    }

    #[test]
    fn no_prefixed_name_is_another_unit() {
        for name in PREFIXED {
            for prefix in ["k", "M"] {
                assert!(!is_known(&format!("{prefix}{name}")), "{prefix}{name}");
            }
        }
    }
}
