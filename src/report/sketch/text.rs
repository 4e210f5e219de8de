//! A sketch as lines of text: what it is of, the drawing between its axes, the legend.

use unicode_width::UnicodeWidthStr;

use super::canvas::{Canvas, draw};
use super::legend::{held, legend};
use super::plot::LABEL;
use super::signs::Mark;
use super::ticks::{Tick, across, start, upwards};
use super::{Picture, Style, View};
use crate::model::{Model, TimeKind};
use crate::report::table::{CAUTION, Page};

/// The title of a model, above its sketches.
pub fn heading(model: &Model, page: Page) -> String {
    page.paragraph("", &model.title.value, 0)
}

/// What all sketches end with.
pub fn closing(page: Page) -> String {
    let computed = "Directions, lines and curves are computed; nothing is proved of them.";
    format!("{}{}", page.paragraph("", computed, 0), page.paragraph("", CAUTION, 0))
}

/// One sketch, ending in a line break.
pub fn text(view: &View<'_>, picture: &Picture, page: Page) -> String {
    let canvas = draw(view, picture, page.style);
    let name = view.model.scenarios.get(view.scenario).map_or("", |scenario| &scenario.name);
    let mut text = page.paragraph("", &format!("Scenario: {name}"), 0);
    if let Some(held) = held(view) {
        text.push_str(&page.paragraph("", &held, 2));
    }
    text.push_str(&drawing(view, picture, &canvas, &page));
    text.push_str(&legend(view, picture, &canvas, &page));
    text
}

/// The cells between their axes, with numbers, names and units.
fn drawing(view: &View<'_>, picture: &Picture, canvas: &Canvas, page: &Page) -> String {
    let frame = picture.frame();
    let width = LABEL + 1 + canvas.columns;
    let [side, corner, level, tick_side, tick_level] = match page.style {
        Style::Unicode => ['│', '└', '─', '┤', '┬'],
        Style::Ascii => ['|', '+', '-', '+', '+'],
    };
    let mut text = format!("{}\n", fitted(&upward_caption(view), width, page));
    let ups = upwards(frame.window.y, canvas.rows, LABEL);
    for row in (0..canvas.rows).rev() {
        let label = ups.iter().find(|tick| tick.place == row).map(|tick| tick.label.as_str());
        let mark = if label.is_some() { tick_side } else { side };
        text.push_str(format!("{:>LABEL$}{mark}{}", label.unwrap_or(""), cells(canvas.row(row), page)).trim_end());
        text.push('\n');
    }
    let ticks = across(frame.window.x, canvas.columns);
    let axis = (0..canvas.columns).map(|c| if ticks.iter().any(|tick| tick.place == c) { tick_level } else { level });
    let axis = axis.collect::<String>();
    let numbers = numbers(&ticks, width);
    let caption = fitted(&caption(view.model, view.slice.x), width, page);
    let room = width - caption.width().min(width);
    text + &format!("{:LABEL$}{corner}{axis}\n{}\n{:room$}{caption}\n", "", numbers.trim_end(), "")
}

fn upward_caption(view: &View<'_>) -> String {
    match (view.slice.y, &view.model.time) {
        (Some(species), _) => caption(view.model, species),
        (None, TimeKind::Continuous) => "rate of change".to_owned(),
        (None, TimeKind::Discrete { .. }) => "change in one step".to_owned(),
    }
}

/// A species as an axis names it: symbol, name and unit.
fn caption(model: &Model, species: usize) -> String {
    let Some(species) = model.species.get(species) else { return String::new() };
    let name = if species.name == species.symbol { String::new() } else { format!(" {}", species.name) };
    let unit = species.unit.as_ref().map_or(String::new(), |unit| format!(", {}", unit.value));
    format!("{}{name}{unit}", species.symbol)
}

/// As much of a text as fits.
fn fitted(text: &str, width: usize, page: &Page) -> String {
    let mut fitting = page.clean(text);
    while fitting.width() > width {
        fitting.pop();
    }
    fitting
}

/// The numbers below the axis; the last may have to move to the left.
fn numbers(ticks: &[Tick], width: usize) -> String {
    let mut line = " ".repeat(LABEL + 1);
    for tick in ticks {
        let from = (LABEL + 1 + start(tick)).min(width.saturating_sub(tick.label.len()));
        if from >= line.len() {
            line.push_str(&" ".repeat(from - line.len()));
            line.push_str(&tick.label);
        }
    }
    line
}

/// A row of cells; neighbours of one ink share one attribute run.
fn cells(row: &[Mark], page: &Page) -> String {
    if !page.color {
        return row.iter().map(|mark| mark.glyph(page.style)).collect();
    }
    let mut text = String::new();
    let mut current: Option<&str> = None;
    let last = row.iter().rposition(|&mark| mark != Mark::Blank).map_or(0, |last| last + 1);
    for &mark in &row[..last] {
        // A blank shows no ink, so it need not end a run.
        let ink = if mark == Mark::Blank { current } else { mark.ink() };
        if ink != current {
            text.push_str(if current.is_some() { "\u{1b}[0m" } else { "" });
            text.push_str(&ink.map_or(String::new(), |ink| format!("\u{1b}[{ink}m")));
            current = ink;
        }
        text.push(mark.glyph(page.style));
    }
    text.push_str(if current.is_some() { "\u{1b}[0m" } else { "" });
    text
}
