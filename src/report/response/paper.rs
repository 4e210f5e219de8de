//! Headings, sentences and tables, put on paper: the forms that people read, all from the same parts.
//!
//! What is said is decided elsewhere; here it gets its lines, escapes and rules. Drawings are for a page of fixed columns and
//! stand in text alone.

use super::super::table::layout::{Ink, grid};
use super::super::table::sheet::Sheet;
use super::super::table::text::{heading, title};
use super::super::table::words::INTERRUPTED;
use super::super::table::{CAUTION, Form, Page, Scene, Table, failed, latex, markdown, scene};

/// Narrower than this nothing is broken any further.
const NARROWEST: usize = 30;

/// Where the meanings of words begin.
const MEANINGS: usize = 14;

/// Something on paper.
#[derive(Clone, Debug)]
pub(super) enum Part<'p> {
    /// A scenario begins.
    Scenario(&'p Scene),
    /// A scenario that nothing could be looked for in.
    Failed(&'p Scene),
    /// What comes next, with a capital.
    Heading(String),
    /// A sentence or more.
    Said(String),
    /// The same after a word that stands out.
    Marked(&'static str, Ink, String),
    /// A table; nothing where it has no rows.
    Grid(Sheet),
    /// Lines as they stand, harmless.
    Drawing(Vec<String>),
    /// A word and what it means.
    Meaning(&'static str, &'static str),
}

/// The parts in one of the forms for people.
pub(super) fn written(table: &Table<'_>, parts: &[Part<'_>], form: Form, page: Page) -> String {
    match form {
        Form::Markdown => in_markdown(table, parts, &page),
        Form::Latex => in_latex(table, parts, &page),
        _ => text(table, parts, &Page { width: page.width.max(NARROWEST), ..page }),
    }
}

fn text(table: &Table<'_>, parts: &[Part<'_>], page: &Page) -> String {
    let mut text = heading(table, page);
    let mut before = Kind::Apart;
    for part in parts {
        let lines = one(table, part, page);
        let kind = Kind::of(part);
        // Sentences stand close, and so does what is below a heading; all else has room around it.
        let is_close = kind != Kind::Apart
            && (before == kind || before == Kind::Heading)
            && !matches!(part, Part::Scenario(_) | Part::Heading(_));
        if !lines.is_empty() && !is_close {
            text.push('\n');
        }
        text.push_str(&lines);
        before = kind;
    }
    text.push('\n');
    text + &page.paragraph("", CAUTION, 0)
}

/// What decides how close parts stand.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Kind {
    Heading,
    Sentence,
    Table,
    Meaning,
    Apart,
}

impl Kind {
    fn of(part: &Part<'_>) -> Self {
        match part {
            Part::Scenario(_) | Part::Heading(_) => Self::Heading,
            Part::Said(_) | Part::Marked(..) => Self::Sentence,
            Part::Grid(_) => Self::Table,
            Part::Meaning(..) => Self::Meaning,
            Part::Failed(_) | Part::Drawing(_) => Self::Apart,
        }
    }
}

fn one(table: &Table<'_>, part: &Part<'_>, page: &Page) -> String {
    match part {
        Part::Scenario(scene) => title(table.model, scene, page),
        Part::Failed(scene) => match &scene.outcome {
            Err(problems) => failed(table.model, scene, problems, page),
            Ok(_) => String::new(),
        },
        Part::Heading(words) => page.paragraph("", words, 2),
        Part::Said(said) => page.paragraph("", said, 2),
        Part::Marked(word, ink, said) => {
            let lines = page.paragraph("", &format!("{word}: {said}"), 2);
            lines.replacen(word, &ink.paint(word, page), 1)
        }
        Part::Grid(sheet) => grid(&sheet.heads, &sheet.rows, page),
        Part::Drawing(lines) => lines.join("\n") + "\n",
        Part::Meaning(word, meaning) => page.paragraph(&format!("{word}:"), meaning, MEANINGS),
    }
}

fn in_markdown(table: &Table<'_>, parts: &[Part<'_>], page: &Page) -> String {
    let escaped = |text: &str| markdown::escaped(text, page);
    let mut all = vec![format!("# {}", escaped(&table.model.title.value))];
    all.extend(table.model.note.iter().map(|note| format!("Note: {}", escaped(note))));
    all.push(markdown::heading(table, page));
    all.extend(table.interrupted.then(|| format!("**{INTERRUPTED}**")));
    let name = |scene: &Scene| format!("## Scenario: {}", escaped(scene::name(table.model, scene)));
    for part in parts {
        match part {
            Part::Scenario(scene) => all.push(name(scene)),
            Part::Failed(scene) => {
                all.push(name(scene));
                all.extend(problems(table, scene).iter().map(|problem| format!("**FAILED**: {}", escaped(problem))));
            }
            Part::Heading(words) => all.push(format!("### {}", escaped(words))),
            Part::Said(said) => all.push(escaped(said)),
            Part::Marked(word, _, said) => all.push(format!("**{word}**: {}", escaped(said))),
            Part::Grid(sheet) if sheet.rows.is_empty() => {}
            Part::Grid(sheet) => all.push(markdown::grid(sheet, page)),
            Part::Drawing(_) => {}
            Part::Meaning(word, meaning) => all.push(format!("*{word}*: {}", escaped(meaning))),
        }
    }
    all.push(CAUTION.to_owned());
    all.join("\n\n") + "\n"
}

fn in_latex(table: &Table<'_>, parts: &[Part<'_>], page: &Page) -> String {
    let escaped = |text: &str| latex::escaped(text, page);
    let mut all = vec![latex::HEAD.to_owned(), format!("\\subsection*{{{}}}", escaped(&table.model.title.value))];
    all.extend(table.model.note.iter().map(|note| escaped(note)));
    all.push(latex::heading(table, page));
    all.extend(table.interrupted.then(|| format!("\\textbf{{{INTERRUPTED}}}")));
    let name = |scene: &Scene| format!("\\subsubsection*{{Scenario: {}}}", escaped(scene::name(table.model, scene)));
    for part in parts {
        match part {
            Part::Scenario(scene) => all.push(name(scene)),
            Part::Failed(scene) => {
                all.push(name(scene));
                let problems = problems(table, scene);
                all.extend(problems.iter().map(|problem| format!("\\textbf{{FAILED}}: {}", escaped(problem))));
            }
            Part::Heading(words) => all.push(format!("\\emph{{{}}}", escaped(words))),
            Part::Said(said) => all.push(escaped(said)),
            Part::Marked(word, _, said) => all.push(format!("\\textbf{{{word}}}: {}", escaped(said))),
            Part::Grid(sheet) => all.extend(latex::grids(sheet, page)),
            Part::Drawing(_) => {}
            Part::Meaning(word, meaning) => all.push(format!("\\emph{{{word}}}: {}", escaped(meaning))),
        }
    }
    all.push(CAUTION.to_owned());
    all.join("\n\n") + "\n"
}

fn problems(table: &Table<'_>, scene: &Scene) -> Vec<String> {
    scene.outcome.as_ref().err().map_or_else(Vec::new, |problems| scene::problems(table.model, problems))
}
