//! The comparison as text: what it is of, each scenario, then a block for each equilibrium.

use super::super::table::columns::Glyphs;
use super::super::table::layout::grid;
use super::super::table::text::{heading, title, undecided, verdict};
use super::super::table::{CAUTION, Page, Style, failed, provenance::plain, scene};
use super::sheet::sheet;
use super::{Comparison, Identity, meanings, overview, words};

/// Narrower than this nothing is broken any further.
const NARROWEST: usize = 30;

/// Where the meanings of words begin.
const MEANINGS: usize = 14;

/// The comparison, ending in a line break.
pub fn text(comparison: &Comparison<'_>, page: Page) -> String {
    let page = &Page { width: page.width.max(NARROWEST), ..page };
    let table = comparison.table;
    let mut text = heading(table, page);
    for (place, scene) in table.scenes.iter().enumerate() {
        text.push('\n');
        match &scene.outcome {
            Err(problems) => text.push_str(&failed(table.model, scene, problems, page)),
            Ok(solved) => {
                text.push_str(&title(table.model, scene, page));
                text.push_str(&page.paragraph("", &scene::changes(table, scene, solved, plain), 2));
                text.push_str(&verdict(&solved.equilibria, page));
                for sentence in overview(table, place) {
                    text.push_str(&page.paragraph("", &sentence, 2));
                }
                for open in scene::all_undecided(table, solved) {
                    text.push_str(&undecided(&open, page));
                }
            }
        }
    }
    for identity in &comparison.rows {
        text.push('\n');
        text.push_str(&block(comparison, identity, page));
    }
    text.push('\n');
    let meanings = meanings(table);
    text.extend(meanings.iter().map(|(word, meaning)| page.paragraph(&format!("{word}:"), meaning, MEANINGS)));
    text.push('\n');
    text + &page.paragraph("", CAUTION, 0)
}

fn block(comparison: &Comparison<'_>, identity: &Identity, page: &Page) -> String {
    let glyphs = if page.style == Style::Ascii { Glyphs::Ascii } else { Glyphs::Unicode };
    let sheet = sheet(comparison, identity, glyphs);
    let mut text = grid(&sheet.heads, &sheet.rows, page);
    let scenes = 0..identity.entries.len();
    for sentence in scenes.filter_map(|scene| words::sentence(comparison, identity, scene)) {
        text.push_str(&page.paragraph("", &sentence, 2));
    }
    text
}
