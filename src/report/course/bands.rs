//! A course drawn: one small plot a species below the other, over one axis of time.
//!
//! One plot for all would need one scale for kilotonnes of sprat and a dozen whales; bands read well from 60 x 20 up. Where
//! not all fit, those from a given one on are drawn, and it is said how many are not.

use unicode_width::UnicodeWidthStr;

use super::Course;
use crate::analysis::field::{Frame, Scale, Window, rounded};
use crate::model::Model;
use crate::report::grid::{Grid, Ink};
use crate::report::sketch::{LARGEST, Size, Style, Tick, across, fitted, start, upwards};

/// Characters of the numbers on the left.
const LABEL: usize = 7;
/// The axis of time, its numbers and its caption.
const BELOW: usize = 3;
/// The smallest band: a caption and three rows.
const LEAST: usize = 4;
/// Above this share of its highest value a band need not begin at 0.
const HIGH: f64 = 0.5;

/// The species of a course that are worth a band: those that are ever there.
fn shown(course: &Course) -> Vec<usize> {
    let is_there = |&i: &usize| course.states.iter().any(|state| state[i] > 0.0) || course.equilibrium[i] > 0.0;
    let species = course.states.first().map_or(0, Vec::len).min(course.equilibrium.len());
    (0..species).filter(is_there).collect()
}

/// A course in just so many columns and rows, bands from the `from`-th species on; `from` is held to where it still fills
/// the grid.
pub fn drawing(course: &Course, model: &Model, from: usize, size: Size, style: Style) -> Grid {
    let size = Size { columns: size.columns.min(LARGEST.columns), rows: size.rows.min(LARGEST.rows) };
    let mut grid = Grid::new(size.columns, size.rows);
    let species = shown(course);
    let (Some(&until), true) = (course.times.last(), size.columns > LABEL + 2 && size.rows >= LEAST + BELOW) else {
        return grid;
    };
    if species.is_empty() {
        grid.label(0, 0, fitted("Nobody is there.", size.columns, style), Ink::Plain);
        return grid;
    }
    let room = size.rows - BELOW;
    let fitting = (room / LEAST).min(species.len());
    let from = from.min(species.len() - fitting);
    for (place, &which) in species[from..from + fitting].iter().enumerate() {
        // The rows that are left over go to the first bands.
        let [top, bottom] = [place, place + 1].map(|k| k * room / fitting);
        let band = Band { course, model, species: which, top, rows: bottom - top - 1, until, style };
        band.draw(&mut grid);
    }
    let hidden = species.len() - fitting;
    time_axis(&mut grid, model, until, hidden, style);
    grid
}

/// How many bands fit, and how many there are: as far as one can scroll.
pub fn bands(course: &Course, size: Size) -> [usize; 2] {
    let all = shown(course).len();
    [(size.rows.saturating_sub(BELOW) / LEAST).min(all), all]
}

/// The signs of the drawing, each with its meaning in a word or two.
pub fn signs(course: &Course, style: Style) -> Vec<(String, String)> {
    let mut signs = vec![(path(style).to_string(), "path".to_owned())];
    if !course.predicted.is_empty() {
        signs.push((PREDICTED.to_string(), "linear prediction".to_owned()));
    }
    signs.push((level(style).to_string(), "equilibrium".to_owned()));
    signs
}

/// The linear prediction.
const PREDICTED: char = '+';

fn path(style: Style) -> char {
    if style == Style::Unicode { '×' } else { 'x' }
}

fn level(style: Style) -> char {
    if style == Style::Unicode { '─' } else { '-' }
}

/// The plot of one species.
struct Band<'b> {
    course: &'b Course,
    model: &'b Model,
    species: usize,
    /// The row of its caption.
    top: usize,
    rows: usize,
    until: f64,
    style: Style,
}

