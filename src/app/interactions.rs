//! Who acts on whom: which effects of the selected equilibrium are looked at, and from where on.
//!
//! [`parts`] says where things stand, [`table`] makes what is shown, [`text`] and [`csv`] what is saved.

use super::geometry::{Area, Size, frame};
use super::study::Selected;
use super::{App, Study};
use crate::report::interactions::{self, Effects, Interactions, Who, sentences, signs, visible};
use crate::report::sketch::{self, Style};
use crate::report::table::{CAUTION, Page};

/// What is looked at.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Interacting {
    /// Which effects, where there is not room for both.
    pub effects: Effects,
    /// Whose.
    pub who: Who,
    /// The first row and the first column that are shown.
    pub from: [usize; 2],
}

impl Default for Interacting {
    fn default() -> Self {
        Self { effects: Effects::Direct, who: Who::Present, from: [0, 0] }
    }
}

/// Where things stand on the screen.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Parts {
    /// Which equilibrium, and whose effects.
    pub heading: Area,
    /// What is telling, in words.
    pub sentence: Area,
    /// The table; of direct effects where both are shown.
    pub table: Area,
    /// Net effects beside or below, where both are shown.
    pub beside: Option<Area>,
    /// The signs.
    pub legend: Area,
}

/// How the tables lie.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Layout {
    /// One of the two.
    One,
    /// Net effects on the right of direct ones.
    Beside,
    /// Net effects below direct ones.
    Below,
}

/// Columns from which on two tables side by side have room for their titles.
const ROOM_FOR_BOTH: u16 = 174;

/// Where things stand.
pub fn parts(size: Size, layout: Layout) -> Parts {
    let (heading, rest) = frame(size).body.top(1);
    let lines = if size.columns < 80 {
        5
    } else if size.columns < 100 {
        4
    } else {
        2
    };
    let (sentence, rest) = rest.top(lines);
    let (legend, rest) = rest.bottom(1);
    let (table, beside) = match layout {
        Layout::One => (rest, None),
        Layout::Beside => {
            let (left, right) = rest.left(rest.columns / 2);
            (Area { columns: left.columns.saturating_sub(2), ..left }, Some(right))
        }
        Layout::Below => {
            let (upper, lower) = rest.top(rest.rows / 2);
            (upper, Some(lower))
        }
    };
    Parts { heading, sentence, table, beside, legend }
}

/// Where things stand for what is selected: both tables where there is room for the whole of each.
pub fn parts_of(size: Size, study: &Study) -> Parts {
    let one = parts(size, Layout::One);
    let (Some(selected), Some(Ok(table))) = (study.selected(), table(study, Effects::Direct)) else { return one };
    let all = table.species.len();
    let is_whole = |parts: &Parts| visible(&table, selected.model(), room(parts.table)).iter().all(|&seen| seen >= all);
    let wide = (size.columns >= ROOM_FOR_BOTH).then(|| parts(size, Layout::Beside));
    wide.into_iter().chain([parts(size, Layout::Below)]).find(is_whole).unwrap_or(one)
}

/// Columns and rows of a table in an area.
pub fn room(area: Area) -> sketch::Size {
    sketch::Size { columns: area.columns.into(), rows: area.rows.into() }
}

/// The effects at the selected equilibrium, or why there are none; `None` where nothing is selected.
pub fn table(study: &Study, effects: Effects) -> Option<Result<Interactions, &'static str>> {
    let Selected { equilibrium, assessed, .. } = study.selected()?;
    Some(interactions::interactions(equilibrium, assessed, effects, study.interacting.who))
}

/// How many rows and columns of the table are in sight, and how many there are; `None` where there is no table.
pub fn in_sight(size: Size, study: &Study) -> Option<([usize; 2], usize)> {
    let table = table(study, study.interacting.effects)?.ok()?;
    let room = room(parts_of(size, study).table);
    Some((visible(&table, study.selected()?.model(), room), table.species.len()))
}

/// What is to be known in words: what is telling, or why nothing can be said.
pub fn words(selected: &Selected<'_>, style: Style) -> Vec<String> {
    sentences(selected.model(), selected.equilibrium, selected.assessed, style)
}

/// Columns of the sentences that are saved.
const SAVED_COLUMNS: usize = 80;

/// Both tables of the selected equilibrium as text, for a file; `None` where nothing is selected.
pub fn text(app: &App) -> Option<String> {
    let study = app.study.as_ref()?;
    let selected = study.selected()?;
    let mut lines = selected.heading(study, Style::Unicode);
    let page = Page { width: SAVED_COLUMNS, style: Style::Unicode, color: false };
    lines.extend(words(&selected, Style::Unicode).iter().map(|text| page.paragraph("", text, 0)));
    for effects in [Effects::Direct, Effects::Net] {
        lines.push(String::new());
        match table(study, effects)? {
            Ok(table) => {
                lines.push(interactions::text(&table, selected.model(), Style::Unicode).trim_end().to_owned());
                lines.push(said(&signs(&[&table])));
            }
            Err(reason) => lines.push(reason.to_owned()),
        }
    }
    lines.extend([String::new(), page.paragraph("", CAUTION, 0)]);
    Some(lines.iter().fold(String::new(), |text, line| text + line.trim_end() + "\n"))
}

/// Both tables as CSV, one row an effect; `None` where there is none.
pub fn csv(app: &App) -> Option<String> {
    let study = app.study.as_ref()?;
    let selected = study.selected()?;
    let of = |effects| Some(interactions::csv(&table(study, effects)?.ok()?, selected.model(), Style::Unicode));
    let direct = of(Effects::Direct)?;
    // One heading for both.
    let net = of(Effects::Net).unwrap_or_default();
    Some(direct + net.split_once('\n').map_or("", |(_, rows)| rows))
}

/// Signs with their meanings in a line.
pub fn said(signs: &[(String, String)]) -> String {
    signs.iter().map(|(sign, meaning)| format!("{sign} {meaning}")).collect::<Vec<_>>().join("   ")
}
