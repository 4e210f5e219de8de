//! The table of effects in cells: as much of it as fits, and where there is more.

use unicode_width::UnicodeWidthStr;

use super::{Effect, Effects, Interactions, Sign};
use crate::model::{Model, TimeKind};
use crate::report::grid::{Grid, Ink};
use crate::report::sketch::{LARGEST, Size, Style, fitted};
use crate::report::table::human;

/// Characters of a column, with a blank between two.
const COLUMN: usize = 13;
/// Characters of a row's head, at least and at most.
const HEAD: [usize; 2] = [10, 18];
/// The title and the heads of the columns.
const ABOVE: usize = 2;
/// What is to be said below.
const BELOW: usize = 2;
/// What a row is.
const ANSWER: &str = "answer of";
/// What a column is.
const PRESS: &str = "press on";
/// Said after the symbol of an absent species.
const ABSENT: &str = " absent";

/// How many rows and columns of the table a size has room for; at least one each.
pub fn visible(table: &Interactions, model: &Model, size: Size) -> [usize; 2] {
    let n = table.species.len();
    let columns = size.columns.saturating_sub(head_width(table, model)) / COLUMN;
    let rows = size.rows.saturating_sub(ABOVE + BELOW);
    [rows.clamp(1, n.max(1)), columns.clamp(1, n.max(1))]
}

/// The table in just so many columns and rows, from a row and a column on; both are held to where they still fill the grid.
pub fn drawing(table: &Interactions, model: &Model, from: [usize; 2], size: Size, style: Style) -> Grid {
    let size = Size { columns: size.columns.min(LARGEST.columns), rows: size.rows.min(LARGEST.rows) };
    let part = Part::new(table, model, from, size);
    let mut grid = Grid::new(size.columns, size.rows);
    let put = |grid: &mut Grid, column: usize, row: usize, text: &str, ink: Ink| {
        if row < size.rows && column < size.columns {
            grid.label(column, row, fitted(text, size.columns - column, style), ink);
        }
    };
    put(&mut grid, 0, 0, &title(table, model, size.columns), Ink::Strong);
    if !table.species.is_empty() {
        put(&mut grid, 0, 1, ANSWER, Ink::Faint);
    }
    for (place, column) in part.columns.clone().enumerate() {
        let symbol = symbol(table, model, column);
        // A long symbol needs all the room; the heads beside it, and the title, say what a column is.
        let pressed = format!("{PRESS} {symbol}");
        let text = fitted(if pressed.width() < COLUMN { &pressed } else { &symbol }, COLUMN - 1, style);
        let at = part.head + (place + 1) * COLUMN - text.width();
        put(&mut grid, at, 1, &text, Ink::Strong);
    }
    for (place, row) in part.rows.clone().enumerate() {
        let text = fitted(&symbol(table, model, row), part.head - 1, style);
        put(&mut grid, 0, ABOVE + place, &text, Ink::Strong);
        for (across, column) in part.columns.clone().enumerate() {
            let Some(effect) = table.at(row, column) else { continue };
            let text = number(table, effect);
            let at = (part.head + (across + 1) * COLUMN).saturating_sub(text.len());
            put(&mut grid, at, ABOVE + place, &text, ink(effect));
        }
    }
    let foot = (ABOVE + part.rows.len()).min(size.rows.saturating_sub(BELOW));
    for (place, (text, ink)) in notes(table, &part).into_iter().take(BELOW).enumerate() {
        put(&mut grid, 0, foot + place, &text, ink);
    }
    grid
}

/// The whole table as text, ending in a line break.
pub fn text(table: &Interactions, model: &Model, style: Style) -> String {
    let n = table.species.len();
    let columns = head_width(table, model) + n * COLUMN;
    // Wide enough for the title as well.
    let size = Size { columns: columns.max(title(table, model, usize::MAX).width()).max(80), rows: n + ABOVE + BELOW };
    let lines = drawing(table, model, [0, 0], size, style).lines(false).join("\n");
    format!("{}\n", lines.trim_end())
}

/// The signs of tables that are shown together, each with its meaning in a word or two.
pub fn signs(tables: &[&Interactions]) -> Vec<(String, String)> {
    let has = |sign: Sign| tables.iter().flat_map(|table| &table.entries).any(|effect| effect.sign == sign);
    let mixed = |table: &&&Interactions| table.effects == Effects::Direct && table.entries.iter().any(is_bracketed);
    let is_mixed = tables.iter().find(mixed).is_some();
    let all = [
        (has(Sign::Positive), "+", "more"),
        (has(Sign::Negative), "-", "less"),
        (has(Sign::Zero), "0", "no effect"),
        (has(Sign::Undecided), "?", "sign undecided"),
        (is_mixed, "( )", "sign numerical, others proved"),
    ];
    let used = all.into_iter().filter(|(is_used, ..)| *is_used);
    used.map(|(_, sign, meaning)| (sign.to_owned(), meaning.to_owned())).collect()
}

