//! `restpoint response`: what becomes of every equilibrium as a control varies, for people, spreadsheets and programs.
//!
//! [`Responses`] has it all: the scenarios as in a table, and of each what was found [`Along`] the control. `meaning` says
//! what a threshold means, `summary` the whole in a few sentences, `said` all else that is said in sentences, `sheets` makes
//! the tables, `paper` the forms for people of them, [`plot`] draws; `csv` and `data` are for spreadsheets and programs,
//! which get the points that `thin` leaves of each branch. `words` has
//! pieces of sentences. Two controls are in `chart`.
//!
//! Branches, thresholds, yields and margins are numerical, and every form says so; only the count of equilibria along the
//! range may be proved.
//!
//! The JSON has `tool`, `model`, `of` and `range` of the whole, `scenarios`, `run` and `caution`. A scenario has the
//! contract's keys, and after them:
//!
//! - `present`, the control's value; `focus`, the name of the state that bands are of, or null; `summary`, sentences
//! - `gaps`: `{"from", "to", "why"}`, where it is not proved that no equilibrium is missing; `undefined`: the same, where the
//!   model has no value; `stations`: `{"at", "found", "complete"}`
//! - `bands`: one a parameter, `{"parameter", "present", "from", "to", "edges": [{"what", "kind"}], "margin": {"amount",
//!   "share", "side"}}`; `closest_edge`: `{"kind", "values", "distance", "state", "residual", "within_ranges", "starts"}` or null
//! - `open_access`: `{"harvest", "at", "state", "branch"}`; `removal`: `{"species", "at", "kind"}`
//! - of a branch not all `points` that were followed, but so many that straight lines between them are within 1/500 of what
//!   each number spans; always its ends, its thresholds and both sides of a change of type
//! - in a threshold: `proven`, `species`, `arms`, `kink`, `other_side`, `error`; in a branch: `present`, `passes` (names of all
//!   that it passes through), `ends`; in its points: `stable`, `feasible`, `leading`, `value`, `threshold` (place in the list);
//!   in a best yield: `of` (`yield`, `value` or `total`), `branch`, `nearest`

pub mod chart;
mod csv;
mod data;
mod fields;
mod meaning;
mod paper;
pub mod plot;
mod said;
mod segments;
mod sheets;
mod summary;
mod thin;
pub mod words;

pub use csv::csv;
pub use data::json;
pub use fields::{Chosen, FIELDS, Field, UnknownField, guide};
pub use meaning::{Setting, meaning};
pub use segments::{Segment, segments};
pub use summary::{advised, spoken_of, summary};

use super::table::columns::Glyphs;
use super::table::{Form, Page, Scene, Solved, Style, Table, human, pretty, scene};
use crate::analysis::paths::Destination;
use crate::analysis::response::{Advice, Band, Margins, Response};
use crate::model::{Aim, Model, ParameterId, Role};

/// Scenarios along one control.
#[derive(Clone, Copy, Debug)]
pub struct Responses<'r> {
    /// The scenarios, with the names of their equilibria.
    pub table: &'r Table<'r>,
    /// What was varied.
    pub control: ParameterId,
    /// Over which values.
    pub range: [f64; 2],
    /// The fields of CSV.
    pub chosen: &'r Chosen,
    /// One a scenario shown; `None` for one that failed.
    pub along: &'r [Option<Along>],
}

/// How much of it is worked out.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Reach {
    /// Branches through the present states, and what crosses them; no search has looked for others.
    Branches,
    /// All but margins.
    Advised,
    /// All.
    Whole,
}

/// What was found of one scenario along the control.
#[derive(Clone, Debug, PartialEq)]
pub struct Along {
    /// How much of it is there.
    pub reach: Reach,
    /// Branches and thresholds.
    pub response: Response,
    /// Yields, removal, open access.
    pub advice: Advice,
    /// The state that margins are of, by its place in the scenario's list.
    pub focus: Option<usize>,
    /// The band of the control itself in which it persists and is stable.
    pub band: Option<Band>,
    /// How near it is to being lost.
    pub margins: Margins,
}

