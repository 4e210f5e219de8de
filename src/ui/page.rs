//! What all screens share: the heading, the line on what happens, the keys that matter.

use super::paint::Page;
use crate::app::action::{Action, Axis, Direction, Step};
use crate::app::desk::Job;
use crate::app::geometry::{Area, SMALLEST};
use crate::app::keymap::{Place, key_of, place};
use crate::app::{Answer, App, Screen, Study};
use crate::report::grid::Ink;
use crate::report::progress::done;
use crate::report::response::Reach;
use unicode_width::UnicodeWidthStr;

/// In place of all else where the terminal is too small.
pub(super) fn too_small(app: &App, page: &mut Page<'_>) {
    let area = Area { x: 0, y: 0, columns: app.size.columns, rows: app.size.rows };
    let text = format!(
        "restpoint needs {} columns and {} rows; here are {} and {}.",
        SMALLEST.columns, SMALLEST.rows, app.size.columns, app.size.rows
    );
    page.words(area, &text, Ink::Plain);
}

/// The model's title, and which scenario.
pub(super) fn heading(app: &App, page: &mut Page<'_>, area: Area) {
    let Some(study) = app.study.as_ref().filter(|_| app.screen != Screen::Chooser) else {
        page.text(area, [0, 0], "restpoint: which model?", Ink::Strong);
        return;
    };
    let scenario = scenario(study);
    let width = u16::try_from(scenario.width()).unwrap_or(u16::MAX);
    let room = area.columns.saturating_sub(width + 2).max(area.columns / 3);
    let (left, right) = area.left(room);
    page.text(left, [0, 0], &study.model().title.value, Ink::Strong);
    let start = right.columns.saturating_sub(width);
    page.text(right, [start, 0], &scenario, Ink::Strong);
}

fn scenario(study: &Study) -> String {
    let Some(slot) = study.slot() else { return "no scenario".to_owned() };
    let which = format!("{} of {}", study.current + 1, study.slots.len());
    let tried = if study.is_tried(study.current) { "tried: " } else { "" };
    format!("{tried}{} ({which})", slot.name())
}

/// What is under way; else what has happened; else the caution.
pub(super) fn status(app: &App, page: &mut Page<'_>, area: Area) {
    if let Some(notice) = &app.notice {
        let (text, ink) = if notice.is_fault {
            (format!("! {}", notice.text), Ink::Warning)
        } else {
            (notice.text.clone(), Ink::Plain)
        };
        page.text(area, [0, 0], &text, ink);
    } else if let Some(job) = app.desk.search() {
        let text = format!("searching: {}; Esc stops it", done(job.progress));
        page.text(area, [0, 0], &text, Ink::Plain);
    } else if let Some(job) = app.desk.following().filter(|_| app.screen == Screen::Response) {
        page.text(area, [0, 0], &following(job), Ink::Plain);
    } else if app.reading.is_some() {
        page.text(area, [0, 0], "reading", Ink::Plain);
    } else if let Some(text) = offered(app) {
        page.text(area, [0, 0], &text, Ink::Plain);
    } else if app.screen == Screen::Chooser && app.chooser.is_listing {
        page.text(area, [0, 0], "looking for models", Ink::Plain);
    } else {
        let long =
            "A local result about a model. Limits are set by the authority, under local law and licensed practice.";
        let short = "A local result about a model; limits are set by the authority under local law.";
        let text = [long, short].into_iter().find(|text| text.len() <= area.columns.into());
        page.text(area, [0, 0], text.unwrap_or("A local result about a model; the authority sets limits."), Ink::Faint);
    }
}

/// How far branches are followed.
fn following(job: &Job) -> String {
    let known = match &job.partly {
        Some(Answer::Responded(Some(along))) if along.reach >= Reach::Advised => {
            return "looking for the closest edge along other parameters; Esc stops it".to_owned();
        }
        Some(Answer::Responded(Some(along))) => {
            let response = &along.response;
            let count =
                |count: usize, one: &str, many: &str| format!("{count} {}", if count == 1 { one } else { many });
            let branches = count(response.branches.len(), "branch", "branches");
            format!("{branches} and {} so far", count(response.thresholds.len(), "threshold", "thresholds"))
        }
        _ => "nothing yet".to_owned(),
    };
    format!("following branches: {known}; Esc stops it")
}

