//! A unit: a product of powers of named units, kept as it was written so that it can be shown again.
//!
//! `kt/yr` stays `kt/yr` through a calculation; only [`compare`] looks at what the names measure. Powers are numbers,
//! nearly always halves; equal means equal within [`SAME`].

use std::fmt;

use super::known::{self, Base};

/// Powers and decimal logarithms of sizes that are closer than this are the same: far above what a few additions of
/// small fractions lose, far below any real difference.
pub(super) const SAME: f64 = 1e-9;

/// Largest power of a unit; what is larger is a slip, and would take sizes out of range.
pub(super) const LARGEST_POWER: f64 = 100.0;

/// A unit of measurement: a plain factor times powers of named units.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Unit {
    /// Decimal logarithm of the plain factor.
    pub(super) log10: f64,
    /// Names as shown, each once, with their powers, none zero; in the order of writing.
    pub(super) parts: Vec<(String, f64)>,
}

/// How two units stand to one another.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Agreement {
    /// A number in one is the same number in the other.
    Same,
    /// They measure the same thing; the larger is this many times the smaller.
    Factor(f64),
    /// They measure different things.
    Different,
}

impl Unit {
    /// The unit of plain numbers.
    pub fn one() -> Self {
        Self::default()
    }

    /// A named unit to the power 1.
    pub(super) fn named(name: &str) -> Self {
        Self { log10: 0.0, parts: vec![(known::shown(name), 1.0)] }
    }

    /// Multiplies by `other` to the power `power`.
    pub(super) fn multiply(&mut self, other: &Unit, power: f64) {
        self.log10 += other.log10 * power;
        for (name, exponent) in &other.parts {
            add_power(&mut self.parts, name, exponent * power);
        }
    }

    /// What it measures, with the decimal logarithm of its size.
    pub(super) fn measures(&self) -> (f64, Vec<(Base, f64)>) {
        let mut log10 = self.log10;
        let mut bases = Vec::new();
        for (name, power) in &self.parts {
            let meaning = known::meaning(name);
            log10 += meaning.log10 * power;
            if let Some((base, exponent)) = meaning.measures {
                add_power(&mut bases, &base, exponent * power);
            }
        }
        bases.sort_by(|a, b| a.0.cmp(&b.0));
        (log10, bases)
    }
}

/// Adds `power` to the entry of `key`; an entry that becomes zero goes.
pub(super) fn add_power<K: PartialEq + Clone>(entries: &mut Vec<(K, f64)>, key: &K, power: f64) {
    let place = entries.iter().position(|(other, _)| other == key).unwrap_or(entries.len());
    match entries.get_mut(place) {
        Some(entry) => entry.1 += power,
        None => entries.push((key.clone(), power)),
    }
    if entries[place].1.abs() < SAME {
        entries.remove(place);
    }
}

/// How two units stand to one another.
pub fn compare(a: &Unit, b: &Unit) -> Agreement {
    let mut ratio = a.clone();
    ratio.multiply(b, -1.0);
    let (log10, bases) = ratio.measures();
    match (bases.is_empty(), log10.abs() < SAME) {
        (true, true) => Agreement::Same,
        (true, false) => Agreement::Factor(10f64.powf(log10.abs())),
        (false, _) => Agreement::Different,
    }
}

/// As an ecologist would write it, in ASCII as far as the names are: `kt/yr`, `1/(kt*yr)`, `1000 ind/km2`; `1` for plain
/// numbers. Amounts come first, then lengths, then times.
impl fmt::Display for Unit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut parts = self.parts.clone();
        parts.sort_by_key(|(name, _)| known::rank(name));
        let above: Vec<String> = parts.iter().filter(|(_, power)| *power > 0.0).map(power_of).collect();
        for (_, power) in &mut parts {
            *power = -*power;
        }
        let below: Vec<String> = parts.iter().filter(|(_, power)| *power > 0.0).map(power_of).collect();
        let factor = (self.log10.abs() >= SAME).then(|| plain(10f64.powf(self.log10)));
        match (factor, above.as_slice()) {
            (Some(factor), []) => f.write_str(&factor)?,
            (Some(factor), names) => write!(f, "{factor} {}", names.join("*"))?,
            (None, []) => f.write_str("1")?,
            (None, names) => f.write_str(&names.join("*"))?,
        }
        match below.as_slice() {
            [] => Ok(()),
            [one] => write!(f, "/{one}"),
            several => write!(f, "/({})", several.join("*")),
        }
    }
}

fn power_of((name, power): &(String, f64)) -> String {
    let is_square_or_cube = (power - 2.0).abs() < SAME || (power - 3.0).abs() < SAME;
    match () {
        () if (power - 1.0).abs() < SAME => name.clone(),
        () if is_square_or_cube && known::is_length(name) => format!("{name}{}", plain(*power)),
        () => format!("{name}^{}", plain(*power)),
    }
}

/// A number at twelve significant digits, without trailing zeros: rounding noise of logarithms goes.
pub(super) fn plain(x: f64) -> String {
    format!("{x:.11e}").parse::<f64>().map_or_else(|_| x.to_string(), |rounded| rounded.to_string())
}
