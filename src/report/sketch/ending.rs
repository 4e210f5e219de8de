//! Where a path leads, and where one came from, in one sentence each. Numerical, and said to be.

use super::legend::{at, symbol};
use super::{Style, View};
use crate::analysis::field::Window;
use crate::analysis::paths::{Ended, Path};
use crate::report::table::{clean, human};

/// Within this share of every abundance a path is said to be at an equilibrium.
pub(in crate::report) const NEAR: f64 = 0.01;
/// Species that are named in a sentence.
const MOST_NAMED: usize = 6;
/// Halvings of a step in which a path comes near.
const HALVINGS: usize = 40;

/// Where a path forwards ends, as `C is lost after 4.100 yr; after 23.00 yr within 1 % of E3 (numerical).`
pub fn ends(view: &View<'_>, path: &Path, style: Style) -> String {
    let unit = clean(&view.model.time_unit.value, style);
    let end = match arrival(view, path) {
        Some((index, time)) => {
            let id = view.ids.get(index).map_or("", String::as_str);
            let leaves = if view.is_stable(index) { "" } else { ", which it may leave again" };
            match time {
                0.0 => format!("within 1 % of {id} from the start{leaves}"),
                time => format!("after {} {unit} within 1 % of {id}{leaves}", human(time)),
            }
        }
        None => rest(view, path, &unit).unwrap_or_else(|| still(path, &unit)),
    };
    let mut said: Vec<String> = losses(view, path, &unit);
    // A sentence that begins with a symbol keeps it as it is.
    said.push(if said.is_empty() { capital(&end) } else { end });
    sentence(&said.join("; "), style)
}

/// Where a path backwards came from, as `Came from beyond the drawing 3.200 yr ago (numerical).`
pub fn came_from(view: &View<'_>, window: &Window, path: &Path, style: Style) -> String {
    let unit = clean(&view.model.time_unit.value, style);
    let ago = human(path.until().abs());
    let point = |state: &Vec<f64>| view.on_axes(view.slice.project(state));
    let is_plane = view.slice.y.is_some();
    let is_inside =
        |state: &Vec<f64>| if is_plane { window.holds(point(state)) } else { holds_x(window, point(state)) };
    let outside = path.states.iter().position(|state| !is_inside(state));
    let said = match (outside, path.ended) {
        (Some(0), _) => "starts beyond the drawing".to_owned(),
        (Some(knot), _) => {
            let time = crossing(path, knot, &is_inside);
            format!("came from beyond the drawing {} {unit} ago", human(time.abs()))
        }
        (None, Ended::NoPast) if view.step().is_some() => "a map cannot be followed backwards".to_owned(),
        (None, Ended::NoPast) => format!("{ago} {unit} ago a species would have come out of nothing"),
        (None, _) => match arrival(view, path) {
            Some((index, _)) => {
                let id = view.ids.get(index).map_or("", String::as_str);
                format!("came from beside {id}, where it was {ago} {unit} ago")
            }
            None => stopped(path).map_or_else(
                || format!("was in the drawing all the time for {ago} {unit}"),
                |why| format!("followed back for {ago} {unit}, where {why}"),
            ),
        },
    };
    sentence(&capital(&said), style)
}

/// When a path that is inside up to the state before `knot`, and outside at it, crosses over.
fn crossing(path: &Path, knot: usize, is_inside: &dyn Fn(&Vec<f64>) -> bool) -> f64 {
    let (Some(&before), Some(&after)) = (path.times.get(knot.saturating_sub(1)), path.times.get(knot)) else {
        return path.until();
    };
    let (mut inside, mut outside) = (before, after);
    for _ in 0..HALVINGS {
        let middle = f64::midpoint(inside, outside);
        if is_inside(&path.at(middle, false)) { inside = middle } else { outside = middle }
    }
    outside
}

fn holds_x(window: &Window, [x, _]: [f64; 2]) -> bool {
    (window.x[0]..=window.x[1]).contains(&x)
}

fn sentence(said: &str, style: Style) -> String {
    format!("{} (numerical).", clean(said, style))
}

/// A text with its first letter a capital.
fn capital(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().collect::<String>() + letters.as_str())
}

