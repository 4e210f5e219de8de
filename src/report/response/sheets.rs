//! The tables that people see of one scenario's response: thresholds, branches, yields, bands.

use crate::analysis::linearise::Kind;
use crate::analysis::response::{Band, BestYield, Branch, Edge, Threshold};
use crate::model::ParameterId;

use super::super::kinds;
use super::super::table::columns::{Glyphs, Unit};
use super::super::table::layout::{Align, Cell, Head, Ink};
use super::super::table::sheet::Sheet;
use super::super::table::{Table, human};
use super::One;
use super::plot::mark;
use super::segments::{Segment, segments};
use super::words::{community, criticality, kind, name, share, taking, taking_unit, told_apart, unit};

/// Species whose abundances have columns; more would fill a page with them, and CSV and JSON have all.
const MOST_SPECIES: usize = 8;

fn control_head(one: &One<'_>) -> Head {
    let parameter = one.along.response.control.parameter;
    head(name(one.table.model, parameter), unit(one.table.model, parameter))
}

pub(super) fn head(title: &str, unit: &str) -> Head {
    Head { unit: unit.to_owned(), ..Head::new(title, Align::Point) }
}

/// A column for each abundance, where they are few enough.
pub(super) fn state_heads(table: &Table<'_>) -> Vec<Head> {
    let species = table.model.species.iter().enumerate();
    let all: Vec<Head> = species.map(|(i, species)| head(&species.symbol, &Unit::State.of(table, Some(i)))).collect();
    if all.len() > MOST_SPECIES { Vec::new() } else { all }
}

/// Shares of the largest abundance on the picture below which one is 0 but for rounding.
const ROUNDING: f64 = 1e-12;

/// Abundances for people: what is next to nothing beside all that the species has on the picture is 0.
fn tidy(one: &One<'_>, state: &[f64]) -> Vec<Cell> {
    let points = || one.along.response.branches.iter().flat_map(|branch| &branch.points);
    let largest =
        |i: usize| points().filter_map(|point| point.state.get(i)).fold(0.0, |most: f64, x| most.max(x.abs()));
    let tidied = state.iter().enumerate().map(|(i, &x)| if x.abs() <= ROUNDING * largest(i) { 0.0 } else { x });
    if state.len() > MOST_SPECIES { Vec::new() } else { state_cells(&tidied.collect::<Vec<_>>()) }
}

pub(super) fn state_cells(state: &[f64]) -> Vec<Cell> {
    if state.len() > MOST_SPECIES { Vec::new() } else { state.iter().map(|&x| Cell::new(human(x))).collect() }
}

/// Whether a threshold concerns states that there can be.
pub(super) fn is_shown(threshold: &Threshold) -> bool {
    threshold.arms.is_empty() || threshold.arms.iter().any(|arm| arm.feasible)
}

/// The thresholds that concern states that there can be.
pub(super) fn thresholds(one: &One<'_>) -> Sheet {
    let all = one.along.response.thresholds.iter().enumerate();
    let shown: Vec<(usize, &Threshold)> = all.filter(|(_, threshold)| is_shown(threshold)).collect();
    let at = told_apart(&shown.iter().map(|(_, threshold)| threshold.at).collect::<Vec<_>>());
    let eigenvalues = if one.table.is_map() { String::new() } else { Unit::PerTime.of(one.table, None) };
    let leading = Head { unit: eigenvalues, ..Head::new("leading eigenvalues", Align::Left) };
    let heads = [vec![Head::new("threshold", Align::Left), control_head(one)], state_heads(one.table)].concat();
    let heads = [heads, vec![leading, Head::new("soft or hard", Align::Left)]].concat();
    let row = |((place, threshold), at): (&(usize, &Threshold), String)| {
        // The sign that marks it in the drawing.
        let first = vec![Cell::new(format!("{} {}", mark(*place), kind(threshold.kind))), Cell::new(at)];
        let last = vec![Cell::new(spectrum(threshold)), Cell::new(threshold.criticality.map_or("", criticality))];
        [first, tidy(one, &threshold.state), last].concat()
    };
    Sheet { heads, rows: shown.iter().zip(at).map(row).collect() }
}

