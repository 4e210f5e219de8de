//! What a table of effects says, in sentences: the effect that one would not expect, and how far it can be trusted.

use super::{Effects, Interactions, Sign, Who, interactions};
use crate::analysis::assess::Assessed;
use crate::analysis::equilibria::Equilibrium;
use crate::model::{Model, TimeKind};
use crate::report::sketch::Style;
use crate::report::table::clean;

/// A net effect smaller than this share of the largest is not spoken of: both proportional to the abundances.
const SMALL: f64 = 1e-6;
/// A net effect is not spoken of either where it is less than so many times what rounding can do to the largest.
const ABOVE_ROUNDING: f64 = 10.0;

/// The most telling effect among those present, at once and in the long run, each claim with how sure it is; then what has to
/// be known beside it. By rank: who is lowered by being added to; whose effect turns round; who acts without doing so at
/// once; the largest. Sizes are compared as shares of the abundances.
pub fn sentences(model: &Model, equilibrium: &Equilibrium, assessed: &Assessed, style: Style) -> Vec<String> {
    let table = |effects| interactions(equilibrium, assessed, effects, Who::Present);
    let direct = match table(Effects::Direct) {
        Ok(direct) if direct.species.is_empty() => {
            return vec!["Nobody is there, so nobody acts on anybody.".to_owned()];
        }
        Ok(direct) => direct,
        Err(reason) => return vec![reason.to_owned()],
    };
    let net = match table(Effects::Net) {
        Ok(net) if net.nearly_singular => {
            let warning = "The net effects are nearly singular: even their signs may be wrong.";
            return said(&largest(model, &direct, equilibrium), warning, style);
        }
        Ok(net) => net,
        Err(reason) => return said(&largest(model, &direct, equilibrium), reason, style),
    };
    let condition = assessed.measures.net_effects.as_ref().map_or(1.0, |net| net.condition);
    let floor = SMALL.max(ABOVE_ROUNDING * condition * f64::EPSILON);
    let pair = telling(&direct, &net, equilibrium, floor);
    let found = pair.map_or_else(String::new, |pair| pair.words(model, &direct, &net));
    let stable = assessed.linear.as_ref().ok().and_then(|linear| linear.stable);
    let beside = [lasts(stable).to_owned(), turned(&direct, &net)];
    let beside = beside.iter().filter(|text| !text.is_empty()).map(String::as_str).collect::<Vec<_>>().join(" ");
    said(&found, &beside, style)
}

fn said(first: &str, second: &str, style: Style) -> Vec<String> {
    [first, second].iter().filter(|text| !text.is_empty()).map(|text| clean(text, style)).collect()
}

/// What the long run means where paths do not stay.
fn lasts(stable: Option<bool>) -> &'static str {
    match stable {
        Some(true) => "",
        Some(false) => "Not stable: the long run says where the state moves, not where paths go.",
        None => "Whether the state lasts is open: the long run says where the state moves.",
    }
}

/// How many effects between two species have one sign at once and the other in the long run.
fn turned(direct: &Interactions, net: &Interactions) -> String {
    let n = direct.species.len();
    let between = (0..n * n).filter(|k| k / n != k % n);
    let signs = between.filter_map(|k| Some([direct.entries.get(k)?.sign, net.entries.get(k)?.sign]));
    let count = signs.filter(|[at_once, lasting]| is_opposite(*at_once, *lasting)).count();
    match (n, count) {
        (0..=2, _) | (_, 0) => String::new(),
        (_, 1) => "One effect between two species turns round in the long run.".to_owned(),
        _ => format!("{count} of {} effects between species turn round in the long run.", n * (n - 1)),
    }
}

fn is_opposite(one: Sign, other: Sign) -> bool {
    matches!((one, other), (Sign::Positive, Sign::Negative) | (Sign::Negative, Sign::Positive))
}

/// How far a pair is from what one would expect; later ones are told first.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
enum Surprise {
    /// None: the same at once and in the long run.
    None,
    /// An effect in the long run alone.
    Indirect,
    /// The other sign in the long run.
    Turned,
    /// Adding to a species lowers it.
    OwnLoss,
}

/// Who acts on whom, by places in the table.
#[derive(Clone, Copy, Debug)]
struct Pair {
    row: usize,
    column: usize,
    surprise: Surprise,
}