/// What is seen of a table.
struct Part {
    head: usize,
    rows: std::ops::Range<usize>,
    columns: std::ops::Range<usize>,
    all: usize,
}

impl Part {
    fn new(table: &Interactions, model: &Model, from: [usize; 2], size: Size) -> Self {
        let all = table.species.len();
        let count = visible(table, model, size).map(|count| count.min(all));
        let range = |axis: usize| {
            let from = from[axis].min(all - count[axis]);
            from..from + count[axis]
        };
        Self { head: head_width(table, model), rows: range(0), columns: range(1), all }
    }

    fn is_whole(&self) -> bool {
        self.rows.len() == self.all && self.columns.len() == self.all
    }
}

fn notes(table: &Interactions, part: &Part) -> Vec<(String, Ink)> {
    let mut notes = Vec::new();
    if table.nearly_singular {
        let text = "Nearly singular: fewer than half of the digits of these numbers are good.";
        notes.push((text.to_owned(), Ink::Warning));
    }
    if !part.is_whole() {
        let span = |range: &std::ops::Range<usize>| format!("{} to {}", range.start + 1, range.end);
        let text = format!("rows {}, columns {} of {}", span(&part.rows), span(&part.columns), part.all);
        notes.push((text, Ink::Faint));
    }
    if table.species.is_empty() {
        notes.push(("Nobody is there.".to_owned(), Ink::Plain));
    }
    notes
}

/// What the table is, how to read it, and how sure it is: at length where there is room.
fn title(table: &Interactions, model: &Model, room: usize) -> String {
    let unit = &model.time_unit.value;
    let [long, short] = match (table.effects, &model.time) {
        (Effects::Direct, TimeKind::Continuous) => [
            format!("Direct effects: on the growth of the row, per {unit}, of one more of the column"),
            format!("Direct: on the row's growth per {unit}, of one more of column"),
        ],
        (Effects::Direct, TimeKind::Discrete { .. }) => [
            "Direct effects: on the next state of the row, of one more of the column".to_owned(),
            "Direct: on the row's next state, of one more of column".to_owned(),
        ],
        (Effects::Net, TimeKind::Continuous) => [
            format!("Net effects (numerical): lasting answer of the row to one more per {unit} of the column"),
            format!("Net (numerical): row's lasting answer to +1 per {unit} of column"),
        ],
        (Effects::Net, TimeKind::Discrete { .. }) => [
            "Net effects (numerical): lasting answer of the row to one more at each step of the column".to_owned(),
            "Net (numerical): row's lasting answer to +1 a step of column".to_owned(),
        ],
    };
    if long.width() <= room { long } else { short }
}

fn symbol(table: &Interactions, model: &Model, place: usize) -> String {
    let symbol = table.species.get(place).and_then(|&i| model.species.get(i)).map_or("", |species| &species.symbol);
    let absent = if table.present.get(place) == Some(&false) { ABSENT } else { "" };
    format!("{symbol}{absent}")
}

fn head_width(table: &Interactions, model: &Model) -> usize {
    let widths = (0..table.species.len()).map(|place| symbol(table, model, place).width() + 1);
    widths.max().unwrap_or(0).clamp(HEAD[0], HEAD[1])
}

/// A direct effect whose sign is only that of a number.
fn is_bracketed(effect: &Effect) -> bool {
    !effect.proved && effect.sign != Sign::Undecided
}

/// An effect by its sign and four digits: `+0.01235`, `(-3.000)` where the sign of a direct effect is not proved, `?1e-17`.
pub(super) fn number(table: &Interactions, effect: Effect) -> String {
    let size = if effect.number.is_finite() { human(effect.number.abs()) } else { "no number".to_owned() };
    let signed = match effect.sign {
        Sign::Positive => format!("+{size}"),
        Sign::Negative => format!("-{size}"),
        Sign::Zero => "0".to_owned(),
        Sign::Undecided => format!("?{size}"),
    };
    if table.effects == Effects::Direct && is_bracketed(&effect) { format!("({signed})") } else { signed }
}

fn ink(effect: Effect) -> Ink {
    match (effect.sign, effect.proved) {
        (Sign::Undecided, _) => Ink::Undecided,
        (_, true) => Ink::Proved,
        (_, false) => Ink::Numerical,
    }
}
