//! After a knock: abundances against time from a state beside an equilibrium, with the linear prediction beside them.
//!
//! [`knocked`] makes the state, [`horizon`] says how long to follow its path, [`Course::new`] compares the path with what the
//! linear part predicts, [`drawing`] draws both, [`sentences`] say what came of it, [`rows()`] are what is saved of it. Pure
//! functions of a path that somebody else followed; all of it is numerical. `predict` has the linear part's path.

mod bands;
mod predict;
mod rows;
mod words;

pub use bands::{bands, drawing, signs};
pub use rows::{headings, rows};
pub use words::sentences;

use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::analysis::paths::{Ended, Path};
use crate::model::SpeciesId;
use crate::report::sketch::entry;
use predict::Prediction;

/// Times at which a path is compared with its prediction, at most; a map at each step.
const SAMPLES: usize = 400;
/// Steps of a map that are followed, at most.
const MOST_STEPS: f64 = 2000.0;
/// Return times until a deviation has died out to less than 1 % along the slowest direction: exp(−6) is 0.25 %.
const RETURN_TIMES: f64 = 6.0;
/// Turns that are shown at least, where the state swings back.
const TURNS: f64 = 2.0;
/// Times by which an unstable state is left: a deviation grows by exp(8), 3000-fold.
const LEAVING_TIMES: f64 = 8.0;
/// Time units, or steps, where the linear part sets no time.
const WITHOUT: f64 = 100.0;
/// What counts as near, and where a prediction stops being good: this share of the abundances at the equilibrium.
pub const TENTH: f64 = 0.1;
/// What counts as there.
const HUNDREDTH: f64 = 0.01;
/// How much longer than to there is shown.
const AFTERWARDS: f64 = 1.25;

/// A state with one species, or all, at other abundances than an equilibrium has them: times 1 + `change`, never below 0.
///
/// An absent species stays absent. `change` is a share, −0.5 for half; what is not finite changes nothing.
#[must_use]
pub fn knocked(equilibrium: &[f64], species: Option<usize>, change: f64) -> Vec<f64> {
    let factor = if change.is_finite() { (1.0 + change).max(0.0) } else { 1.0 };
    let one = |(i, &x): (usize, &f64)| if species.is_none_or(|chosen| chosen == i) { x * factor } else { x };
    equilibrium.iter().enumerate().map(one).collect()
}

/// How long a path beside an equilibrium is worth following, in time units: six return times and two turns, for an unstable
/// state until a small deviation has grown some thousandfold, 100 time units or steps where the linear part sets no time.
///
/// `step` is that of a map: then a whole number of steps, from 10 to 2000.
#[must_use]
pub fn horizon(linear: Option<&Linearisation>, step: Option<f64>) -> f64 {
    let unit = step.unwrap_or(1.0);
    let leading = linear.and_then(Linearisation::leading);
    let (rate, turn) = leading.map_or((0.0, 0.0), |z| match step {
        None => (z.re, z.im.abs()),
        Some(step) => (z.norm().ln() / step, z.im.atan2(z.re).abs() / step),
    });
    let turns = if turn > 0.0 { TURNS * std::f64::consts::TAU / turn } else { 0.0 };
    let time = match rate {
        rate if rate < 0.0 => (RETURN_TIMES / -rate).max(turns),
        rate if rate > 0.0 => (LEAVING_TIMES / rate).max(turns),
        _ => turns.max(WITHOUT * unit),
    };
    let time = if time.is_finite() && time > 0.0 { time } else { WITHOUT * unit };
    step.map_or(time, |step| step * (time / step).ceil().clamp(10.0, MOST_STEPS))
}