/// The leading eigenvalues, two of them; at a kink those on both sides.
fn spectrum(threshold: &Threshold) -> String {
    let leading = |values: &[nalgebra::Complex<f64>]| {
        let first = values.first().map_or_else(String::new, |value| complex(value.re, value.im));
        // The other of a pair says nothing more.
        match values.get(1).filter(|_| values.first().is_some_and(|first| first.im == 0.0)) {
            Some(second) => format!("{first}; {}", complex(second.re, second.im)),
            None => first,
        }
    };
    match &threshold.other_side {
        Some(other) => format!("{} | {}", leading(&threshold.eigenvalues), leading(other)),
        None => leading(&threshold.eigenvalues),
    }
}

/// A number and how far it is above and below the real axis; what is next to nothing beside the other part is none.
fn complex(re: f64, im: f64) -> String {
    let size = re.hypot(im).max(1e-9);
    let [re, im] = [re, im].map(|x| if x.abs() <= 1e-9 * size || x.abs() < 1e-12 { 0.0 } else { x });
    if im == 0.0 { human(re) } else { format!("{} +- {}i", human(re), human(im.abs())) }
}

/// A branch's name.
pub(super) fn branch_id(place: usize) -> String {
    format!("B{}", place + 1)
}

/// The names of the equilibria that a branch passes through.
pub(super) fn passes(one: &One<'_>, branch: &Branch) -> Vec<String> {
    branch.equilibria.iter().filter_map(|&place| one.ids.get(place).cloned()).collect()
}

/// Each part of each branch along which there can be a state.
pub(super) fn branches(one: &One<'_>, glyphs: Glyphs) -> Sheet {
    let control = control_head(one);
    let ends = ["from", "to"].map(|word| Head { title: format!("{word} {}", control.title), ..control.clone() });
    let mut heads = vec![Head::new("branch", Align::Left), Head::new("state", Align::Left)];
    heads.extend(ends);
    heads.extend([Head::new("with", Align::Left), Head::new("type", Align::Left)]);
    let rows = one.along.response.branches.iter().enumerate().flat_map(|(place, branch)| {
        let has_length = |part: &Segment| part.ends[0] != part.ends[1] || branch.points.len() == 1;
        let parts = segments(branch).into_iter().filter(move |part| part.feasible && has_length(part));
        parts.map(move |part| segment(one, place, branch, &part, glyphs)).collect::<Vec<_>>()
    });
    Sheet { heads, rows: rows.collect() }
}

fn segment(one: &One<'_>, place: usize, branch: &Branch, part: &Segment, glyphs: Glyphs) -> Vec<Cell> {
    let [low, high] = [part.ends[0].min(part.ends[1]), part.ends[0].max(part.ends[1])];
    let types = part.kinds.iter().enumerate();
    let types: Vec<String> =
        types.map(|(place, kind)| look(*kind, if place == 0 { glyphs } else { Glyphs::Words })).collect();
    vec![
        Cell::new(branch_id(place)),
        Cell::new(passes(one, branch).join(", ")),
        Cell::new(human(low)),
        Cell::new(human(high)),
        Cell::new(community(one.table.model, &branch.present)),
        Cell::new(types.join(", ")),
    ]
}

/// A type with its glyph.
pub(super) fn look(kind: Option<Kind>, glyphs: Glyphs) -> String {
    let look = kind.map_or(kinds::UNKNOWN, kinds::of);
    match glyphs {
        Glyphs::Unicode => format!("{} {}", look.glyph, look.word),
        Glyphs::Ascii => format!("{} {}", look.ascii, look.word),
        Glyphs::Words => look.word.to_owned(),
    }
}

