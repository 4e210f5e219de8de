//! A sketch as lines of text: what it is of, the drawing between its axes, the legend.

use super::canvas::draw;
use super::drawing::{lay, size};
use super::legend::{held, legend};
use super::{Extras, Picture, View};
use crate::model::Model;
use crate::report::table::{CAUTION, Page};

/// The title of a model, above its sketches.
pub fn heading(model: &Model, page: Page) -> String {
    page.paragraph("", &model.title.value, 0)
}

/// What all sketches end with.
pub fn closing(page: Page) -> String {
    let computed = "Directions, lines and curves are computed; nothing is proved of them.";
    format!("{}{}", page.paragraph("", computed, 0), page.paragraph("", CAUTION, 0))
}

/// One sketch, ending in a line break.
pub fn text(view: &View<'_>, picture: &Picture, page: Page) -> String {
    let canvas = draw(view, picture, &Extras::default(), page.style);
    let name = view.model.scenarios.get(view.scenario).map_or("", |scenario| &scenario.name);
    let mut text = page.paragraph("", &format!("Scenario: {name}"), 0);
    if let Some(held) = held(view) {
        text.push_str(&page.paragraph("", &held, 2));
    }
    for line in lay(view, picture, &canvas, size(&canvas), page.style).lines(page.color) {
        text.push_str(&line);
        text.push('\n');
    }
    text.push_str(&legend(view, picture, &canvas, &page));
    text
}