/// One scenario that did not fail, with all that belongs to it.
#[derive(Clone, Copy, Debug)]
pub(super) struct One<'r> {
    pub(super) table: &'r Table<'r>,
    pub(super) scene: &'r Scene,
    pub(super) solved: &'r Solved,
    pub(super) ids: &'r [String],
    pub(super) along: &'r Along,
}

impl<'r> One<'r> {
    pub(super) fn setting(&self) -> Setting<'r> {
        Setting { model: self.table.model, response: &self.along.response, ids: self.ids }
    }
}

impl<'r> Responses<'r> {
    /// Each scenario shown, in order; none of what was found where it failed.
    fn each(&self) -> impl Iterator<Item = (&'r Scene, Option<One<'r>>)> {
        let (table, along) = (self.table, self.along);
        table.named().enumerate().map(move |(place, (scene, ids))| {
            let found = scene.outcome.as_ref().ok().zip(along.get(place).and_then(Option::as_ref));
            (scene, found.map(|(solved, along)| One { table, scene, solved, ids, along }))
        })
    }

    /// Whether it is proved of every scenario that no equilibrium is missing over the range. Branches and thresholds
    /// themselves are numbers, with no claim that would be proved.
    pub fn is_complete(&self) -> bool {
        self.each().all(|(_, one)| one.is_some_and(|one| is_complete(&one.along.response)))
    }

    /// Where scenarios have no value over a part of the range, a sentence each.
    pub fn undefined(&self) -> Vec<String> {
        let parameter = words::name(self.table.model, self.control);
        let of = |(scene, one): (&Scene, Option<One<'r>>)| {
            let name = scene::name(self.table.model, scene);
            let parts = one.map_or(&[][..], |one| &one.along.response.undefined).iter();
            let said = parts.map(|(from, to, why)| {
                format!("{name}: the model has no value from {parameter} = {} to {}: {why}", human(*from), human(*to))
            });
            said.collect::<Vec<_>>()
        };
        self.each().flat_map(of).collect()
    }
}

/// Whether it is proved that no equilibrium is missing at any value of the whole range, but the thresholds themselves.
fn is_complete(response: &Response) -> bool {
    response.is_complete() && response.undefined.is_empty()
}

/// Responses in a form.
pub fn written(responses: &Responses<'_>, form: Form, page: Page) -> String {
    match form {
        Form::Csv => csv(responses, responses.chosen, page.style),
        Form::Json => pretty(&json(responses), page.style),
        Form::Text | Form::Markdown | Form::Latex => {
            paper::written(responses.table, &said::parts(responses, form, page), form, page)
        }
    }
}

fn glyphs(form: Form, page: Page) -> Glyphs {
    match (form, page.style) {
        (Form::Latex, _) => Glyphs::Words,
        (_, Style::Ascii) => Glyphs::Ascii,
        (_, Style::Unicode) => Glyphs::Unicode,
    }
}

/// The state that advice is about, by its place in the list: the stable one that today's stocks reach, else the first that is
/// stable with all species that are to be kept, else the first that is stable.
pub fn focus(model: &Model, solved: &Solved) -> Option<usize> {
    let list = &solved.equilibria.list;
    let is_stable = |place: &usize| {
        let linear = solved.assessment.equilibria.get(*place).and_then(|one| one.linear.as_ref().ok());
        linear.is_some_and(|linear| linear.stable == Some(true))
    };
    let reached = match solved.assessment.from_now.as_ref().map(|from| &from.reaches) {
        Some(Destination::Equilibrium(place)) => Some(*place).filter(is_stable),
        _ => None,
    };
    let is_kept = |species: &crate::model::Species| species.role == Role::Population && species.aim == Aim::Keep;
    let kept: Vec<usize> =
        model.species.iter().enumerate().filter(|(_, species)| is_kept(species)).map(|(i, _)| i).collect();
    let stable = || (0..list.len()).filter(is_stable);
    reached.or_else(|| stable().find(|&place| kept.iter().all(|&i| list[place].has(i)))).or_else(|| stable().next())
}
