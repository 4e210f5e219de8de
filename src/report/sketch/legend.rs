//! What the signs of a drawing mean, as far as they occur in it, and which equilibria are where.

use super::canvas::Canvas;
use super::signs::{Growth, Mark, flow, listed};
use super::{Picture, Style, View};
use crate::analysis::equilibria::Equilibria;
use crate::analysis::field::Held;
use crate::analysis::linearise::{Kind, Unavailable};
use crate::model::{Model, TimeKind};
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
    for (sign, meaning) in signs(view, picture, canvas, page.style) {
        text.push_str(&page.paragraph(&format!("  {sign}"), &meaning, INDENT));
    }
    let shown: Vec<usize> = view.in_slice().collect();
    for &index in shown.iter().take(MOST_LISTED) {
        text.push_str(&equilibrium(view, picture, index, page));
    }
    for note in notes(view, &shown) {
        text.push_str(&page.paragraph("", &note, 2));
    }
    text
}

/// The signs that occur, with their meanings.
fn signs(view: &View<'_>, picture: &Picture, canvas: &Canvas, style: Style) -> Vec<(String, String)> {
    let is_map = matches!(view.model.time, TimeKind::Discrete { .. });
    let has = |wanted: &dyn Fn(Mark) -> bool| canvas.marks().find(|&mark| wanted(mark));
    let mut signs: Vec<(String, String)> = Vec::new();
    let mut add = |mark: Option<Mark>, meaning: String| {
        if let Some(mark) = mark {
            let sign = match mark {
                Mark::Flow(octant, _) => flow(octant, style).to_owned(),
                Mark::Straight(..) if style == Style::Ascii => "-->".to_owned(),
                mark => mark.glyph(style).to_string(),
            };
            signs.push((sign, meaning));
        }
    };
    let flow = if is_map { "what one step adds to the state" } else { "which way the state moves" };
    add(has(&|mark| matches!(mark, Mark::Flow(..))), flow.to_owned());
    if let Picture::Line(_) = picture {
        add(has(&|mark| mark == Mark::Rate), rate(view));
    }
    let name = |species: Option<usize>| species.map_or(String::new(), |species| symbol(view.model, species));
    let still = |who: String| format!("growth of {who} per head is 0");
    let (x, y) = (name(Some(view.slice.x)), name(view.slice.y));
    add(has(&|mark| mark == Mark::Growth(Growth::Across)), still(x.clone()));
    add(has(&|mark| mark == Mark::Growth(Growth::Upwards)), still(y.clone()));
    add(has(&|mark| mark == Mark::Growth(Growth::Both)), still(format!("{x} and of {y}")));
    let straight = "straight path of the linear part, into or out of its equilibrium";
    add(has(&|mark| matches!(mark, Mark::Straight(_, true))), straight.to_owned());
    let divide = "leads into a saddle; the paths on its two sides part there";
    add(has(&|mark| mark == Mark::Divide), divide.to_owned());
    let today = view.now().map_or(String::new(), |now| at(view, now));
    add(
        has(&|mark| mark == Mark::Now),
        format!("today's stocks: {today}{}", if stays(view) { "" } else { "; other species are not as held here" }),
    );
    signs
}

/// Whether the stocks of all species that are held are known to be as they are held.
fn stays(view: &View<'_>) -> bool {
    let mut now = view.slice.held.clone();
    let held: Vec<usize> = (0..now.len()).filter(|&i| view.slice.holds(i)).collect();
    for &i in &held {
        let Some(survey) = view.model.now.iter().find(|survey| survey.species.0 == i) else { return false };
        now[i] = survey.value;
    }
    view.slice.has(&now)
}

fn rate(view: &View<'_>) -> String {
    let symbol = symbol(view.model, view.slice.x);
    match view.model.time {
        TimeKind::Continuous => format!("d{symbol}/dt, the rate of change, against {symbol}"),
        TimeKind::Discrete { .. } => format!("next {symbol} - {symbol}, what one step adds, against {symbol}"),
    }
}

/// A place along the axes, as `P = 88.57, D = 78.57`.
fn at(view: &View<'_>, [x, y]: [f64; 2]) -> String {
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
    match frame.cell(if view.slice.y.is_some() { place } else { [place[0], 0.0] }) {
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
fn notes(view: &View<'_>, shown: &[usize]) -> Vec<String> {
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
        && !view.window.holds(now)
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
pub(super) fn held(view: &View<'_>) -> Option<String> {
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
