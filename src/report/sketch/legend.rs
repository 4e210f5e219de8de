//! What is said below a drawing: its signs, as far as they occur in it, which equilibria are where, what is not in it.

use super::canvas::Canvas;
use super::meanings::{Meaning, meanings};
use super::signs::listed;
use super::{Picture, View};
use crate::analysis::equilibria::Equilibria;
use crate::analysis::field::Held;
use crate::analysis::linearise::{Kind, Unavailable};
use crate::model::Model;
use crate::report::table::{Page, human};

/// Equilibria that are listed one a line; communities have hundreds.
const MOST_LISTED: usize = 24;
/// Species whose level is given, present and absent each.
const MOST_HELD: usize = 6;
/// Where the meanings begin.
const INDENT: usize = 6;

/// The legend of a drawing.
pub(super) fn legend(view: &View<'_>, picture: &Picture, canvas: &Canvas, page: &Page) -> String {
    let mut text = String::new();
    for Meaning { sign, long, .. } in meanings(view, picture, canvas, page.style) {
        text.push_str(&page.paragraph(&format!("  {sign}"), &long, INDENT));
    }
    let shown: Vec<usize> = view.in_slice().collect();
    for &index in shown.iter().take(MOST_LISTED) {
        text.push_str(&equilibrium(view, picture, index, page));
    }
    for note in notes(view, picture, &shown) {
        text.push_str(&page.paragraph("", &note, 2));
    }
    text
}

/// A place along the axes, as `P = 88.57, D = 78.57`.
pub(super) fn at(view: &View<'_>, [x, y]: [f64; 2]) -> String {
    let across = format!("{} = {}", symbol(view.model, view.slice.x), human(x));
    match view.slice.y {
        Some(up) => format!("{across}, {} = {}", symbol(view.model, up), human(y)),
        None => across,
    }
}

/// An equilibrium's sign, name, place and type, and how sure each is.
fn equilibrium(view: &View<'_>, picture: &Picture, index: usize, page: &Page) -> String {
    let (Some(place), Some(found)) = (view.place(index), view.solved.equilibria.list.get(index)) else {
        return String::new();
    };
    let look = view.look(index);
    let id = view.ids.get(index).map_or("", String::as_str);
    let there = if found.proven { "proved" } else { "numerical" };
    let mut said = format!("{id}: {}, {there}; {}", at(view, place), kind(view, index));
    let frame = picture.frame();
    match frame.cell(view.on_axes(place)) {
        None if frame.is_beyond_logarithms(view.on_axes(place)) => {
            said += "; not drawn, for a logarithmic axis has no 0";
        }
        None => said += "; outside the part that is drawn",
        Some(cell) => {
            let other = |&other: &usize| other != index && view.place(other).and_then(|p| frame.cell(p)) == Some(cell);
            if let Some(other) = view.in_slice().find(other) {
                let other = view.ids.get(other).map_or("", String::as_str);
                said = format!("{said}; in one cell with {other}");
            }
        }
    }
    page.paragraph(&format!("  {}", listed(look, page.style)), &said, INDENT)
}

/// The type in words; where there is none, why.
fn kind(view: &View<'_>, index: usize) -> String {
    match view.solved.assessment.equilibria.get(index).map(|one| &one.linear) {
        None => "type not computed".to_owned(),
        Some(Err(Unavailable::NoDerivative(_))) => "no type, for the rates have no derivative here".to_owned(),
        Some(Err(Unavailable::Eigenvalues(_))) => "no type, for the eigenvalues could not be computed".to_owned(),
        Some(Ok(linear)) if linear.kind == Kind::Undecided => view.look(index).word.to_owned(),
        Some(Ok(linear)) if linear.kind_proven => format!("{}, proved", view.look(index).word),
        Some(Ok(_)) => format!("{}, numerical", view.look(index).word),
    }
}

/// What is not in the drawing, and what is known of the list.
fn notes(view: &View<'_>, picture: &Picture, shown: &[usize]) -> Vec<String> {
    let found = &view.solved.equilibria;
    let mut notes = Vec::new();
    let elsewhere: Vec<&str> = (0..found.list.len())
        .filter(|index| !shown.contains(index))
        .filter_map(|k| view.ids.get(k))
        .map(String::as_str)
        .collect();
    if !elsewhere.is_empty() {
        let listed: Vec<&str> = elsewhere.iter().copied().take(MOST_LISTED).collect();
        let more = elsewhere.len() - listed.len();
        let more = if more > 0 { format!(" and {more} more") } else { String::new() };
        notes.push(format!("Not in this slice: {}{more}.", listed.join(", ")));
    }
    if shown.len() > MOST_LISTED {
        notes.push(format!("{} more are drawn; the table lists all.", shown.len() - MOST_LISTED));
    }
    notes.push(complete(found).to_owned());
    if let (Some(now), Some(_)) = (view.now(), view.slice.y)
        && !picture.frame().window.holds(now)
    {
        notes.push(format!("Today's stocks, {}, lie outside the part that is drawn.", at(view, now)));
    }
    notes
}

/// What is known of the list of equilibria.
fn complete(found: &Equilibria) -> &'static str {
    match (found.complete, found.unresolved.is_empty()) {
        (true, _) => "proved: no other equilibrium is in the search box.",
        (false, true) => "NOT PROVED COMPLETE: the search box may hold others.",
        (false, false) => {
            "NOT PROVED COMPLETE: the search box may hold others in the undecided parts, which the table lists."
        }
    }
}

/// What the species that are not along an axis are held at; `None` where there are none.
pub fn held(view: &View<'_>) -> Option<String> {
    let from = match view.slice.from {
        Held::Nothing => return None,
        Held::Equilibrium(index) => format!("as at {}", view.ids.get(index).map_or("", String::as_str)),
        Held::Now => "as they are today".to_owned(),
        Held::Lower => "at the lower side of the search box".to_owned(),
    };
    let held = (0..view.slice.held.len()).filter(|&i| view.slice.holds(i));
    let (present, absent): (Vec<usize>, Vec<usize>) = held.partition(|&i| view.slice.held[i] != 0.0);
    let value = |&i: &usize| format!("{} = {}", symbol(view.model, i), human(view.slice.held[i]));
    let mut all: Vec<String> = present.iter().take(MOST_HELD).map(value).collect();
    if present.len() > MOST_HELD {
        all.push(format!("{} more as the table has them", present.len() - MOST_HELD));
    }
    match absent.len() {
        0 => {}
        1..=MOST_HELD => all.extend(absent.iter().map(value)),
        count => all.push(format!("{count} species absent")),
    }
    Some(format!("Held {from}: {}", all.join(", ")))
}

pub(super) fn symbol(model: &Model, species: usize) -> String {
    model.species.get(species).map_or_else(String::new, |species| species.symbol.clone())
}