fn losses(view: &View<'_>, path: &Path, unit: &str) -> Vec<String> {
    let named = path
        .lost
        .iter()
        .take(MOST_NAMED)
        .map(|(species, when)| format!("{} is lost after {} {unit}", symbol(view.model, species.0), human(*when)));
    let mut said: Vec<String> = named.collect();
    if path.lost.len() > MOST_NAMED {
        said.push(format!("{} more are lost", path.lost.len() - MOST_NAMED));
    }
    said
}

/// Why a path ended before its time; `None` for one that did not.
fn stopped(path: &Path) -> Option<&'static str> {
    match path.ended {
        Ended::InTime | Ended::NoPast => None,
        Ended::Stopped(_) => Some("the rates have no value, or change too fast to be followed"),
        Ended::TooManyStates => Some("the number of steps is bounded"),
        Ended::Asked => Some("it was told to stop"),
    }
}

/// The last part of a path, in which one that is at rest does not move; a share of its time.
const LAST: f64 = 0.1;

/// A path that came to rest where the list has no equilibrium, as where a quota goes on being taken of nobody.
fn rest(view: &View<'_>, path: &Path, unit: &str) -> Option<String> {
    let is_map = view.step().is_some();
    let end = path.states.last().filter(|_| stopped(path).is_none())?;
    let highest = highest(path, end.len());
    let is_near = |state: &[f64], share: f64| distance(end, &highest, state) <= share;
    // Ten times nearer than near, lest a slow path be taken for one at rest.
    is_near(&path.at((1.0 - LAST) * path.until(), is_map), NEAR / 10.0).then(|| {
        let time = entry(path, is_map, &|state| is_near(state, NEAR));
        let place = at(view, view.slice.project(end));
        format!("after {} {unit} within 1 % of {place}, which is no equilibrium of the list", human(time))
    })
}

fn highest(path: &Path, species: usize) -> Vec<f64> {
    let all = |i: usize| path.states.iter().filter_map(move |state| state.get(i));
    (0..species).map(|i| all(i).fold(0.0, |high: f64, x| high.max(*x))).collect()
}

fn still(path: &Path, unit: &str) -> String {
    let after = human(path.until());
    match stopped(path) {
        None => format!("still moving after {after} {unit}"),
        Some(why) => format!("followed for {after} {unit}, where {why}"),
    }
}

/// The equilibrium that a path is near at its end, and since when.
///
/// Near is within 1 % of the abundance of every species, for one that is absent there within 1 % of its highest on the way.
pub(in crate::report) fn arrival(view: &View<'_>, path: &Path) -> Option<(usize, f64)> {
    let end = path.states.last()?;
    let highest = highest(path, end.len());
    let list = &view.solved.equilibria.list;
    let off = |index: usize, state: &[f64]| distance(&list[index].state, &highest, state);
    let near = (0..list.len()).filter(|&index| off(index, end) <= NEAR);
    let index = near.min_by(|&a, &b| off(a, end).total_cmp(&off(b, end)))?;
    Some((index, entry(path, view.step().is_some(), &|state| off(index, state) <= NEAR)))
}

/// The largest relative distance of a state from a place; of what is absent there, from 0 as a share of its highest.
fn distance(place: &[f64], highest: &[f64], state: &[f64]) -> f64 {
    let one = |((&there, &high), &x): ((&f64, &f64), &f64)| {
        let size = if there > 0.0 { there } else { high };
        if x == there { 0.0 } else { (x - there).abs() / size }
    };
    place.iter().zip(highest).zip(state).map(one).fold(0.0, |worst: f64, x| if x.is_nan() { x } else { worst.max(x) })
}

/// The time from which on a path is inside for good, 0 where it never was outside; its end is inside.
pub(in crate::report) fn entry(path: &Path, is_map: bool, is_inside: &dyn Fn(&[f64]) -> bool) -> f64 {
    let Some(last) = path.states.iter().rposition(|state| !is_inside(state)) else { return 0.0 };
    let Some(&after) = path.times.get(last + 1) else { return path.until() };
    if is_map {
        return after;
    }
    let (mut outside, mut inside) = (path.times[last], after);
    for _ in 0..HALVINGS {
        let middle = f64::midpoint(outside, inside);
        if is_inside(&path.at(middle, false)) { inside = middle } else { outside = middle }
    }
    inside
}
