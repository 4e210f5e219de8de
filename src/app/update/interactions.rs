//! What the user does with the interactions.

use super::acts::stepped;
use crate::app::action::{Action, Direction, Step};
use crate::app::interactions::{in_sight, parts_of};
use crate::app::{App, Screen};
use crate::report::interactions::{Effects, Who};

pub(super) fn act(app: &mut App, action: Action) {
    let size = app.size;
    let Some(study) = &mut app.study else { return };
    match action {
        Action::Other if parts_of(size, study).beside.is_some() => {
            app.say("direct and net effects are both shown");
        }
        Action::Other => {
            study.interacting.effects = match study.interacting.effects {
                Effects::Direct => Effects::Net,
                Effects::Net => Effects::Direct,
            };
        }
        Action::Absent => {
            study.interacting.who = match study.interacting.who {
                Who::Present => Who::All,
                Who::All => Who::Present,
            };
            study.interacting.from = [0, 0];
        }
        Action::Scroll(direction) => {
            let Some((seen, all)) = in_sight(size, study) else { return };
            let (axis, step) = match direction {
                Direction::Left => (1, Step::PageBack),
                Direction::Right => (1, Step::PageOn),
                Direction::Up => (0, Step::PageBack),
                Direction::Down => (0, Step::PageOn),
            };
            // Half a page, so that what was at the border is seen in its surroundings.
            let page = (seen[axis] / 2).max(1);
            let places = (all + 1).saturating_sub(seen[axis]);
            study.interacting.from[axis] = stepped(study.interacting.from[axis], places, page, step);
        }
        _ => {}
    }
}

/// No further than to where the table still fills its place.
pub(super) fn settle(app: &mut App) {
    let size = app.size;
    let Some(study) = app.study.as_mut().filter(|_| app.screen == Screen::Interactions) else { return };
    let Some((seen, all)) = in_sight(size, study) else { return };
    for (from, seen) in study.interacting.from.iter_mut().zip(seen) {
        *from = (*from).min(all.saturating_sub(seen));
    }
}