/// What was tried last time and is in no file, and how to have it again.
fn offered(app: &App) -> Option<String> {
    let offer = app.study.as_ref()?.offer.as_ref()?;
    let key = key_of(place(app), Action::TakeUp)?;
    let values: Vec<String> = offer.values.iter().map(|(name, value)| format!("{name} = {value}")).collect();
    let over = &offer.scenario;
    Some(format!("{key} takes up what was tried last time over \"{over}\": {}", values.join(", ")))
}

/// The keys that matter most where the user is.
pub(super) fn keys(app: &App, page: &mut Page<'_>, area: Area) {
    let place = place(app);
    let mut column = 0;
    for (action, word) in hints(place) {
        let Some(key) = key_of(place, action) else { continue };
        let text = format!("{key} {word}");
        let width = text.width() as u16;
        if column + width > area.columns {
            break;
        }
        let after = page.text(area, [column, 0], &key, Ink::Strong);
        page.text(area, [after + 1, 0], word, Ink::Plain);
        column += width + 2;
    }
}

fn hints(place: Place) -> Vec<(Action, &'static str)> {
    match place {
        Place::On(screen) => {
            let mut all = vec![(Action::Help, "help")];
            all.extend(on(screen));
            all.push((Action::Leave, "leave"));
            all
        }
        Place::Pointing => vec![(Action::Stop, "done"), (Action::Backwards, "where from"), (Action::NoPoint, "away")],
        Place::Dragging => vec![(Action::Stop, "done"), (Action::Closer, "closer"), (Action::Wider, "wider")],
        Place::Reading => vec![(Action::Step(Step::On), "on"), (Action::Stop, "back")],
        Place::Typing => {
            vec![(Action::Accept, "take it"), (Action::Stop, "leave it"), (Action::Complete, "complete, or change")]
        }
    }
}

/// The keys of a screen, without those that all have.
fn on(screen: Screen) -> Vec<(Action, &'static str)> {
    match screen {
        Screen::Chooser => vec![(Action::Accept, "open"), (Action::Type, "type a path")],
        Screen::Values => vec![
            (Action::Fine(Step::On), "raise"),
            (Action::Fine(Step::Back), "lower"),
            (Action::Type, "type"),
            (Action::Undo, "undo"),
            (Action::Record, "new scenario"),
            (Action::Write, "write"),
            (Action::Show(Screen::Equilibria), "equilibria"),
        ],
        Screen::Interactions => vec![
            (Action::Step(Step::On), "next"),
            (Action::Other, "direct or net"),
            (Action::Absent, "absent too"),
            (Action::Scroll(Direction::Right), "columns"),
            (Action::Scroll(Direction::Down), "rows"),
            (Action::Scenario(Step::On), "scenario"),
            (Action::Show(Screen::Equilibria), "equilibria"),
            (Action::Write, "write"),
        ],
        Screen::Knock => vec![
            (Action::Step(Step::On), "next"),
            (Action::Knock(Step::Back), "take more"),
            (Action::Knock(Step::On), "less"),
            (Action::Other, "who"),
            (Action::Scroll(Direction::Down), "species"),
            (Action::Scenario(Step::On), "scenario"),
            (Action::Show(Screen::Equilibria), "equilibria"),
            (Action::Write, "write"),
        ],
        Screen::Response => vec![
            (Action::Fine(Step::On), "move the rule"),
            (Action::Threshold(Step::On), "next threshold"),
            (Action::Step(Step::On), "next state"),
            (Action::Other, "control"),
            (Action::Species(Axis::Upwards), "quantity"),
            (Action::TakeOver, "try it"),
            (Action::Show(Screen::Equilibria), "equilibria"),
            (Action::Write, "write"),
        ],
        _ => vec![
            (Action::Step(Step::On), "next"),
            (Action::Scenario(Step::On), "scenario"),
            (Action::Show(Screen::SideBySide), "side by side"),
            (Action::Show(Screen::Values), "values"),
            (Action::Show(Screen::Response), "thresholds"),
            (Action::Show(Screen::Knock), "after a knock"),
            (Action::Show(Screen::Interactions), "interactions"),
            (Action::Point, "move a point"),
            (Action::Write, "write"),
        ],
    }
}