/// A path after a knock, beside what the linear part predicts of it.
#[derive(Clone, Debug, PartialEq)]
pub struct Course {
    /// Times from the knock on, in time units.
    pub times: Vec<f64>,
    /// The state of all species at each.
    pub states: Vec<Vec<f64>>,
    /// What the linear part predicts of it, as far as that is finite; a predicted abundance may be below 0. Empty without.
    pub predicted: Vec<Vec<f64>>,
    /// The equilibrium that it is compared with.
    pub equilibrium: Vec<f64>,
    /// Time units of a map's step.
    pub step: Option<f64>,
    /// The largest deviation from the equilibrium of any species, as a share of its abundance there; of one that is absent
    /// there, of its highest on the way. At the start and at the end.
    pub deviation: [f64; 2],
    /// From when on every deviation is below 10 %; `None` where it is not at the end.
    pub returned: Option<f64>,
    /// The same of the prediction.
    pub return_predicted: Option<f64>,
    /// Until when the prediction is within 10 % of the equilibrium's abundances of the path; `None` where it is to the end,
    /// and where there is none.
    pub good_until: Option<f64>,
    /// The lowest abundance of each species, and when.
    pub lowest: Vec<(f64, f64)>,
    /// Who was lost, and when.
    pub lost: Vec<(SpeciesId, f64)>,
    /// Why the path ended.
    pub ended: Ended,
}

impl Course {
    /// Compares a path with an equilibrium and its linear part. It is shown until a little after it is within 1 % for good.
    ///
    /// `step` is that of a map. A path without states gives a course without times.
    pub fn new(path: &Path, equilibrium: &[f64], linear: Option<&Linearisation>, step: Option<f64>) -> Self {
        let is_map = step.is_some();
        let sizes = sizes(path, equilibrium);
        let off = |state: &[f64]| deviation(equilibrium, &sizes, state);
        let times = times(path, step, &off);
        let states: Vec<Vec<f64>> = times.iter().map(|&t| path.at(t * (1.0 + 1e-12), is_map)).collect();
        let prediction =
            linear.and_then(|linear| Prediction::new(linear, equilibrium, states.first()?, &times, is_map));
        let predicted = prediction.map_or_else(Vec::new, |prediction| prediction.states);
        let end = path.states.last().map_or(f64::NAN, |state| off(state));
        let differs = |(a, b): (&Vec<f64>, &Vec<f64>)| {
            let one = |i: usize| sizes[i] > 0.0 && (a[i] - b[i]).abs() > TENTH * sizes[i];
            (0..sizes.len().min(a.len())).any(one)
        };
        let first = states.iter().zip(&predicted).position(differs);
        let good_until = first.map(|k| times[k.saturating_sub(1)]).or_else(|| ended_early(&predicted, &times));
        Self {
            deviation: [path.states.first().map_or(f64::NAN, |state| off(state)), end],
            returned: (end <= TENTH).then(|| entry(path, is_map, &|state| off(state) <= TENTH)),
            return_predicted: settled(&times, &predicted, &off),
            good_until,
            lowest: lowest(path),
            lost: path.lost.clone(),
            ended: path.ended,
            equilibrium: equilibrium.to_vec(),
            times,
            states,
            predicted,
            step,
        }
    }
}

/// The equilibrium of a list that a course is within 10 % of at its end, by its place; the nearest where there are several.
/// Of a species that is absent there, 10 % of its highest on the way.
pub fn end(course: &Course, list: &[Equilibrium]) -> Option<usize> {
    let last = course.states.last()?;
    let highest = |i: usize| course.states.iter().filter_map(|state| state.get(i)).fold(0.0, |a: f64, x| a.max(*x));
    let highest: Vec<f64> = (0..last.len()).map(highest).collect();
    let off = |place: usize| {
        let there = &list[place].state;
        let sizes: Vec<f64> = there.iter().zip(&highest).map(|(&x, &high)| if x > 0.0 { x } else { high }).collect();
        deviation(there, &sizes, last)
    };
    let all = (0..list.len()).map(|place| (place, off(place))).filter(|(_, off)| *off <= TENTH);
    all.min_by(|a, b| a.1.total_cmp(&b.1)).map(|(place, _)| place)
}

