//! What the signs of a drawing mean, as far as they occur in it: one list, in full for reading and in a word or two for a
//! line below a screen.

use super::canvas::{Canvas, draw};
use super::legend::{at, symbol};
use super::signs::{Growth, Mark, flow};
use super::trace::Trace;
use super::{Extras, Picture, Style, View};
use crate::analysis::linearise::Kind;
use crate::model::TimeKind;
use crate::report::kinds::KINDS;
use crate::report::table::{clean, human};

/// One sign.
pub(super) struct Meaning {
    pub(super) sign: String,
    pub(super) long: String,
    pub(super) short: String,
}

/// The signs that occur, each with its meaning in a word or two; those of equilibria at the end.
pub fn signs_used(view: &View<'_>, picture: &Picture, extras: &Extras<'_>, style: Style) -> Vec<(String, String)> {
    let canvas = draw(view, picture, extras, style);
    let mut signs: Vec<(String, String)> =
        meanings(view, picture, &canvas, style).into_iter().map(|one| (one.sign, clean(&one.short, style))).collect();
    signs.extend(moments(view, picture, extras, &canvas, style));
    signs.extend(states(&canvas, style));
    signs
}

/// The signs that occur, but those of equilibria.
pub(super) fn meanings(view: &View<'_>, picture: &Picture, canvas: &Canvas, style: Style) -> Vec<Meaning> {
    let has = |wanted: &dyn Fn(Mark) -> bool| canvas.marks().find(|&mark| wanted(mark));
    let mut list: Vec<Meaning> = Vec::new();
    let mut add = |mark: Option<Mark>, long: String, short: String| {
        list.extend(mark.map(|mark| Meaning { sign: sign(mark, style), long, short }));
    };
    let is_map = view.step().is_some();
    let flow = if is_map { "what one step adds to the state" } else { "which way the state moves" };
    add(
        has(&|mark| matches!(mark, Mark::Flow(..))),
        flow.to_owned(),
        if is_map { "one step" } else { "flow" }.to_owned(),
    );
    if let Picture::Line(_) = picture {
        add(has(&|mark| mark == Mark::Rate), rate(view), if is_map { "change" } else { "rate" }.to_owned());
    }
    let name = |species: Option<usize>| species.map_or(String::new(), |species| symbol(view.model, species));
    let (x, y) = (name(Some(view.slice.x)), name(view.slice.y));
    let still = |who: &str| format!("growth of {who} per head is 0");
    add(has(&|mark| mark == Mark::Growth(Growth::Across)), still(&x), format!("{x} still"));
    add(has(&|mark| mark == Mark::Growth(Growth::Upwards)), still(&y), format!("{y} still"));
    add(has(&|mark| mark == Mark::Growth(Growth::Both)), still(&format!("{x} and of {y}")), "both still".to_owned());
    let straight = "straight path of the linear part, into or out of its equilibrium";
    add(has(&|mark| matches!(mark, Mark::Straight(_, true))), straight.to_owned(), "straight path".to_owned());
    let divide = "leads into a saddle; the paths on its two sides part there";
    add(has(&|mark| mark == Mark::Divide), divide.to_owned(), "divides paths".to_owned());
    let forwards = "path from the chosen point";
    add(has(&|mark| mark == Mark::Forwards), forwards.to_owned(), "path".to_owned());
    let backwards = "path that leads to the chosen point";
    add(has(&|mark| mark == Mark::Backwards), backwards.to_owned(), "its past".to_owned());
    add(has(&|mark| mark == Mark::Point), "the chosen point".to_owned(), "point".to_owned());
    add(has(&|mark| mark == Mark::Now), today(view), "today".to_owned());
    list
}

fn sign(mark: Mark, style: Style) -> String {
    match mark {
        Mark::Flow(octant, _) => flow(octant, style).to_owned(),
        Mark::Straight(..) if style == Style::Ascii => "-->".to_owned(),
        mark => mark.glyph(style).to_string(),
    }
}

/// Kinds that occur, by what their signs tell apart.
fn states(canvas: &Canvas, style: Style) -> Vec<(String, String)> {
    let mut found: Vec<(String, String)> = Vec::new();
    for look in KINDS {
        let is_here = |mark: Mark| matches!(mark, Mark::State(l) | Mark::Chosen(l) if l.glyph == look.glyph);
        let sign = Mark::State(look).glyph(style).to_string();
        if canvas.marks().any(is_here) && found.iter().all(|(known, _)| *known != sign) {
            let word = match look.kind {
                Kind::Saddle => "saddle",
                Kind::Centre => "centre",
                Kind::Undecided => "undecided",
                _ if look.word.starts_with("stable") => "stable",
                _ => "unstable",
            };
            found.push((sign, word.to_owned()));
        }
    }
    found
}

/// How far apart the moments on the paths are.
fn moments(
    view: &View<'_>,
    picture: &Picture,
    extras: &Extras<'_>,
    canvas: &Canvas,
    style: Style,
) -> Option<(String, String)> {
    canvas.marks().find(|mark| matches!(mark, Mark::Moment(_)))?;
    let unit = clean(&view.model.time_unit.value, style);
    let every = Trace::new(view, picture.frame(), extras.forwards.or(extras.backwards)?).every;
    let number = if (1e-4..1e6).contains(&every) { format!("{every}") } else { human(every) };
    Some(("1 2 3".to_owned(), format!("every {number} {unit}")))
}

fn today(view: &View<'_>) -> String {
    let today = view.now().map_or(String::new(), |now| at(view, now));
    format!("today's stocks: {today}{}", if stays(view) { "" } else { "; other species are not as held here" })
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
