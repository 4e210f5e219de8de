//! After a knock: who is hit, how hard, and the path that is followed from there.
//!
//! [`Knock`] is what the user chose, [`blow`] what it comes to at the selected equilibrium: the state that the path starts
//! from, and how it is said. [`run`] is the work to be done, [`parts`] says where things stand, [`text`] and [`rows`] make what
//! is saved.

use std::sync::Arc;

use serde_json::Value;

use super::geometry::{Area, Size, frame};
use super::study::Selected;
use super::task::{Answer, Found, Release, Task};
use super::wants::start;
use super::{App, Study, saved};
use crate::model::TimeKind;
use crate::report::course::{self, Course, bands, drawing, horizon, knocked, sentences, signs};
use crate::report::rows::{Fact, Rows};
use crate::report::sketch::{self, Style};
use crate::report::table::{clean, human};

/// Who is hit.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Hit {
    /// All that are there, alike.
    #[default]
    All,
    /// One species; where it is absent a little of it comes in.
    One(usize),
    /// Nobody: the path starts from the point on the sketch.
    Point,
}

/// What the user chose.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Knock {
    /// Who is hit.
    pub hit: Hit,
    /// How hard: a place in [`STEPS`].
    pub step: usize,
    /// The first species that is shown, among those shown at all.
    pub from: usize,
}

impl Default for Knock {
    fn default() -> Self {
        Self { hit: Hit::All, step: HALF, from: 0 }
    }
}

/// How hard one can knock: the change as a share, and how it is said.
pub const STEPS: &[(f64, Said)] = &[
    (-0.9, Said::Taken("nine tenths")),
    (-0.75, Said::Taken("three quarters")),
    (-0.5, Said::Taken("half")),
    (-0.25, Said::Taken("a quarter")),
    (-0.1, Said::Taken("a tenth")),
    (-0.01, Said::Taken("a hundredth")),
    (0.01, Said::Made("raised by a hundredth")),
    (0.1, Said::Made("raised by a tenth")),
    (0.25, Said::Made("raised by a quarter")),
    (0.5, Said::Made("raised by half")),
    (1.0, Said::Made("doubled")),
    (2.0, Said::Made("tripled")),
];

/// Where a new knock stands in [`STEPS`]: half is taken.
const HALF: usize = 2;

