//! The signs of a drawing, and what is said of them: only of those that occur.

use super::super::sheets::is_shown;
use super::super::words;
use super::View;
use super::canvas::{Canvas, Mark};
use super::drawing::cells;
use crate::analysis::response::Response;
use crate::report::grid::Ink;
use crate::report::kinds::STROKES;
use crate::report::sketch::{Size, Style};
use crate::report::table::{clean, human};

/// Signs of thresholds, in their order. No letter of them is the glyph of a kind.
const MARKS: &str = "123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ";
/// The sign of all further ones.
const FURTHER: char = '*';

/// The thresholds that are marked and worth a list, by place: those that concern states that there can be.
pub fn marked(response: &Response) -> Vec<usize> {
    let all = response.thresholds.iter().enumerate();
    all.filter(|(_, threshold)| is_shown(threshold)).map(|(place, _)| place).collect()
}

/// The sign of a threshold, by its place in [`marked`]: a digit, then a letter; all from the 36th on share one.
pub fn mark(rank: usize) -> char {
    MARKS.chars().nth(rank).unwrap_or(FURTHER)
}

impl Mark {
    /// Its character.
    pub(super) fn glyph(self, style: Style) -> char {
        let either = |unicode: char, ascii: char| if style == Style::Unicode { unicode } else { ascii };
        match self {
            Self::Blank => ' ',
            Self::Present => either('│', '|'),
            Self::Rule => either('║', '!'),
            Self::Branch(stroke) => either(stroke.glyph, stroke.ascii),
            Self::State(look, _) => either(look.glyph, look.ascii),
            Self::Threshold(rank) => mark(rank),
        }
    }

    /// What it means, which its sign says as well.
    pub(super) fn ink(self) -> Ink {
        match self {
            Self::Blank | Self::Branch(_) => Ink::Plain,
            Self::Present => Ink::Now,
            Self::Rule => Ink::Point,
            Self::State(_, true) => Ink::Chosen,
            Self::State(_, false) | Self::Threshold(_) => Ink::Strong,
        }
    }
}

/// The signs that are in a drawing of this size, each with its meaning in a word or a few; harmless.
pub fn signs(view: &View<'_>, size: Size, style: Style) -> Vec<(String, String)> {
    let Some([columns, rows]) = cells(size) else { return Vec::new() };
    let canvas = Canvas::new(view, columns, rows);
    let has = |wanted: Mark| canvas.marks().any(|mark| mark == wanted);
    let sign = |mark: Mark, meaning: String| (mark.glyph(style).to_string(), clean(&meaning, style));
    let mut all = Vec::new();
    let strokes = STROKES.iter().filter(|stroke| has(Mark::Branch(**stroke)));
    all.extend(strokes.map(|stroke| sign(Mark::Branch(*stroke), stroke.word.to_owned())));
    let name = control_name(view);
    if has(Mark::Present) {
        let present = human(view.response.control.present);
        all.push(sign(Mark::Present, format!("present {name} = {present}")));
    }
    if let Some(at) = view.rule.filter(|_| has(Mark::Rule)) {
        let is_present = at.to_bits() == view.response.control.present.to_bits();
        let present = if is_present { "present " } else { "" };
        all.push(sign(Mark::Rule, format!("{present}{name} = {}", human(at))));
    }
    let shown = |mark: Mark| if let Mark::Threshold(rank) = mark { Some(rank) } else { None };
    let mut thresholds: Vec<usize> = canvas.marks().filter_map(shown).collect();
    thresholds.sort_unstable();
    if let (Some(&first), Some(&last)) = (thresholds.first(), thresholds.last()) {
        let these = if first == last { mark(first).to_string() } else { format!("{} to {}", mark(first), mark(last)) };
        let word = if first == last { "threshold" } else { "thresholds" };
        all.push((these, word.to_owned()));
    }
    all
}

/// The thresholds, by place in [`marked`], that have no mark in a drawing of this size: they lie outside, or others are in their cells.
pub fn not_marked(view: &View<'_>, size: Size) -> Vec<usize> {
    cells(size).map_or_else(Vec::new, |[columns, rows]| Canvas::new(view, columns, rows).left_out)
}

fn control_name(view: &View<'_>) -> String {
    words::name(view.model, view.response.control.parameter).to_owned()
}