/// The most telling pair; `None` where no net effect is large enough to be spoken of.
fn telling(direct: &Interactions, net: &Interactions, equilibrium: &Equilibrium, floor: f64) -> Option<Pair> {
    let n = net.species.len();
    let size = |k: usize| share(net, equilibrium, k);
    let largest = (0..n * n).map(size).filter(|size| size.is_finite()).fold(0.0, f64::max);
    let of = |k: usize| {
        let (row, column) = (k / n, k % n);
        let [at_once, lasting] = [direct.at(row, column)?.sign, net.at(row, column)?.sign];
        let surprise = match (at_once, lasting) {
            (Sign::Undecided, _) | (_, Sign::Undecided | Sign::Zero) => return None,
            (_, Sign::Negative) if row == column => Surprise::OwnLoss,
            (Sign::Zero, _) if row != column => Surprise::Indirect,
            (at_once, lasting) if row != column && is_opposite(at_once, lasting) => Surprise::Turned,
            _ if row != column || n == 1 => Surprise::None,
            _ => return None,
        };
        (size(k) > floor * largest).then_some((Pair { row, column, surprise }, size(k)))
    };
    let all = (0..n * n).filter_map(of);
    let best = all.max_by(|(a, a_size), (b, b_size)| a.surprise.cmp(&b.surprise).then(a_size.total_cmp(b_size)));
    best.map(|(pair, _)| pair)
}

/// An entry in shares of the abundances: of the row's for one of the column's.
fn share(table: &Interactions, equilibrium: &Equilibrium, k: usize) -> f64 {
    let n = table.species.len();
    let abundance = |place: usize| table.species.get(place).and_then(|&i| equilibrium.state.get(i)).copied();
    match (table.entries.get(k), abundance(k / n), abundance(k % n)) {
        (Some(effect), Some(row), Some(column)) => effect.number.abs() * (column / row),
        _ => f64::NAN,
    }
}

impl Pair {
    fn words(self, model: &Model, direct: &Interactions, net: &Interactions) -> String {
        let [row, column] = [name(model, net, self.row), name(model, net, self.column)];
        let raises = net.at(self.row, self.column).is_some_and(|effect| effect.sign == Sign::Positive);
        let raises = if raises { "raises" } else { "lowers" };
        let at_once = at_once(model, direct, self.row, self.column);
        match self.surprise {
            Surprise::OwnLoss => {
                format!(
                    "Adding {column} steadily lowers {column} itself in the long run (numerical), and taking it raises it."
                )
            }
            Surprise::Turned => format!(
                "{at_once}, yet adding {column} steadily {raises} {row} in the long run (numerical); taking works the other way."
            ),
            Surprise::Indirect => {
                format!(
                    "{at_once}, yet adding {column} steadily {raises} {row} in the long run (numerical); taking works the other way."
                )
            }
            Surprise::None => {
                format!("{at_once}; adding {column} steadily {raises} {row} in the long run (numerical).")
            }
        }
    }
}

/// The largest direct effect of one species on another, with a full stop; empty where there is none.
fn largest(model: &Model, direct: &Interactions, equilibrium: &Equilibrium) -> String {
    let n = direct.species.len();
    let is_told = |k: &usize| {
        let sign = direct.entries.get(*k).map(|effect| effect.sign);
        (k / n != k % n || n == 1) && matches!(sign, Some(Sign::Positive | Sign::Negative))
    };
    let size = |k: usize| share(direct, equilibrium, k);
    let best = (0..n * n).filter(is_told).max_by(|&a, &b| size(a).total_cmp(&size(b)));
    best.map_or_else(String::new, |k| at_once(model, direct, k / n, k % n) + ".")
}

/// What one more of the column's species does at once, without a full stop.
fn at_once(model: &Model, direct: &Interactions, row: usize, column: usize) -> String {
    let Some(effect) = direct.at(row, column) else { return String::new() };
    let sure = if effect.proved { "proved" } else { "numerical" };
    let [acts, answers] = [name(model, direct, column), name(model, direct, row)];
    let what = match model.time {
        TimeKind::Continuous => "growth",
        TimeKind::Discrete { .. } => "next state",
    };
    let of = if row == column { "its own".to_owned() + " " + what } else { format!("the {what} of {answers}") };
    match effect.sign {
        Sign::Positive => format!("One more of {acts} raises {of} at once ({sure})"),
        Sign::Negative => format!("One more of {acts} lowers {of} at once ({sure})"),
        Sign::Zero => format!("One more of {acts} does not change the {what} of {answers} at once ({sure})"),
        Sign::Undecided => format!("What one more of {acts} does to {of} at once is undecided"),
    }
}

fn name<'m>(model: &'m Model, table: &Interactions, place: usize) -> &'m str {
    table.species.get(place).and_then(|&i| model.species.get(i)).map_or("", |species| &species.name)
}