/// The largest yields and values.
pub(super) fn yields(one: &One<'_>) -> Sheet {
    let mut heads = vec![Head::new("largest", Align::Left), head("amount", ""), Head::new("unit", Align::Left)];
    heads.push(control_head(one));
    heads.extend(state_heads(one.table));
    heads.extend([Head::new("attained", Align::Left), Head::new("nearest loss", Align::Left)]);
    Sheet { heads, rows: one.along.advice.best.iter().map(|best| best_yield(one, best)).collect() }
}

fn best_yield(one: &One<'_>, best: &BestYield) -> Vec<Cell> {
    let response = &one.along.response;
    let model = one.table.model;
    let taken = best.taking.and_then(|place| response.takings.get(place));
    let what = taken.map_or_else(|| "all harvests".to_owned(), |taken| taking(model, taken));
    let unit = taken.map_or_else(String::new, |taken| taking_unit(model, taken.species));
    let threshold = |place: usize| response.thresholds.get(place);
    let attained = match (best.attained, best.edge.and_then(threshold)) {
        (true, _) => "yes".to_owned(),
        (false, Some(edge)) => format!("no: {}", kind(edge.kind)),
        (false, None) => "no: end of the range".to_owned(),
    };
    // That at which the yield is approached has been said.
    let other = best.nearest.filter(|(place, _)| best.edge != Some(*place));
    let nearest = other.and_then(|(place, distance)| Some((threshold(place)?, distance)));
    let nearest = nearest.map_or_else(String::new, |(edge, distance)| {
        let side = if edge.at > best.at { "above" } else { "below" };
        format!("{} at {}, {} {side}", kind(edge.kind), human(edge.at), share(distance))
    });
    let first = vec![Cell::new(what), Cell::new(human(best.amount)), Cell::new(unit), Cell::new(human(best.at))];
    [first, tidy(one, &best.state), vec![Cell::new(attained), Cell::new(nearest)]].concat()
}

/// The interval of each parameter over which the state that advice is about persists and is stable.
pub(super) fn bands(one: &One<'_>) -> Sheet {
    let heads = vec![
        Head::new("parameter", Align::Left),
        head("present", ""),
        head("stable from", ""),
        head("to", ""),
        Head::new("below it", Align::Left),
        Head::new("above it", Align::Left),
        Head::new("margin", Align::Left),
    ];
    Sheet { heads, rows: one.along.margins.bands.iter().map(|band| self::band(one, band)).collect() }
}

fn band(one: &One<'_>, band: &Band) -> Vec<Cell> {
    let margin = band.margin();
    let share = |x: f64| if band.present == 0.0 { String::new() } else { format!(", {}", share(x / band.present)) };
    vec![
        Cell::new(captioned(one, band.parameter)),
        Cell::new(human(band.present)),
        Cell::new(human(band.ends[0])),
        Cell::new(human(band.ends[1])),
        edge(band, 0),
        edge(band, 1),
        Cell::new(margin.map_or_else(String::new, |(x, _)| format!("{}{}", human(x), share(x)))),
    ]
}

/// A parameter with its unit.
fn captioned(one: &One<'_>, parameter: ParameterId) -> String {
    match (name(one.table.model, parameter), unit(one.table.model, parameter)) {
        (name, "") => name.to_owned(),
        (name, unit) => format!("{name}, {unit}"),
    }
}

/// What happens at an end of a band.
fn edge(band: &Band, end: usize) -> Cell {
    match (&band.thresholds[end], band.edges[end]) {
        (Some(threshold), _) => Cell::new(kind(threshold.kind)),
        (None, Edge::Range) => Cell::new("range ends"),
        (None, Edge::NotFollowed | Edge::Threshold(_)) => Cell::inked("not followed", Ink::Undecided),
    }
}

/// Parameters and values in a row: `E = 1.500, r = 0.8000`.
pub(super) fn values(one: &One<'_>, values: &[(ParameterId, f64)]) -> String {
    let all: Vec<String> = values.iter().map(|&(id, x)| super::words::setting(one.table.model, id, x)).collect();
    all.join(", ")
}
