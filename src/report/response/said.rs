//! What people are shown of responses, in order: sentences and tables, for text, Markdown and LaTeX alike.

use crate::analysis::response::{ClosestEdge, Gap, GapReason, Response, Threshold};

use super::super::table::columns::Glyphs;
use super::super::table::layout::Ink;
use super::super::table::provenance::plain;
use super::super::table::scene;
use super::super::table::sheet::Sheet;
use super::super::table::words::{INCOMPLETE, UNDECIDED, proof};
use super::super::table::{Form, Page, human};
use super::paper::Part;
use super::plot::{self, Quantity, View};
use super::words::{gap, kind, listed, name, unit};
use super::{One, Responses, glyphs, meaning, sheets, summary};

/// Everything, scenario by scenario, and the meaning of words.
pub(super) fn parts<'r>(responses: &Responses<'r>, form: Form, page: Page) -> Vec<Part<'r>> {
    let glyphs = glyphs(form, page);
    let mut parts = Vec::new();
    for (scene, one) in responses.each() {
        match one {
            Some(one) => parts.extend(scenario(&one, glyphs, &drawings(&one, form, page))),
            None => parts.push(Part::Failed(scene)),
        }
    }
    parts.extend(MEANINGS.map(|(word, meaning)| Part::Meaning(word, meaning)));
    parts
}

const MEANINGS: [(&str, &str); 3] = [
    ("proved", "that no equilibrium is missing; around thresholds, where branches meet, that cannot be proved."),
    (
        "numerical",
        "computed, but nothing is proved about it: branches, thresholds, yields and margins. Stable, here, is \
         what the linear part says.",
    ),
    ("soft, hard", "what comes instead is near and stable, or the community jumps to a state elsewhere."),
];

/// Rows of a drawing.
const ROWS: usize = 16;
/// Columns of the widest; more only pull curves apart.
const WIDEST: usize = 100;
/// Species of whom there is a drawing.
const DRAWN: usize = 2;

/// The curves of the species along the sketch's axes, or of the first ones.
fn drawings(one: &One<'_>, form: Form, page: Page) -> Vec<String> {
    if form != Form::Text {
        return Vec::new();
    }
    let model = one.table.model;
    let all = model.sketch.map_or_else(|| (0..model.species.len()).collect(), |axes| axes.map(|id| id.0).to_vec());
    let page = Page { width: page.width.min(WIDEST), ..page };
    let drawn = all.into_iter().take(DRAWN).map(|species| {
        let quantity = Quantity::Abundance(species);
        plot::text(&View { model, response: &one.along.response, quantity, rule: None, chosen: None }, ROWS, &page)
    });
    drawn.collect()
}

fn scenario<'r>(one: &One<'r>, glyphs: Glyphs, drawings: &[String]) -> Vec<Part<'r>> {
    let along = one.along;
    let control = &along.response.control;
    let model = one.table.model;
    let [from, to, present] = [control.from, control.to, control.present].map(plain);
    let unit = unit(model, control.parameter);
    let to = if unit.is_empty() { to } else { format!("{to} {unit}") };
    let range = format!("{} from {from} to {to}, now {present}", name(model, control.parameter));
    let mut parts = vec![
        Part::Scenario(one.scene),
        Part::Said(format!("{}; {range}.", scene::changes(one.table, one.scene, one.solved, plain))),
        Part::Said(summary(&one.setting(), &along.advice, along.focus, along.band.as_ref())),
        complete(&along.response, one),
    ];
    parts.extend(undefined(one));
    parts.extend(drawings.iter().map(|drawing| Part::Drawing(drawing.lines().map(str::to_owned).collect())));
    parts.extend(thresholds(one));
    parts.extend(table("Branches (numerical), where no abundance is negative", sheets::branches(one, glyphs)));
    parts.extend(table(
        "Largest yields over stable states with all species to be kept (numerical)",
        sheets::yields(one),
    ));
    parts.extend(bands(one));
    parts
}

/// A table below its heading; nothing where it has no rows.
fn table<'p>(heading: &str, sheet: Sheet) -> Vec<Part<'p>> {
    if sheet.rows.is_empty() { Vec::new() } else { vec![Part::Heading(heading.to_owned()), Part::Grid(sheet)] }
}

