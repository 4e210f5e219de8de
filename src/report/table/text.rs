//! The table as text: what it is of, then each scenario with its equilibria, what is undecided, and what the words mean.

use crate::analysis::equilibria::Equilibria;
use crate::diag::Diagnostic;
use crate::diag::cleanse::cleanse;
use crate::model::Model;

use super::super::layout::paragraph;
use super::columns::Glyphs;
use super::layout::{Ink, grid};
use super::provenance::plain;
use super::sheet::Sheet;
use super::{Scene, Solved, Style, Table, provenance, scene, words};

/// Narrower than this nothing is broken any further.
const NARROWEST: usize = 30;
/// Where the entries of the heading begin.
const ENTRIES: usize = 12;

/// Where the meanings of words begin.
const MEANINGS: usize = 14;

/// What the text is put on.
#[derive(Clone, Copy, Debug)]
pub struct Page {
    /// Columns.
    pub width: usize,
    /// Which characters may be used.
    pub style: Style,
    /// Whether colour repeats what words say.
    pub color: bool,
}

impl Page {
    /// A text from a file, harmless, and in ASCII where asked for.
    pub(in crate::report) fn clean(&self, text: &str) -> String {
        clean(text, self.style)
    }

    /// Words in lines of the page's width, harmless, the first after a text of its own, the others indented.
    pub fn paragraph(&self, first: &str, text: &str, indent: usize) -> String {
        let words: Vec<String> = text.split_whitespace().map(|word| self.clean(word)).collect();
        paragraph(first, &words.join(" "), indent, self.width)
    }
}

/// A text from a file, harmless, and in ASCII where asked for.
pub fn clean(text: &str, style: Style) -> String {
    let text = cleanse(text);
    if style == Style::Unicode || text.is_ascii() {
        return text.into_owned();
    }
    text.chars().map(|c| if c.is_ascii() { c.to_string() } else { c.escape_default().to_string() }).collect()
}

/// The table, ending in a line break.
pub fn text(table: &Table<'_>, page: Page) -> String {
    let page = &Page { width: page.width.max(NARROWEST), ..page };
    let mut text = heading(table, page);
    for (scene, ids) in table.named() {
        text.push('\n');
        text.push_str(&match &scene.outcome {
            Ok(solved) => title(table.model, scene, page) + &scenario(table, scene, solved, ids, page),
            Err(problems) => failed(table.model, scene, problems, page),
        });
    }
    text.push('\n');
    text.push_str(&legend(table, page));
    text.push_str(&page.paragraph("", words::CAUTION, 0));
    text
}

pub(in crate::report) fn heading(table: &Table<'_>, page: &Page) -> String {
    let model = table.model;
    let mut text = page.paragraph("", &model.title.value, 0);
    if let Some(note) = &model.note {
        text.push_str(&page.paragraph("", note, 0));
    }
    text.push('\n');
    for fact in provenance::facts(table, plain) {
        for (place, body) in fact.texts.iter().enumerate() {
            let label = if place == 0 { fact.label } else { "" };
            text.push_str(&page.paragraph(&format!("  {label}"), body, ENTRIES));
        }
    }
    if table.interrupted {
        text.push('\n');
        text.push_str(&page.paragraph("", words::INTERRUPTED, 0));
    }
    text
}

pub(in crate::report) fn title(model: &Model, scene: &Scene, page: &Page) -> String {
    page.paragraph("", &format!("Scenario: {}", scene::name(model, scene)), 0)
}

fn scenario(table: &Table<'_>, scene: &Scene, solved: &Solved, ids: &[String], page: &Page) -> String {
    let rows = table.rows(scene, solved, ids);
    let mut text = page.paragraph("", &scene::changes(table, scene, solved, plain), 2);
    text.push_str(&verdict(&solved.equilibria, page));
    if !rows.is_empty() {
        let glyphs = if page.style == Style::Ascii { Glyphs::Ascii } else { Glyphs::Unicode };
        let sheet = Sheet::new(table, &rows, glyphs);
        text.push('\n');
        text.push_str(&grid(&sheet.heads, &sheet.rows, page));
    }
    for sentence in scene::sentences(table, scene, solved, &rows, ids) {
        text.push('\n');
        text.push_str(&page.paragraph("", &sentence, 2));
    }
    for body in scene::all_undecided(table, solved) {
        text.push('\n');
        text.push_str(&undecided(&body, page));
    }
    text
}

/// What the search came to.
pub(in crate::report) fn verdict(equilibria: &Equilibria, page: &Page) -> String {
    let (is_proof, verdict) = words::verdict(equilibria);
    let (word, ink) = if is_proof { (words::proof(true), Ink::Proved) } else { (words::INCOMPLETE, Ink::Undecided) };
    let line = page.paragraph("", &format!("{word}: {verdict}"), 2);
    line.replacen(word, &ink.paint(word, page), 1)
}

pub(in crate::report) fn undecided(body: &str, page: &Page) -> String {
    let word = words::UNDECIDED;
    let lines = page.paragraph("  ?", &format!("{word}: {body}."), 4);
    lines.replacen(word, &Ink::Undecided.paint(word, page), 1)
}

/// A scenario that nothing could be looked for in, and why.
pub fn failed(model: &Model, scene: &Scene, problems: &[Diagnostic], page: &Page) -> String {
    let problem = |problem: &String| page.paragraph("  FAILED:", problem, 10);
    let problems: String = scene::problems(model, problems).iter().map(problem).collect();
    title(model, scene, page) + &problems
}

/// What the words mean that are used.
fn legend(table: &Table<'_>, page: &Page) -> String {
    let used = words::meanings(table);
    let lines: String =
        used.iter().map(|(word, meaning)| page.paragraph(&format!("{word}:"), meaning, MEANINGS)).collect();
    if lines.is_empty() { lines } else { lines + "\n" }
}
