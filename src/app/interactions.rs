//! Who acts on whom: which effects of the selected equilibrium are looked at, and from where on.
//!
//! [`parts`] says where things stand, [`table`] makes what is shown, [`text`] and [`rows`] what is saved.

use super::geometry::{Area, Size, frame};
use super::study::Selected;
use super::{App, Study, saved};
use crate::model::{Model, TimeKind};
use crate::report::interactions::{self, Effects, Interactions, Who, sentences, signs, visible};
use crate::report::rows::{Fact, Rows};
use crate::report::sketch::{self, Style};

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

/// All effects of the selected equilibrium, one a row; `None` where nothing is selected, or its scenario is being searched.
/// Where there are no effects there are no rows, and what is said is why.
pub fn rows(app: &App) -> Option<Rows> {
    let study = app.study.as_ref()?;
    let selected = study.selected()?;
    let model = selected.model();
    let mut facts = saved::facts(app, study, &selected)?;
    let who = if study.interacting.who == Who::Present { "those present" } else { "all species" };
    facts.push(Fact::of_text("species", "species", who));
    facts.extend(meanings(model));
    let both = [Effects::Direct, Effects::Net].into_iter().filter_map(|effects| table(study, effects)?.ok());
    Some(Rows {
        title: model.title.value.clone(),
        time: model.time.clone(),
        what: "Interactions".to_owned(),
        facts,
        said: words(&selected, Style::Unicode),
        headings: interactions::headings().map(str::to_owned).to_vec(),
        rows: both.flat_map(|table| interactions::rows(&table, model)).map(Vec::from).collect(),
        most: None,
    })
}

/// What the numbers of rows are.
fn meanings(model: &Model) -> [Fact; 2] {
    let unit = &model.time_unit.value;
    let [at_once, press] = match model.time {
        TimeKind::Continuous => [format!("the growth, per {unit}, of"), format!("per {unit}")],
        TimeKind::Discrete { .. } => ["the next state of".to_owned(), "at each step".to_owned()],
    };
    let direct = format!("what one more of who is pressed does at once to {at_once} who answers");
    let net = format!("the lasting answer to one more {press} of who is pressed (numerical)");
    [Fact::of_text("direct", "direct", direct), Fact::of_text("net", "net", net)]
}

/// Both tables of the selected equilibrium as text, for a file; `None` where there are no [`rows`].
pub fn text(app: &App) -> Option<String> {
    let made = rows(app)?;
    let study = app.study.as_ref()?;
    let selected = study.selected()?;
    let mut lines = Vec::new();
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
    Some(saved::text(&made, lines))
}

/// Signs with their meanings in a line.
pub fn said(signs: &[(String, String)]) -> String {
    signs.iter().map(|(sign, meaning)| format!("{sign} {meaning}")).collect::<Vec<_>>().join("   ")
}
