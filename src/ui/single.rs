//! What screens about one equilibrium share: which it is, what is said where there is none, the line of signs.

use unicode_width::UnicodeWidthStr;

use super::paint::Page;
use crate::app::Study;
use crate::app::geometry::Area;
use crate::report::grid::Ink;

/// The equilibrium on the left, what is looked at on the right; what is looked at gives way last.
pub(super) fn heading(label: &str, what: &str, page: &mut Page<'_>, area: Area) {
    let width = u16::try_from(what.width()).unwrap_or(u16::MAX);
    let (left, right) = area.left(area.columns.saturating_sub(width.saturating_add(2)).max(area.columns / 3));
    page.text(left, [0, 0], label, Ink::Strong);
    page.text(right, [right.columns.saturating_sub(width), 0], what, Ink::Strong);
}

/// Why there is nothing to be shown.
pub(super) fn none(study: &Study, page: &mut Page<'_>, area: Area) {
    match study.slot().and_then(|slot| slot.found.as_ref()).map(|(_, scene)| &scene.outcome) {
        None => {
            page.text(area, [0, 0], "Not searched yet.", Ink::Faint);
        }
        Some(Ok(_)) => {
            page.words(area, "No equilibrium was found in this scenario.", Ink::Plain);
        }
        Some(Err(problems)) => {
            let text: Vec<&str> = problems.iter().map(|problem| problem.message.as_str()).collect();
            page.words(area, &text.join("; "), Ink::Warning);
        }
    }
}

/// The signs, in one line below.
pub(super) fn below(signs: &str, page: &mut Page<'_>, area: Area) {
    page.text(area, [0, 0], signs, Ink::Faint);
}