impl Band<'_> {
    fn draw(&self, grid: &mut Grid) {
        let columns = grid.columns - LABEL - 1;
        let window = Window { x: [0.0, self.until], y: self.sides() };
        let frame = Frame::new(window, columns, self.rows);
        self.axis(grid, &frame);
        let there = self.course.equilibrium.get(self.species).copied().unwrap_or(0.0);
        if let Some([_, row]) = frame.cell([0.0, there]) {
            (0..columns).for_each(|column| self.put(grid, &frame, [column, row], level(self.style), Ink::Faint));
        }
        self.curve(grid, &frame, &self.course.predicted, PREDICTED, Ink::Numerical);
        self.curve(grid, &frame, &self.course.states, path(self.style), Ink::Species(self.species));
        grid.label(0, self.top, fitted(&self.caption(), grid.columns, self.style), Ink::Strong);
    }

    /// The species as an axis names it.
    fn caption(&self) -> String {
        let Some(species) = self.model.species.get(self.species) else { return String::new() };
        let name = if species.name == species.symbol { String::new() } else { format!(" {}", species.name) };
        let unit = species.unit.as_ref().map_or(String::new(), |unit| format!(", {}", unit.value));
        format!("{}{name}{unit}", species.symbol)
    }

    /// From 0, or from near the lowest value where that is high, to a little above the highest of the path; a prediction
    /// that goes further is cut.
    fn sides(&self) -> [f64; 2] {
        let there = self.course.equilibrium.get(self.species).copied().unwrap_or(0.0);
        let values = self.course.states.iter().map(|state| state[self.species]).filter(|x| x.is_finite());
        let (low, high) = values.fold((there, there), |(low, high), x| (low.min(x), high.max(x)));
        let from = if low > HIGH * high { (low - (high - low).max(0.02 * high) * 0.1).max(0.0) } else { 0.0 };
        let to = from + rounded((high - from).max(0.02 * high) * 1.02);
        if to > from { [from, to] } else { [0.0, 1.0] }
    }

    fn axis(&self, grid: &mut Grid, frame: &Frame) {
        let [side, with_tick] = if self.style == Style::Unicode { ['│', '┤'] } else { ['|', '+'] };
        (0..self.rows).for_each(|row| grid.put(LABEL, self.top + 1 + row, side, Ink::Plain));
        for tick in upwards(frame.window.y, Scale::Linear, self.rows, LABEL) {
            let row = self.top + self.rows - tick.place;
            grid.put(LABEL, row, with_tick, Ink::Plain);
            grid.write(LABEL - tick.label.len(), row, &tick.label, Ink::Plain);
        }
    }

    /// One cell a column and value; where a map takes longer than a column for a step, its states alone.
    fn curve(&self, grid: &mut Grid, frame: &Frame, states: &[Vec<f64>], glyph: char, ink: Ink) {
        let value = |state: &Vec<f64>| state.get(self.species).copied().unwrap_or(f64::NAN);
        let cells = states.iter().zip(&self.course.times).map(|(state, &time)| frame.cell([time, value(state)]));
        let mut before: Option<[usize; 2]> = None;
        for cell in cells {
            if let Some([column, row]) = cell {
                let joins = before.filter(|_| self.course.step.is_none()).map_or(row, |[_, before]| before);
                // A steep stretch fills the rows between.
                let [low, high] = if joins < row { [joins + 1, row] } else { [row, joins.max(row + 1) - 1] };
                (low..=high.max(low)).for_each(|row| self.put(grid, frame, [column, row], glyph, ink));
                self.put(grid, frame, [column, row], glyph, ink);
            }
            before = cell;
        }
    }

    fn put(&self, grid: &mut Grid, frame: &Frame, [column, row]: [usize; 2], glyph: char, ink: Ink) {
        grid.put(LABEL + 1 + column, self.top + frame.rows - row, glyph, ink);
    }
}

/// The axis of time below the bands, and how many species are not shown.
fn time_axis(grid: &mut Grid, model: &Model, until: f64, hidden: usize, style: Style) {
    let [corner, along, with_tick] = if style == Style::Unicode { ['└', '─', '┬'] } else { ['+', '-', '+'] };
    let row = grid.rows - BELOW;
    let columns = grid.columns - LABEL - 1;
    grid.put(LABEL, row, corner, Ink::Plain);
    (0..columns).for_each(|column| grid.put(LABEL + 1 + column, row, along, Ink::Plain));
    let ticks: Vec<Tick> = across([0.0, until], Scale::Linear, columns);
    let mut free = 0;
    for tick in &ticks {
        grid.put(LABEL + 1 + tick.place, row, with_tick, Ink::Plain);
        let from = (LABEL + 1 + start(tick)).min(grid.columns.saturating_sub(tick.label.len()));
        if from >= free {
            grid.write(from, row + 1, &tick.label, Ink::Plain);
            free = from + tick.label.len() + 1;
        }
    }
    let unit = fitted(&format!("time, {}", model.time_unit.value), grid.columns / 2, style);
    let last = grid.rows - 1;
    grid.label(grid.columns - unit.width(), last, unit, Ink::Plain);
    if hidden > 0 {
        let text = format!("{hidden} more species");
        grid.label(0, last, fitted(&text, grid.columns - grid.columns / 2, style), Ink::Faint);
    }
}
