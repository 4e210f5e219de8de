//! What the user does with the knock.

use super::acts::stepped;
use crate::app::action::{Action, Direction, Step};
use crate::app::knock::{STEPS, hit, is_fixed, known, room, round};
use crate::app::{App, Screen};
use crate::report::course::bands;

pub(super) fn act(app: &mut App, action: Action) {
    let sight = sight(app);
    let Some(study) = &mut app.study else { return };
    match action {
        Action::Other => {
            let round = round(study);
            let place = hit(study).and_then(|now| round.iter().position(|&hit| hit == now));
            if let Some(next) = place.and_then(|place| round.get((place + 1) % round.len())) {
                study.knock.hit = *next;
            }
        }
        Action::Knock(_) if is_fixed(study).is_some() => {
            let reason = is_fixed(study).unwrap_or_default();
            app.say(reason);
        }
        Action::Knock(step) => study.knock.step = stepped(study.knock.step, STEPS.len(), 1, step),
        Action::Scroll(direction) => {
            let Some([seen, all]) = sight else { return };
            let step = if matches!(direction, Direction::Up | Direction::Left) { Step::PageBack } else { Step::PageOn };
            let places = (all + 1).saturating_sub(seen);
            study.knock.from = stepped(study.knock.from, places, seen.max(1), step);
        }
        _ => {}
    }
}

/// How many species are in sight, and how many there are; `None` before the path is known.
fn sight(app: &App) -> Option<[usize; 2]> {
    let study = app.study.as_ref()?;
    Some(bands(known(app, study)?, room(app.size)))
}

/// No further than to where the drawing still fills its place.
pub(super) fn settle(app: &mut App) {
    let Some([seen, all]) = sight(app).filter(|_| app.screen == Screen::Knock) else { return };
    if let Some(study) = &mut app.study {
        study.knock.from = study.knock.from.min(all.saturating_sub(seen));
    }
}
