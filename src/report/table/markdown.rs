//! The table as Markdown with tables (GitHub's extension of CommonMark), for a report or a wiki.
//!
//! The same words and rounded numbers as the text, one table a scenario, never broken. Everything that a name could mean to
//! Markdown or HTML is escaped; names stand in headings, table cells and behind words of ours, where a sign at the start of
//! a line means nothing.

use super::columns::Glyphs;
use super::layout::{Align, Cell, Head, filled};
use super::provenance::plain;
use super::sheet::Sheet;
use super::text::Page;
use super::{Scene, Solved, Style, Table, provenance, scene, words};

/// The table, ending in a line break; the width and colour of the page are not used.
pub fn markdown(table: &Table<'_>, page: Page) -> String {
    let mut parts = vec![format!("# {}", escaped(&table.model.title.value, &page))];
    parts.extend(table.model.note.iter().map(|note| format!("Note: {}", escaped(note, &page))));
    parts.push(heading(table, &page));
    if table.interrupted {
        parts.push(format!("**{}**", words::INTERRUPTED));
    }
    for (scene, ids) in table.named() {
        parts.push(format!("## Scenario: {}", escaped(scene::name(table.model, scene), &page)));
        match &scene.outcome {
            Ok(solved) => parts.extend(scenario(table, scene, solved, ids, &page)),
            Err(problems) => {
                let all = scene::problems(table.model, problems);
                parts.extend(all.iter().map(|problem| format!("**FAILED**: {}", escaped(problem, &page))));
            }
        }
    }
    let meanings = words::meanings(table);
    parts.extend(meanings.iter().map(|(word, meaning)| format!("*{word}*: {}", escaped(meaning, &page))));
    parts.push(words::CAUTION.to_owned());
    parts.join("\n\n") + "\n"
}

pub(in crate::report) fn heading(table: &Table<'_>, page: &Page) -> String {
    let all = provenance::facts(table, plain);
    facts(all.iter().flat_map(|fact| fact.texts.iter().map(|text| (fact.label, text.as_str()))), page)
}

/// A table of labels and texts.
pub(in crate::report) fn facts<'f>(all: impl Iterator<Item = (&'f str, &'f str)>, page: &Page) -> String {
    let top = ["| what | how |".to_owned(), "|:--|:--|".to_owned()];
    let lines = all.map(|(label, text)| format!("| {label} | {} |", escaped(text, page)));
    top.into_iter().chain(lines).collect::<Vec<_>>().join("\n")
}

fn scenario(table: &Table<'_>, scene: &Scene, solved: &Solved, ids: &[String], page: &Page) -> Vec<String> {
    let rows = table.rows(scene, solved, ids);
    let (is_proof, verdict) = words::verdict(&solved.equilibria);
    let word = if is_proof { words::proof(true) } else { words::INCOMPLETE };
    let mut parts = vec![
        format!("Changes: {}", escaped(&scene::changes(table, scene, solved, plain), page)),
        format!("**{word}**: {verdict}"),
    ];
    if !rows.is_empty() {
        let glyphs = if page.style == Style::Ascii { Glyphs::Ascii } else { Glyphs::Unicode };
        parts.push(grid(&Sheet::new(table, &rows, glyphs), page));
    }
    parts.extend(scene::sentences(table, scene, solved, &rows, ids).iter().map(|sentence| escaped(sentence, page)));
    let open = scene::all_undecided(table, solved);
    parts.extend(open.iter().map(|body| format!("*{}*: {}.", words::UNDECIDED, escaped(body, page))));
    parts
}

pub(in crate::report) fn grid(sheet: &Sheet, page: &Page) -> String {
    let columns = filled(&sheet.heads, &sheet.rows);
    let heads: Vec<&Head> = columns.iter().filter_map(|&column| sheet.heads.get(column)).collect();
    let title = |head: &&Head| {
        let unit = if head.unit.is_empty() { String::new() } else { format!(" ({})", head.unit) };
        escaped(&format!("{}{unit}", head.title), page)
    };
    let rule = |head: &&Head| if head.align == Align::Point { "--:" } else { ":--" }.to_owned();
    let cells = |row: &Vec<Cell>| {
        let cells = columns.iter().filter_map(|&column| row.get(column));
        line(cells.map(|cell| escaped(cell.text(), page)))
    };
    let top = [line(heads.iter().map(title)), line(heads.iter().map(rule))];
    top.into_iter().chain(sheet.rows.iter().map(cells)).collect::<Vec<_>>().join("\n")
}

fn line(cells: impl Iterator<Item = String>) -> String {
    format!("| {} |", cells.collect::<Vec<_>>().join(" | "))
}

/// A text that Markdown shows as it is, on one line.
pub(in crate::report) fn escaped(text: &str, page: &Page) -> String {
    let clean = page.clean(text);
    let mut out = String::with_capacity(clean.len() + 8);
    for word in clean.split_whitespace() {
        if !out.is_empty() {
            out.push(' ');
        }
        // An address without any mark would become a link.
        let is_address = word.contains("://") || word.to_lowercase().contains("www.");
        for c in word.chars() {
            if "\\`*_{}[]<>&|~$#^!@".contains(c) || (is_address && ":.".contains(c)) {
                out.push('\\');
            }
            out.push(c);
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn signs_of_markdown_lose_their_meaning() {
        let check = |text: &str, style, expected: &str| {
            assert_eq!(escaped(text, &Page { width: 80, style, color: false }), expected);
        };
        check("a|b <i>&amp;", Style::Unicode, "a\\|b \\<i\\>\\&amp;");
        check("`x` _y_ *z*\\", Style::Unicode, "\\`x\\` \\_y\\_ \\*z\\*\\\\");
        check("a\nb", Style::Unicode, "a\\\\nb");
        check("kt/yr, -0.5", Style::Unicode, "kt/yr, -0.5");
        check("http://x.y www.z.w", Style::Unicode, "http\\://x\\.y www\\.z\\.w");
        check("κ", Style::Ascii, "\\\\u\\{3ba\\}");
    }
}
