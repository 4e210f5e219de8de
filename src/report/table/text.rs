//! The table as text: what it is of, then each scenario with its equilibria, what is undecided, and what the words mean.

use crate::analysis::equilibria::{Equilibria, Unresolved};
use crate::diag::Diagnostic;
use crate::diag::cleanse::cleanse;
use crate::diag::render::position;
use crate::model::{Model, Scenario};

use super::super::layout::paragraph;
use super::columns::COLUMNS;
use super::layout::{Cell, Head, Ink, grid};
use super::number::{human, human_above, human_below};
use super::{Row, Scene, Solved, Style, Table, words};

/// Undecided parts that are listed; the search may have left thousands.
const MOST_LISTED: usize = 12;
/// Narrower than this nothing is broken any further.
const NARROWEST: usize = 30;
/// Where the entries of the heading begin.
const ENTRIES: usize = 12;

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
    pub(super) fn clean(&self, text: &str) -> String {
        let text = cleanse(text);
        if self.style == Style::Unicode || text.is_ascii() {
            return text.into_owned();
        }
        text.chars().map(|c| if c.is_ascii() { c.to_string() } else { c.escape_default().to_string() }).collect()
    }

    fn paragraph(&self, first: &str, text: &str, indent: usize) -> String {
        let words: Vec<String> = text.split_whitespace().map(|word| self.clean(word)).collect();
        paragraph(first, &words.join(" "), indent, self.width)
    }
}

/// The table, ending in a line break.
pub fn text(table: &Table<'_>, page: Page) -> String {
    let page = &Page { width: page.width.max(NARROWEST), ..page };
    let mut text = heading(table, page);
    for (scene, ids) in table.scenes.iter().zip(table.ids()) {
        text.push('\n');
        text.push_str(&match &scene.outcome {
            Ok(solved) => scenario(table, scene, solved, &ids, page),
            Err(problems) => failed(table.model, scene, problems, page),
        });
    }
    text.push('\n');
    text.push_str(&legend(table, page));
    text.push_str(&page.paragraph("", words::CAUTION, 0));
    text
}

fn heading(table: &Table<'_>, page: &Page) -> String {
    let model = table.model;
    let mut text = page.paragraph("", &model.title.value, 0);
    if let Some(note) = &model.note {
        text.push_str(&page.paragraph("", note, 0));
    }
    text.push('\n');
    let mut entry = |title: &str, body: &str| text.push_str(&page.paragraph(&format!("  {title}"), body, ENTRIES));
    entry("program", concat!("restpoint ", env!("CARGO_PKG_VERSION")));
    entry("command", table.command);
    entry("SHA-256", table.sha256);
    for (name, sha256) in table.tables {
        entry("", &format!("{sha256} {name}"));
    }
    if !table.set.is_empty() {
        entry("set", &set(table));
    }
    entry("searched", &search_box(table));
    entry("budget", &budget(table));
    if table.interrupted {
        text.push('\n');
        text.push_str(&page.paragraph("", "INTERRUPTED: the search was broken off; this is a partial result.", 0));
    }
    text
}

fn set(table: &Table<'_>) -> String {
    let parameters = &table.model.parameters;
    let named =
        |&(id, value): &(crate::model::ParameterId, f64)| Some(format!("{} = {value}", parameters.get(id.0)?.name));
    table.set.iter().filter_map(named).collect::<Vec<_>>().join(", ")
}

/// The sides of the box; neighbours that share theirs are named together.
fn search_box(table: &Table<'_>) -> String {
    let mut groups: Vec<(Vec<&str>, String)> = Vec::new();
    for (species, bound) in table.model.species.iter().zip(table.bounds) {
        let unit = species.unit.as_ref().map_or(String::new(), |unit| format!(" {}", unit.value));
        let chosen = if bound.chosen { " (chosen)" } else { "" };
        let range = format!("{} to {}{unit}{chosen}", plain(bound.lower), plain(bound.upper));
        match groups.last_mut() {
            Some((symbols, shared)) if *shared == range => symbols.push(&species.symbol),
            _ => groups.push((vec![&species.symbol], range)),
        }
    }
    groups.iter().map(|(symbols, range)| format!("{} {range}", symbols.join(", "))).collect::<Vec<_>>().join("; ")
}

fn budget(table: &Table<'_>) -> String {
    format!("{} s for each scenario, {} boxes on each face", table.limits.seconds, table.limits.boxes)
}

/// A number as the file may have it, where that is short.
fn plain(x: f64) -> String {
    let exact = format!("{}", x + 0.0);
    if exact.len() <= 7 { exact } else { human(x) }
}