/// How a change is said.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Said {
    /// A part of somebody is taken.
    Taken(&'static str),
    /// Somebody is made so much more.
    Made(&'static str),
}

/// Of an absent species so much comes in, as a share of the most that any equilibrium of the scenario has of it.
const A_LITTLE: f64 = 0.01;
/// Where none has any of it, as a share of the side of the search box.
const VERY_LITTLE: f64 = 1e-4;

/// What a knock comes to.
#[derive(Clone, Debug, PartialEq)]
pub struct Blow {
    /// The state just after it.
    pub state: Vec<f64>,
    /// What it was, in words without a capital; harmless only where it is shown.
    pub words: String,
    /// By how much abundances change, where that is the same share of each that is hit.
    pub share: Option<String>,
}

impl Blow {
    /// The words, and where there is one the share.
    pub fn at_length(&self) -> String {
        self.share.as_ref().map_or_else(|| self.words.clone(), |share| format!("{} ({share})", self.words))
    }
}

/// Everybody that a knock can hit at the selected equilibrium, in the order that one goes round: all that are there, each
/// that is there, each that is absent, the point where there is one.
pub fn round(study: &Study) -> Vec<Hit> {
    let Some(selected) = study.selected() else { return Vec::new() };
    let n = selected.equilibrium.state.len();
    let is_there = |i: &usize| selected.equilibrium.has(*i);
    let present: Vec<usize> = (0..n).filter(is_there).collect();
    let absent = (0..n).filter(|i| !is_there(i));
    // All and the only one are the same.
    let all = (present.len() > 1).then_some(Hit::All);
    let one = present.iter().copied().chain(absent).map(Hit::One);
    let point = start(study).map(|_| Hit::Point);
    all.into_iter().chain(one).chain(point).collect()
}

/// Who is hit at the selected equilibrium: whoever the user chose, or who comes first.
pub fn hit(study: &Study) -> Option<Hit> {
    let round = round(study);
    round.iter().find(|&&hit| hit == study.knock.hit).or(round.first()).copied()
}

/// What the knock comes to at the selected equilibrium; `None` where there is none.
pub fn blow(study: &Study) -> Option<Blow> {
    let selected = study.selected()?;
    let state = &selected.equilibrium.state;
    let &(change, said) = STEPS.get(study.knock.step)?;
    let share = format!("{:+.0} %", 100.0 * change);
    let (who, whom) = match hit(study)? {
        Hit::Point => {
            return Some(Blow { state: start(study)?, words: "from the point on the sketch".to_owned(), share: None });
        }
        Hit::One(species) if !selected.equilibrium.has(species) => return little(&selected, species),
        Hit::One(species) => (selected.model().species.get(species)?.name.as_str(), Some(species)),
        Hit::All => ("all", None),
    };
    let words = match said {
        Said::Taken(part) => format!("{part} of {who} taken"),
        Said::Made(what) => format!("{who} {what}"),
    };
    Some(Blow { state: knocked(state, whom, change), words, share: Some(share) })
}

/// A little of an absent species comes in.
fn little(selected: &Selected<'_>, species: usize) -> Option<Blow> {
    let one = selected.model().species.get(species)?;
    let bound = selected.world.prepared.bounds.get(species)?;
    let list = &selected.solved.equilibria.list;
    let most = list.iter().filter_map(|other| other.state.get(species)).fold(0.0, |most: f64, x| most.max(*x));
    let amount = if most > 0.0 { A_LITTLE * most } else { VERY_LITTLE * bound.upper };
    let mut state = selected.equilibrium.state.clone();
    *state.get_mut(species)? = amount.min(bound.upper);
    let unit = one.unit.as_ref().map_or(String::new(), |unit| format!(" {}", unit.value));
    let words = format!("{}{unit} of {} brought in", human(amount), one.name);
    Some(Blow { state, words, share: None })
}

/// The path to be followed; `None` where nothing is selected.
pub fn run(study: &Study) -> Option<Task> {
    let selected = study.selected()?;
    let step = match selected.model().time {
        TimeKind::Continuous => None,
        TimeKind::Discrete { step } => Some(step),
    };
    let until = horizon(selected.assessed.linear.as_ref().ok(), step);
    let (world, scene) = (Arc::clone(selected.world), Found(Arc::clone(selected.scene)));
    let start = blow(study)?.state;
    Some(Task::Run(Release { world, scene, equilibrium: selected.place, start, until }))
}

/// Why it makes no difference how hard one knocks; `None` where it does.
pub fn is_fixed(study: &Study) -> Option<&'static str> {
    let selected = study.selected()?;
    match hit(study)? {
        Hit::Point => Some("the path starts from the point; Tab chooses who is hit"),
        Hit::One(species) if !selected.equilibrium.has(species) => {
            Some("as little as possible comes in of who is absent")
        }
        Hit::All | Hit::One(_) => None,
    }
}

/// What came of it, where that is known.
pub fn known<'a>(app: &'a App, study: &Study) -> Option<&'a Course> {
    match app.desk.known(&run(study)?)? {
        Answer::Ran(course) => course.as_deref(),
        _ => None,
    }
}

/// Where things stand on the screen.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Parts {
    /// Which equilibrium, and what the knock is.
    pub heading: Area,
    /// What came of it, in words.
    pub sentence: Area,
    /// The drawing.
    pub drawing: Area,
    /// Its signs.
    pub legend: Area,
}

/// Where things stand.
pub fn parts(size: Size) -> Parts {
    let (heading, rest) = frame(size).body.top(1);
    let (sentence, rest) = rest.top(if size.columns < 100 { 4 } else { 3 });
    let (legend, drawing) = rest.bottom(1);
    Parts { heading, sentence, drawing, legend }
}

/// Columns and rows of the drawing.
pub fn room(size: Size) -> sketch::Size {
    let area = parts(size).drawing;
    sketch::Size { columns: area.columns.into(), rows: area.rows.into() }
}

/// What came of the knock, in sentences, and what one may try next.
pub fn words(study: &Study, course: &Course, style: Style) -> Vec<String> {
    let Some(selected) = study.selected() else { return Vec::new() };
    let mut said = came_of_it(study, &selected, course, style);
    if let Some([left_out, hint]) = could_come_in(study, &selected) {
        said.pop();
        said.push(clean(&format!("{left_out}; {hint}."), style));
    }
    said
}