/// From when on a path is within 1 % of one of these equilibria for good; `None` where it is near none at its end.
pub fn arrival(path: &Path, list: &[Equilibrium], is_map: bool) -> Option<f64> {
    let last = path.states.last()?;
    let there = |one: &Equilibrium| {
        let sizes = sizes(path, &one.state);
        let off = |state: &[f64]| deviation(&one.state, &sizes, state);
        (off(last) <= HUNDREDTH).then(|| entry(path, is_map, &|state| off(state) <= HUNDREDTH))
    };
    list.iter().filter_map(there).min_by(f64::total_cmp)
}

/// A path until a little after a time; whole where that is its start.
#[must_use]
pub fn until_after(mut path: Path, time: f64) -> Path {
    let until = AFTERWARDS * time;
    if until > 0.0 {
        let kept = path.times.iter().take_while(|&&time| time <= until).count() + 1;
        path.times.truncate(kept);
        path.states.truncate(kept);
        path.lost.retain(|(_, when)| *when <= path.times.last().copied().unwrap_or(0.0));
    }
    path
}

/// By what a deviation of each species is measured.
fn sizes(path: &Path, equilibrium: &[f64]) -> Vec<f64> {
    let highest = |i: usize| path.states.iter().filter_map(|state| state.get(i)).fold(0.0, |high: f64, x| high.max(*x));
    equilibrium.iter().enumerate().map(|(i, &x)| if x > 0.0 { x } else { highest(i) }).collect()
}

fn deviation(equilibrium: &[f64], sizes: &[f64], state: &[f64]) -> f64 {
    let one = |((&there, &size), &x): ((&f64, &f64), &f64)| if x == there { 0.0 } else { (x - there).abs() / size };
    let all = equilibrium.iter().zip(sizes).zip(state).map(one);
    all.fold(0.0, |worst: f64, x| if x.is_nan() || worst.is_nan() { f64::NAN } else { worst.max(x) })
}

/// Evenly spaced times, for a map its steps, until a little after the path is within 1 % for good.
fn times(path: &Path, step: Option<f64>, off: &dyn Fn(&[f64]) -> f64) -> Vec<f64> {
    let Some(last) = path.states.last() else { return Vec::new() };
    let there = (off(last) <= HUNDREDTH).then(|| entry(path, step.is_some(), &|state| off(state) <= HUNDREDTH));
    let until = there.filter(|&there| there > 0.0).map_or(path.until(), |there| path.until().min(AFTERWARDS * there));
    if step.is_some() {
        return path.times.iter().copied().take_while(|&t| t <= until * (1.0 + 1e-9)).collect();
    }
    (0..=SAMPLES).map(|k| until * (k as f64 / SAMPLES as f64)).collect()
}

fn lowest(path: &Path) -> Vec<(f64, f64)> {
    let species = path.states.first().map_or(0, Vec::len);
    let of = |i: usize| {
        let all = path.states.iter().zip(&path.times).map(|(state, &t)| (state[i], t));
        all.min_by(|a, b| a.0.total_cmp(&b.0)).unwrap_or((f64::NAN, 0.0))
    };
    (0..species).map(of).collect()
}

/// When states at given times are near for good: between the last that is not and the next, in proportion.
fn settled(times: &[f64], states: &[Vec<f64>], off: &dyn Fn(&[f64]) -> f64) -> Option<f64> {
    let offs: Vec<f64> = states.iter().map(|state| off(state)).collect();
    let is_to_the_end = states.len() == times.len() && offs.last().is_some_and(|&off| off <= TENTH);
    if !is_to_the_end {
        return None;
    }
    let Some(last) = offs.iter().rposition(|&off| off > TENTH) else { return Some(0.0) };
    let share = (offs[last] - TENTH) / (offs[last] - offs[last + 1]);
    Some(times[last] + share * (times[last + 1] - times[last]))
}

/// The last time of a prediction that left the finite numbers.
fn ended_early(predicted: &[Vec<f64>], times: &[f64]) -> Option<f64> {
    let is_early = !predicted.is_empty() && predicted.len() < times.len();
    is_early.then(|| times[predicted.len() - 1])
}