fn scenario(table: &Table<'_>, scene: &Scene, solved: &Solved, ids: &[String], page: &Page) -> String {
    let equilibria = &solved.equilibria;
    let mut text = name(table.model, scene, page);
    text.push_str(&overlay(table.model, scene, solved, page));
    let (is_proof, verdict) = words::verdict(equilibria);
    let (word, ink) = if is_proof { ("proved", Ink::Proved) } else { ("NOT PROVED COMPLETE", Ink::Undecided) };
    let line = page.paragraph("", &format!("{word}: {verdict}"), 2);
    text.push_str(&line.replacen(word, &ink.paint(word, page), 1));
    if !equilibria.list.is_empty() {
        text.push('\n');
        text.push_str(&equilibrium_grid(table, &table.rows(solved, ids), page));
    }
    text.push_str(&unresolved(table, equilibria, page));
    text
}

fn name(model: &Model, scene: &Scene, page: &Page) -> String {
    let name = model.scenarios.get(scene.scenario).map_or("", |scenario| &scenario.name);
    page.paragraph("", &format!("Scenario: {name}"), 0)
}

/// What the scenario changes.
fn overlay(model: &Model, scene: &Scene, solved: &Solved, page: &Page) -> String {
    let changes = model.scenarios.get(scene.scenario).map(|scenario| changes(model, scenario, solved));
    let changes = changes.filter(|changes| !changes.is_empty());
    page.paragraph("", &changes.map_or_else(|| "as the file has it".to_owned(), |changes| changes.join("; ")), 2)
}

fn changes(model: &Model, scenario: &Scenario, solved: &Solved) -> Vec<String> {
    let without = scenario.without.iter().map(|name| format!("without {}", name.value));
    let values = scenario.values.iter().filter_map(|(id, _)| {
        Some(format!("{} = {}", model.parameters.get(id.0)?.name, plain(*solved.values.get(id.0)?)))
    });
    let harvests = scenario.harvest.iter().map(|harvest| format!("harvest {}", harvest.name));
    let processes = scenario.processes.iter().map(|process| format!("process {}", process.name));
    without.chain(values).chain(harvests).chain(processes).collect()
}

fn equilibrium_grid(table: &Table<'_>, rows: &[Row<'_>], page: &Page) -> String {
    let heads: Vec<Head> = COLUMNS.iter().flat_map(|column| (column.heads)(table)).collect();
    let cells = |row: &Row<'_>| -> Vec<Cell> { COLUMNS.iter().flat_map(|column| (column.cells)(row)).collect() };
    grid(&heads, &rows.iter().map(cells).collect::<Vec<_>>(), page)
}

fn unresolved(table: &Table<'_>, equilibria: &Equilibria, page: &Page) -> String {
    let listed = &equilibria.unresolved;
    let mut text = String::new();
    for one in listed.iter().take(MOST_LISTED) {
        text.push('\n');
        text.push_str(&undecided(table, one, page));
    }
    if listed.len() > MOST_LISTED {
        let more = listed.len() - MOST_LISTED;
        text.push('\n');
        text.push_str(&page.paragraph("  ?", &format!("and {more} more, all of them in --format json"), 4));
    }
    text
}

fn undecided(table: &Table<'_>, one: &Unresolved, page: &Page) -> String {
    let sides = table.model.species.iter().zip(&one.region).map(|(species, side)| {
        if side.is_point() {
            format!("{} = {}", species.symbol, human(side.lo()))
        } else {
            format!("{} from {} to {}", species.symbol, human_below(side.lo()), human_above(side.hi()))
        }
    });
    let place = sides.collect::<Vec<_>>().join(", ");
    let more = if one.text.is_empty() { String::new() } else { format!("; {}", one.text) };
    let body = format!("undecided: {}: {place}{more}.", words::probably_in_words(one.probably));
    let lines = page.paragraph("  ?", &body, 4);
    lines.replacen("undecided", &Ink::Undecided.paint("undecided", page), 1)
}

fn failed(model: &Model, scene: &Scene, problems: &[Diagnostic], page: &Page) -> String {
    let mut text = name(model, scene, page);
    for problem in problems {
        let (file, line, column) = position(&model.sources, problem.at);
        text.push_str(&page.paragraph("  FAILED:", &format!("{file}:{line}:{column}: {}.", problem.message), 10));
    }
    text
}

/// What the words mean that are used.
fn legend(table: &Table<'_>, page: &Page) -> String {
    let solved = || table.scenes.iter().filter_map(|scene| scene.outcome.as_ref().ok());
    let any = |proven: bool| solved().any(|solved| solved.equilibria.list.iter().any(|e| e.proven == proven));
    let open = solved().any(|solved| !solved.equilibria.unresolved.is_empty());
    let meanings = [
        (any(true), "proved", "exactly one equilibrium lies within the error given, relative to each abundance."),
        (any(false), "numerical", "computed, but nothing is proved about it."),
        (open, "undecided", "a part of the search box that may hold equilibria or none."),
    ];
    let used = meanings.iter().filter(|(is_used, ..)| *is_used);
    let lines: String = used.map(|(_, word, meaning)| page.paragraph(&format!("{word}:"), meaning, ENTRIES)).collect();
    if lines.is_empty() { lines } else { lines + "\n" }
}