/// What came of the knock, in sentences; at last who has no part in it but could.
fn came_of_it(study: &Study, selected: &Selected<'_>, course: &Course, style: Style) -> Vec<String> {
    let id = selected.id(study);
    let id = if id.is_empty() { "the equilibrium" } else { id };
    let mut said = sentences(course, selected.model(), id, selected.assessed.measures.return_time, style);
    let list = &selected.solved.equilibria.list;
    let end = course::end(course, list).filter(|&place| place != selected.place);
    if let Some(name) = end.and_then(|place| study.names(study.current).get(place)) {
        // Where it ends matters more than all else.
        said.insert(0, format!("At the end within 10 % of {name} (numerical)."));
    }
    said.extend(could_come_in(study, selected).map(|[left_out, _]| clean(&format!("{left_out}."), style)));
    said
}

/// Species that are named as able to come in.
const MOST_NAMED: usize = 3;

/// Who could upset the state but has no part in the path, and the key for it, both without a full stop; `None` where nobody
/// could.
fn could_come_in(study: &Study, selected: &Selected<'_>) -> Option<[String; 2]> {
    let rates = selected.assessed.measures.invasion.iter();
    let able: Vec<usize> = rates.filter(|(_, rate)| rate.is_some_and(|rate| rate > 0.0)).map(|(id, _)| id.0).collect();
    let is_on_the_way = matches!(hit(study), Some(Hit::Point)) || able.iter().any(|&i| hit(study) == Some(Hit::One(i)));
    let names = able.iter().filter_map(|&i| selected.model().species.get(i)).map(|one| one.name.as_str());
    let each = "Tab brings each in".to_owned();
    match able.len() {
        _ if is_on_the_way => None,
        0 => None,
        1 => Some([
            format!("Left out is {}, though it could come in", names.collect::<String>()),
            "Tab brings it in".to_owned(),
        ]),
        2..=MOST_NAMED => {
            let names = names.collect::<Vec<_>>().join(", ");
            Some([format!("Left out are {names}, though they could come in"), each])
        }
        count => Some([format!("Left out are {count} species, though they could come in"), each]),
    }
}

/// Rows of each species in a drawing that is saved.
const SAVED_ROWS: usize = 10;

/// Times that a report lists.
const LISTED: usize = 40;

/// How sure the rows are.
const NUMBERS: &str = "numerical: the path as it was followed, and where predicted is said, what the linear part has";

/// The path and what the linear part predicts of it, one row a time; `None` where they are not known, or the scenario is
/// being searched.
pub fn rows(app: &App) -> Option<Rows> {
    let study = app.study.as_ref()?;
    let selected = study.selected()?;
    let model = selected.model();
    let course = known(app, study)?;
    let blow = blow(study)?;
    let mut facts = saved::facts(app, study, &selected)?;
    facts.push(Fact::of_text("knock", "knock", blow.at_length()));
    facts.push(saved::state("after", "just after it", &selected, &blow.state));
    facts.push(Fact::of_text("numbers", "numbers", NUMBERS));
    let value = |x: Option<f64>| x.map_or(Value::Null, |x| (x + 0.0).into());
    let row = |row: Vec<Option<f64>>| row.into_iter().map(value).collect();
    Some(Rows {
        title: model.title.value.clone(),
        time: model.time.clone(),
        what: "After a knock".to_owned(),
        facts,
        said: came_of_it(study, &selected, course, Style::Unicode),
        headings: course::headings(course, model),
        rows: course::rows(course).into_iter().map(row).collect(),
        most: Some(LISTED),
    })
}

/// What came of the knock as text, with a drawing of all species, for a file; `None` where there are no [`rows`].
pub fn text(app: &App) -> Option<String> {
    let made = rows(app)?;
    let study = app.study.as_ref()?;
    let course = known(app, study)?;
    let all = bands(course, room(app.size))[1];
    let size = sketch::Size { columns: saved::COLUMNS, rows: all.max(1) * SAVED_ROWS };
    let mut lines = vec![String::new()];
    lines.extend(drawing(course, study.selected()?.model(), 0, size, Style::Unicode).lines(false));
    lines.push(super::interactions::said(&signs(course, Style::Unicode)));
    Some(saved::text(&made, lines))
}
