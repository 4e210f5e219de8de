//! What if a value were another?

use super::paint::Page;
use crate::app::geometry::Area;
use crate::app::{App, Study};
use crate::report::grid::Ink;

/// The parameters, one a line.
pub(super) fn draw(_: &App, study: &Study, page: &mut Page<'_>, area: Area) {
    for (row, parameter) in study.model().parameters.iter().take(area.rows.into()).enumerate() {
        page.text(area, [2, row as u16], &parameter.name, Ink::Plain);
        if row == study.parameter {
            page.row(area, row as u16, Ink::Chosen);
        }
    }
}
