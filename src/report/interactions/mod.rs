//! Who acts on whom at an equilibrium: direct effects (the Jacobian) and net effects (answers to lasting presses), by sign
//! and number.
//!
//! [`interactions`] takes them from what was said of the equilibrium, [`drawing`] shows a part of the table, [`text()`] and
//! [`rows()`] have all of it for saving, [`sentences`] say what is telling in it. A sign is a plus, a minus, a 0 or a question
//! mark, never a colour; whether it is proved is told apart, see [`Sign`]. `table` lays out.

mod rows;
mod table;
mod words;

pub use rows::{headings, rows};
pub use table::{drawing, signs, text, visible};
pub use words::sentences;

use crate::analysis::assess::Assessed;
use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::analysis::measures::NetEffects;
use crate::num::interval::Interval;

/// Which effects.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Effects {
    /// The Jacobian: what one more of the column's species does at once to the rate of change of the row's; for a map to its
    /// next state.
    Direct,
    /// −A⁻¹, for a map (I − A)⁻¹: the row's long-run answer to a lasting press on the column's species (Bender, Case &
    /// Gilpin 1984; Yodzis 1988).
    Net,
}

/// Whose effects.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Who {
    /// Of the species that are there.
    Present,
    /// Of all; the absent are marked.
    All,
}

/// Which way an effect goes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sign {
    /// Up.
    Positive,
    /// Down.
    Negative,
    /// None at all.
    Zero,
    /// What holds the true number has both signs; of a net effect, it is no more than what rounding can do.
    Undecided,
}

/// One effect.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Effect {
    /// In units of the row's species per unit of the column's; of direct effects per time unit as well, of net ones per press
    /// of one per time unit.
    pub number: f64,
    /// Its sign.
    pub sign: Sign,
    /// Whether the sign is proved; of an undecided one it is not.
    pub proved: bool,
}

/// A table of effects: rows answer, columns act.
#[derive(Clone, Debug, PartialEq)]
pub struct Interactions {
    /// Which.
    pub effects: Effects,
    /// The species of rows and columns.
    pub species: Vec<usize>,
    /// Whether each of them is there.
    pub present: Vec<bool>,
    /// Row by row.
    pub entries: Vec<Effect>,
    /// Whether what was inverted leaves fewer than half of the digits of net effects.
    pub nearly_singular: bool,
}

impl Interactions {
    /// The effect of the species of a column on that of a row, by their places in the table.
    pub fn at(&self, row: usize, column: usize) -> Option<Effect> {
        let n = self.species.len();
        if row < n && column < n { self.entries.get(row * n + column).copied() } else { None }
    }
}

/// The effects at an equilibrium.
///
/// # Errors
/// Why there are none: no linear part, or no inverse.
pub fn interactions(
    equilibrium: &Equilibrium,
    assessed: &Assessed,
    effects: Effects,
    who: Who,
) -> Result<Interactions, &'static str> {
    let Ok(linear) = &assessed.linear else { return Err("There is no linear part here.") };
    let n = linear.order();
    let net = assessed.measures.net_effects.as_ref();
    let numbers: &[f64] = match (effects, net) {
        (Effects::Direct, _) => &linear.jacobian,
        (Effects::Net, Some(net)) => &net.matrix,
        (Effects::Net, None) => return Err("There are no net effects: the Jacobian has no inverse."),
    };
    if numbers.len() != n * n || equilibrium.state.len() != n {
        return Err("There is no linear part here.");
    }
    let species: Vec<usize> = (0..n).filter(|&i| who == Who::All || equilibrium.has(i)).collect();
    let pairs = species.iter().flat_map(|&i| species.iter().map(move |&j| i * n + j));
    let floor = if effects == Effects::Net { net.map_or(0.0, |net| rounding(net, &equilibrium.state)) } else { 0.0 };
    let noise = |k: usize| numbers[k] != 0.0 && share(numbers[k], &equilibrium.state, k) < floor;
    let bounds = if effects == Effects::Direct && equilibrium.proven { bounds(linear) } else { &[] };
    Ok(Interactions {
        effects,
        present: species.iter().map(|&i| equilibrium.has(i)).collect(),
        entries: pairs
            .map(|k| {
                let effect = effect(numbers[k], bounds.get(k));
                if noise(k) { Effect { sign: Sign::Undecided, ..effect } } else { effect }
            })
            .collect(),
        nearly_singular: effects == Effects::Net && net.is_some_and(|net| net.nearly_singular),
        species,
    })
}

/// What rounding can do to a net effect, as a share of the abundances: the condition of what was inverted, times the rounding
/// of one number, times the largest effect.
fn rounding(net: &NetEffects, state: &[f64]) -> f64 {
    let shares = net.matrix.iter().enumerate().map(|(k, &number)| share(number, state, k));
    net.condition * f64::EPSILON * shares.filter(|share| share.is_finite()).fold(0.0, f64::max)
}

/// The size of an entry of a matrix over all species in shares of the abundances, which are 1 for those that are absent.
fn share(number: f64, state: &[f64], k: usize) -> f64 {
    let n = state.len();
    let size = |i: usize| if state[i] > 0.0 { state[i] } else { 1.0 };
    number.abs() * (size(k % n) / size(k / n))
}

/// What holds the Jacobian, where anything does.
fn bounds(linear: &Linearisation) -> &[Interval] {
    if linear.enclosure.len() == linear.jacobian.len() { &linear.enclosure } else { &[] }
}

fn effect(number: f64, bounds: Option<&Interval>) -> Effect {
    let by_number = match number {
        x if x > 0.0 => Sign::Positive,
        x if x < 0.0 => Sign::Negative,
        0.0 => Sign::Zero,
        _ => Sign::Undecided,
    };
    let Some(side) = bounds else { return Effect { number, sign: by_number, proved: false } };
    let (sign, proved) = if side.lo() > 0.0 {
        (Sign::Positive, true)
    } else if side.hi() < 0.0 {
        (Sign::Negative, true)
    } else if side.lo() == 0.0 && side.hi() == 0.0 {
        (Sign::Zero, true)
    } else {
        (Sign::Undecided, false)
    };
    Effect { number, sign, proved }
}
