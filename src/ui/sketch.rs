//! The sketch of a slot in a part of a screen, with what the user put over it.

use super::paint::Page;
use crate::analysis::paths::Path;
use crate::app::geometry::Area;
use crate::app::task::{Answer, Painting, Task};
use crate::app::wants::{painting, path};
use crate::app::{App, Study};
use crate::report::grid::Ink;
use crate::report::sketch::{Extras, Picture, Size, View, came_from, drawing, ends, held, signs_used};

/// Columns that what is held needs to say anything at all.
const HELD: u16 = 15;
/// Signs of directions at most in a sketch whose plane goes with the chosen state, where others are held. Another plane
/// changes all of them, and each takes six or seven bytes on the line: with these a step on a large terminal stays below
/// 6 KiB, and a usual one has room for no more anyway. One or two species have one plane, and a sign in every cell.
const ARROWS: usize = 500;
/// Said while a sketch is being computed.
const LATE: &str = "drawing";

/// What is drawn of a slot, as far as it is known.
pub(super) struct Shown<'s> {
    painting: Painting,
    /// Whether it is of a moment ago: what is wanted is being computed.
    is_late: bool,
    app: &'s App,
    study: &'s Study,
    /// Names of the states.
    ids: Vec<String>,
    /// The state that is selected.
    chosen: Option<usize>,
    /// The user's point.
    point: Option<[f64; 2]>,
    /// Whether the paths from and to it are.
    has_paths: bool,
    size: Size,
}

impl<'s> Shown<'s> {
    /// Of a slot, for an area; `None` before anything is found.
    pub(super) fn new(app: &'s App, study: &'s Study, slot: usize, area: Area) -> Option<Self> {
        let size = Size { columns: area.columns.into(), rows: area.rows.into() };
        let wanted = painting(study, slot, size)?;
        let is_late = app.desk.known(&Task::Paint(wanted.clone())).is_none();
        let before = if is_late { app.desk.before(&wanted).cloned() } else { None };
        let is_current = slot == study.current;
        let chosen = is_current.then_some(study.chosen);
        let (painting, ids) = (before.unwrap_or(wanted), study.names(slot).to_vec());
        Some(Self {
            painting,
            is_late,
            app,
            study,
            ids,
            chosen,
            point: study.sketch.point,
            has_paths: is_current,
            size,
        })
    }

    /// Of states that move, for an area; while it is being computed that of a moment ago, whose states have no names.
    pub(super) fn moving(
        app: &'s App,
        study: &'s Study,
        wanted: Painting,
        ids: Vec<String>,
        chosen: Option<usize>,
        area: Area,
    ) -> Self {
        let size = Size { columns: area.columns.into(), rows: area.rows.into() };
        let is_late = app.desk.known(&Task::Paint(wanted.clone())).is_none();
        match app.desk.before_moving(&wanted).filter(|_| is_late).cloned() {
            Some(painting) => Self {
                painting,
                is_late,
                app,
                study,
                ids: Vec::new(),
                chosen: None,
                point: None,
                has_paths: false,
                size,
            },
            None => Self { painting: wanted, is_late, app, study, ids, chosen, point: None, has_paths: false, size },
        }
    }

    fn view(&self) -> Option<View<'_>> {
        let Painting { world, scene, slice, window, scales, .. } = &self.painting;
        Some(View {
            model: &world.original.model,
            scenario: scene.0.scenario,
            solved: scene.solved()?,
            ids: &self.ids,
            slice,
            window: *window,
            scales: *scales,
        })
    }

    fn path(&self, backwards: bool) -> Option<&Path> {
        let task = path(self.study, backwards).filter(|_| self.has_paths)?;
        match self.app.desk.known(&task)? {
            Answer::Followed(path) => path.as_deref(),
            _ => None,
        }
    }

    /// What is drawn over the picture.
    fn extras(&self) -> Extras<'_> {
        Extras {
            chosen: self.chosen,
            point: self.point,
            forwards: self.path(false),
            backwards: self.path(true).filter(|_| self.study.sketch.backwards),
            most_arrows: (self.study.model().species.len() > 2).then_some(ARROWS),
        }
    }

    fn picture(&self) -> Option<&Picture> {
        match self.app.desk.known(&Task::Paint(self.painting.clone()))? {
            Answer::Painted(picture) => picture.as_deref(),
            _ => None,
        }
    }

    /// The signs that are in it, with their meanings.
    pub(super) fn signs(&self, page: &Page<'_>) -> Vec<(String, String)> {
        match (self.view(), self.picture()) {
            (Some(view), Some(picture)) => signs_used(&view, picture, &self.extras(), page.style),
            _ => Vec::new(),
        }
    }

    /// Draws it; says that it is under way where it is.
    pub(super) fn draw(&self, page: &mut Page<'_>, area: Area) {
        let (Some(view), Some(picture)) = (self.view(), self.picture()) else {
            page.text(area, [8, area.rows / 2], LATE, Ink::Faint);
            return;
        };
        let grid = drawing(&view, picture, &self.extras(), self.size, page.style);
        page.grid(area, &grid);
        if self.is_late {
            page.text(area, [area.columns.saturating_sub(LATE.len() as u16), 0], LATE, Ink::Faint);
        }
        // Beside the name of the axis across, in the last row.
        if let (Some(held), Some(last)) = (held(&view), area.rows.checked_sub(1)) {
            let name = grid
                .labels
                .iter()
                .find(|label| label.row == usize::from(last))
                .map_or(area.columns, |label| label.column as u16);
            let room = Area { columns: name.saturating_sub(2), ..area };
            if room.columns >= HELD {
                page.text(room, [0, last], &held, Ink::Faint);
            }
        }
    }

    /// Where the paths from the point lead and come from, in words; empty where there is no point.
    pub(super) fn sentence(&self, page: &Page<'_>) -> String {
        let Some(view) = self.view() else { return String::new() };
        let forwards = self.path(false).map(|path| ends(&view, path, page.style));
        let back = self.path(true).filter(|_| self.study.sketch.backwards);
        let back = back.map(|path| came_from(&view, &self.painting.window, path, page.style));
        let said: Vec<String> = forwards.into_iter().chain(back).collect();
        said.join(" ")
    }
}