fn thresholds<'p>(one: &One<'p>) -> Vec<Part<'p>> {
    let all = &one.along.response.thresholds;
    let shown: Vec<_> = all.iter().enumerate().filter(|(_, threshold)| sheets::is_shown(threshold)).collect();
    if all.is_empty() {
        return vec![Part::Said(format!("No threshold was found in the range ({}).", proof(false)))];
    }
    let mut parts = table("Thresholds (numerical)", sheets::thresholds(one));
    let said = |(place, threshold): &(usize, &Threshold)| {
        format!("{} {}: {}.", plot::mark(*place), kind(threshold.kind), meaning(&one.setting(), threshold))
    };
    parts.extend(shown.iter().map(|one| Part::Said(said(one))));
    let hidden = all.len() - shown.len();
    if hidden > 0 {
        parts.push(Part::Said(format!(
            "{hidden} more {} states with an abundance below 0 or outside the search box; csv and json have all.",
            if hidden == 1 { "concerns" } else { "concern" }
        )));
    }
    parts
}

fn bands<'p>(one: &One<'p>) -> Vec<Part<'p>> {
    let Some(id) = one.along.focus.and_then(|place| one.ids.get(place)) else { return Vec::new() };
    let heading = format!("Where {id} persists and is stable, each parameter moved alone (numerical)");
    let mut parts = table(&heading, sheets::bands(one));
    parts.extend(one.along.margins.closest.iter().map(|(edge, starts)| Part::Said(closest(one, edge, *starts))));
    parts
}

fn closest(one: &One<'_>, edge: &ClosestEdge, starts: usize) -> String {
    let outside = if edge.within_ranges { "" } else { ", which is outside their ranges" };
    let led = match starts {
        1 => "one start led there".to_owned(),
        starts => format!("{starts} starts led there"),
    };
    format!(
        "With all of them moved together the nearest loss found ({}) is at {}{outside}: a move of {}, each parameter in \
         widths of its range ({}; {led}, and there may be a nearer one).",
        kind(edge.kind),
        sheets::values(one, &edge.values),
        human(edge.distance),
        proof(false)
    )
}

/// Whether it is proved that nothing is missing, and where it is not.
fn complete<'p>(response: &Response, one: &One<'_>) -> Part<'p> {
    let control = &response.control;
    let reasons =
        [GapReason::Meeting, GapReason::Unresolved, GapReason::Unjoined, GapReason::Undefined, GapReason::Budget];
    let open: Vec<String> = reasons.iter().filter_map(|&reason| of_reason(response, reason)).collect();
    let found = match response.stations.len() {
        0 => String::new(),
        1 => format!("; searched at 1 value of {}", name(one.table.model, control.parameter)),
        count => format!("; searched at {count} values of {}", name(one.table.model, control.parameter)),
    };
    if super::is_complete(response) {
        let said = format!("no equilibrium in the search box is missing anywhere in the range{found}.");
        return Part::Marked(proof(true), Ink::Proved, said);
    }
    let only_meeting =
        response.gaps.iter().all(|gap| gap.reason == GapReason::Meeting) && response.undefined.is_empty();
    let said = if open.is_empty() { String::new() } else { format!(": {}", open.join("; ")) };
    if only_meeting {
        let said = format!("no equilibrium is missing, except perhaps close to where branches meet{said}{found}.");
        return Part::Marked(proof(true), Ink::Proved, said);
    }
    Part::Marked(INCOMPLETE, Ink::Undecided, format!("equilibria may be missing{said}{found}."))
}

/// Parts that are listed; more would bury it.
const MOST_LISTED: usize = 6;

/// The parts of the range that are not proved for one reason.
fn of_reason(response: &Response, reason: GapReason) -> Option<String> {
    let gaps: Vec<&Gap> = response.gaps.iter().filter(|gap| gap.reason == reason).collect();
    let part = |gap: &&Gap| {
        let [from, to] = [gap.from, gap.to].map(human);
        if from == to { format!("at {from}") } else { format!("{from} to {to}") }
    };
    let mut parts: Vec<String> = gaps.iter().take(MOST_LISTED).map(part).collect();
    if gaps.len() > MOST_LISTED {
        parts.push(format!("{} more", gaps.len() - MOST_LISTED));
    }
    (!parts.is_empty()).then(|| format!("{} ({})", listed(&parts), gap(reason)))
}

/// Where the model has no value.
fn undefined<'p>(one: &One<'_>) -> Vec<Part<'p>> {
    let parts = one.along.response.undefined.iter();
    let said =
        parts.map(|(from, to, why)| format!("the model has no value from {} to {}: {why}.", human(*from), human(*to)));
    said.map(|said| Part::Marked(UNDECIDED, Ink::Undecided, said)).collect()
}
