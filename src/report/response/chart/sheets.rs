//! The tables that people see of a chart: regions, points, curves.

use super::One;
use super::map::letter;
use crate::analysis::linearise::Kind;
use crate::analysis::response::{ChartCurve, ChartPoint, Region};
use crate::report::response::meaning::of_point;
use crate::report::response::plot::mark;
use crate::report::response::sheets::{head, look, state_cells, state_heads};
use crate::report::response::words::{community, kind, name, unit};
use crate::report::table::columns::Glyphs;
use crate::report::table::human;
use crate::report::table::layout::{Align, Cell, Head, Ink};
use crate::report::table::sheet::Sheet;
use crate::report::table::words::{UNDECIDED, proof};

pub(super) fn control_heads(one: &One<'_>) -> [Head; 2] {
    let model = one.table.model;
    one.chart.controls.map(|control| head(name(model, control.parameter), unit(model, control.parameter)))
}

/// Each region with its states, those that hold first.
pub(super) fn regions(one: &One<'_>, glyphs: Glyphs) -> Sheet {
    let mut heads = vec![Head::new("region", Align::Left)];
    heads.extend(control_heads(one));
    heads.extend(["states", "sure", "which"].map(|title| Head::new(title, Align::Left)));
    let row = |(place, region): (usize, &Region)| {
        vec![
            Cell::new(letter(place)),
            Cell::new(human(region.inside[0])),
            Cell::new(human(region.inside[1])),
            Cell::new(region.equilibria.len().to_string()),
            if region.complete {
                Cell::inked(proof(true), Ink::Proved)
            } else {
                Cell::inked(UNDECIDED, Ink::Undecided)
            },
            Cell::new(states(one, region, glyphs)),
        ]
    };
    Sheet { heads, rows: one.chart.regions.iter().enumerate().map(row).collect() }
}

/// The same as sentences.
pub(super) fn regions_said(one: &One<'_>, glyphs: Glyphs) -> Vec<String> {
    let said = |(place, region): (usize, &Region)| {
        let [x, y] = one.chart.controls.map(|control| name(one.table.model, control.parameter));
        let sure = if region.complete { proof(true) } else { UNDECIDED };
        let count = match region.equilibria.len() {
            1 => "1 state".to_owned(),
            count => format!("{count} states"),
        };
        let [at_x, at_y] = region.inside.map(human);
        let states = states(one, region, glyphs);
        format!("{}: {count}, {sure} at {x} = {at_x}, {y} = {at_y}: {states}.", letter(place))
    };
    one.chart.regions.iter().enumerate().map(said).collect()
}

/// States in words, equal ones counted, those that hold first.
pub(super) fn states(one: &One<'_>, region: &Region, glyphs: Glyphs) -> String {
    let mut all: Vec<(bool, String, usize)> = Vec::new();
    for state in &region.equilibria {
        let text = format!("{} ({})", look(state.kind, glyphs), community(one.table.model, &state.present));
        match all.iter_mut().find(|(_, known, _)| *known == text) {
            Some((.., count)) => *count += 1,
            None => all.push((holds(state.kind), text, 1)),
        }
    }
    all.sort_by_key(|(holds, ..)| !holds);
    let text =
        |(_, text, count): &(bool, String, usize)| if *count == 1 { text.clone() } else { format!("{count} {text}") };
    all.iter().map(text).collect::<Vec<_>>().join("; ")
}

/// Whether a state of this type holds.
pub(super) fn holds(kind: Option<Kind>) -> bool {
    use Kind::{StableImproperNode, StableNode, StableSpiral, StableStar};
    matches!(kind, Some(StableNode | StableSpiral | StableStar | StableImproperNode))
}

/// Cusps and other points on curves.
pub(super) fn points(one: &One<'_>) -> Sheet {
    let mut heads = vec![Head::new("point", Align::Left)];
    heads.extend(control_heads(one));
    heads.extend(state_heads(one.table));
    let row = |(place, point): (usize, &ChartPoint)| {
        let mut cells = vec![Cell::new(format!("{} {}", mark(place), kind(point.kind)))];
        cells.extend(point.at.map(|x| Cell::new(human(x))));
        cells.extend(state_cells(&point.state));
        cells
    };
    Sheet { heads, rows: one.chart.points.iter().enumerate().map(row).collect() }
}

/// What each point means.
pub(super) fn points_said(one: &One<'_>) -> Vec<String> {
    let points = one.chart.points.iter().enumerate();
    points.map(|(place, point)| format!("{} {}: {}.", mark(place), kind(point.kind), of_point(point.kind))).collect()
}

/// Each curve: what happens on it, from where to where it goes, and whether a stable state is lost there.
pub(super) fn curves(one: &One<'_>) -> Sheet {
    let [x, y] = control_heads(one);
    let titled = |word: &str, head: &Head| Head { title: format!("{word} {}", head.title), ..head.clone() };
    let mut heads = vec![Head::new("curve", Align::Left)];
    heads.extend([&x, &y].into_iter().flat_map(|head| [titled("from", head), titled("to", head)]));
    heads.push(Head::new("bounds a stable state", Align::Left));
    Sheet { heads, rows: one.chart.curves.iter().map(curve).collect() }
}

fn curve(curve: &ChartCurve) -> Vec<Cell> {
    let mut cells = vec![Cell::new(kind(curve.kind))];
    for axis in [0, 1] {
        let along = || curve.points.iter().map(|point| point[axis]);
        let ends = [along().fold(f64::INFINITY, f64::min), along().fold(f64::NEG_INFINITY, f64::max)];
        cells.extend(ends.map(|end| Cell::new(if end.is_finite() { human(end) } else { String::new() })));
    }
    let bounding = curve.bounds_stable.iter().filter(|bounds| **bounds).count();
    cells.push(Cell::new(match bounding {
        0 => "no",
        count if count == curve.bounds_stable.len() => "yes",
        _ => "in part",
    }));
    cells
}
