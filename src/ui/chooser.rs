//! Which model?

use super::paint::Page;
use crate::app::App;
use crate::app::geometry::Area;
use crate::report::grid::Ink;

/// The models, one a line.
pub(super) fn draw(app: &App, page: &mut Page<'_>, area: Area) {
    let chooser = &app.chooser;
    for (row, (place, entry)) in
        chooser.entries.iter().enumerate().skip(chooser.from).take(area.rows.into()).enumerate()
    {
        let row = row as u16;
        page.text(area, [2, row], &entry.title, Ink::Plain);
        if place == chooser.chosen {
            page.row(area, row, Ink::Chosen);
        }
    }
}
