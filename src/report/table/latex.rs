//! The table as LaTeX, to be taken into a report by `\input`; needs no package but `booktabs`.
//!
//! The same words and rounded numbers as the text. A table too wide for a page goes on in another, with the names of the
//! equilibria again. Everything that a name could mean to TeX is escaped; letters beyond ASCII stay as they are (UTF-8).

use super::columns::Glyphs;
use super::layout::{Align, Head, filled, parts};
use super::provenance::plain;
use super::sheet::Sheet;
use super::text::Page;
use super::{Scene, Solved, Table, provenance, scene, words};

/// What a document needs that takes a table in.
pub(in crate::report) const HEAD: &str = "% Needs \\usepackage{booktabs}.";

/// Letters across a page.
const WIDTH: usize = 84;

/// The table, ending in a line break; the width and colour of the page are not used.
pub fn latex(table: &Table<'_>, page: Page) -> String {
    let mut parts = vec![HEAD.to_owned(), format!("\\subsection*{{{}}}", escaped(&table.model.title.value, &page))];
    parts.extend(table.model.note.iter().map(|note| escaped(note, &page)));
    parts.push(heading(table, &page));
    if table.interrupted {
        parts.push(format!("\\textbf{{{}}}", words::INTERRUPTED));
    }
    for (scene, ids) in table.named() {
        parts.push(format!("\\subsubsection*{{Scenario: {}}}", escaped(scene::name(table.model, scene), &page)));
        match &scene.outcome {
            Ok(solved) => parts.extend(scenario(table, scene, solved, ids, &page)),
            Err(problems) => {
                let all = scene::problems(table.model, problems);
                parts.extend(all.iter().map(|problem| format!("\\textbf{{FAILED}}: {}", escaped(problem, &page))));
            }
        }
    }
    let meanings = words::meanings(table);
    parts.extend(meanings.iter().map(|(word, meaning)| format!("\\emph{{{word}}}: {}", escaped(meaning, &page))));
    parts.push(words::CAUTION.to_owned());
    parts.join("\n\n") + "\n"
}

pub(in crate::report) fn heading(table: &Table<'_>, page: &Page) -> String {
    let all = provenance::facts(table, plain);
    facts(all.iter().flat_map(|fact| fact.texts.iter().map(|text| (fact.label, text.as_str()))), page)
}

/// A table of labels and texts.
pub(in crate::report) fn facts<'f>(all: impl Iterator<Item = (&'f str, &'f str)>, page: &Page) -> String {
    let rows = all.map(|(label, text)| format!("{label} & {} \\\\\n", escaped(text, page)));
    tabular("lp{0.75\\linewidth}", "", &rows.collect::<String>())
}

fn scenario(table: &Table<'_>, scene: &Scene, solved: &Solved, ids: &[String], page: &Page) -> Vec<String> {
    let rows = table.rows(scene, solved, ids);
    let (is_proof, verdict) = words::verdict(&solved.equilibria);
    let word = if is_proof { words::proof(true) } else { words::INCOMPLETE };
    let mut all = vec![
        format!("Changes: {}.", escaped(&scene::changes(table, scene, solved, plain), page)),
        format!("\\textbf{{{word}}}: {verdict}"),
    ];
    all.extend(grids(&Sheet::new(table, &rows, Glyphs::Words), page));
    all.extend(scene::sentences(table, scene, solved, &rows, ids).iter().map(|sentence| escaped(sentence, page)));
    let open = scene::all_undecided(table, solved);
    all.extend(open.iter().map(|body| format!("\\emph{{{}}}: {}.", words::UNDECIDED, escaped(body, page))));
    all
}

/// The equilibria in as many tables as their columns need.
pub(in crate::report) fn grids(sheet: &Sheet, page: &Page) -> Vec<String> {
    let columns = filled(&sheet.heads, &sheet.rows);
    let letters = |text: &str| text.chars().count();
    let width = |&column: &usize| {
        let cells = sheet.rows.iter().filter_map(|row| row.get(column)).map(|cell| letters(cell.text()));
        let heads = sheet.heads.get(column).into_iter().flat_map(|head| [letters(&head.title), letters(&head.unit)]);
        cells.chain(heads).max().unwrap_or(0)
    };
    let widths: Vec<usize> = columns.iter().map(width).collect();
    let split = parts(&widths, WIDTH);
    let chosen =
        split.iter().map(|part| part.iter().filter_map(|&place| columns.get(place).copied()).collect::<Vec<_>>());
    chosen.map(|columns| grid(sheet, &columns, page)).collect()
}

pub(in crate::report) fn grid(sheet: &Sheet, columns: &[usize], page: &Page) -> String {
    let heads: Vec<&Head> = columns.iter().filter_map(|&column| sheet.heads.get(column)).collect();
    let letter = |head: &&Head| if head.align == Align::Point { 'r' } else { 'l' };
    let line = |cells: &mut dyn Iterator<Item = String>| format!("{} \\\\\n", cells.collect::<Vec<_>>().join(" & "));
    let titles = line(&mut heads.iter().map(|head| escaped(&head.title, page)));
    let units = line(&mut heads.iter().map(|head| escaped(&head.unit, page)));
    let has_units = heads.iter().any(|head| !head.unit.is_empty());
    let body = sheet.rows.iter().map(|row| {
        line(&mut columns.iter().filter_map(|&column| row.get(column)).map(|cell| words_and_numbers(cell.text(), page)))
    });
    let top = if has_units { titles + &units } else { titles };
    tabular(&heads.iter().map(letter).collect::<String>(), &top, &body.collect::<String>())
}

fn tabular(columns: &str, heads: &str, body: &str) -> String {
    let heads = if heads.is_empty() { String::new() } else { format!("{heads}\\midrule\n") };
    format!("\\noindent\\begin{{tabular}}{{{columns}}}\n\\toprule\n{heads}{body}\\bottomrule\n\\end{{tabular}}")
}

fn words_and_numbers(text: &str, page: &Page) -> String {
    text.split_whitespace().map(|word| number_or_text(word, page)).collect::<Vec<_>>().join(" ")
}

/// A number in mathematics, where its minus is one; anything else as text.
fn number_or_text(text: &str, page: &Page) -> String {
    let is_number = text.starts_with(|c: char| c.is_ascii_digit() || c == '-') && text.parse::<f64>().is_ok();
    match text.split_once('e') {
        _ if !is_number => escaped(text, page),
        Some((digits, exponent)) => format!("${digits}\\times 10^{{{exponent}}}$"),
        None => format!("${text}$"),
    }
}

/// Words of more letters than this may be broken: hashes and paths.
const BREAKABLE: usize = 30;

/// Letters between two breaks.
const PIECE: usize = 8;

/// A text that TeX prints as it is, on one line.
pub(in crate::report) fn escaped(text: &str, page: &Page) -> String {
    let clean = page.clean(text);
    let word = |word: &str| {
        let letters: Vec<String> = word.chars().map(letter).collect();
        let piece = if letters.len() > BREAKABLE { PIECE } else { BREAKABLE };
        letters.chunks(piece).map(<[String]>::concat).collect::<Vec<_>>().join("\\allowbreak{}")
    };
    clean.split_whitespace().map(word).collect::<Vec<_>>().join(" ")
}

/// A character as TeX prints it. Quotes and dashes are kept from joining others, and from being shorthands of babel.
fn letter(c: char) -> String {
    match c {
        '\\' => "\\textbackslash{}".to_owned(),
        '^' => "\\textasciicircum{}".to_owned(),
        '~' => "\\textasciitilde{}".to_owned(),
        '<' => "\\textless{}".to_owned(),
        '>' => "\\textgreater{}".to_owned(),
        '|' => "\\textbar{}".to_owned(),
        '`' => "\\textasciigrave{}".to_owned(),
        '"' => "\\symbol{34}".to_owned(),
        '\'' => "\\textquotesingle{}".to_owned(),
        '-' => "-{}".to_owned(),
        '{' | '}' | '$' | '&' | '#' | '_' | '%' => format!("\\{c}"),
        other => other.to_string(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::check::Style;

    const PAGE: Page = Page { width: 80, style: Style::Unicode, color: false };

    #[test]
    fn signs_of_tex_lose_their_meaning() {
        let check = |text: &str, expected: &str| assert_eq!(escaped(text, &PAGE), expected);
        check("50 % of_x & #1 $y$ {z}", "50 \\% of\\_x \\& \\#1 \\$y\\$ \\{z\\}");
        check("a\\b^c~d", "a\\textbackslash{}b\\textasciicircum{}c\\textasciitilde{}d");
        check("--scenario", "-{}-{}scenario");
        check("κοδ, größer", "κοδ, größer");
        let broken = ["a".repeat(8), "a".repeat(8), "a".repeat(8), "a".repeat(7)].join("\\allowbreak{}");
        check(&"a".repeat(31), &broken);
        check(&"a".repeat(30), &"a".repeat(30));
    }

    #[test]
    fn numbers_are_mathematics() {
        for (text, expected) in [
            ("-0.1100", "$-0.1100$"),
            ("3e-16", "$3\\times 10^{-16}$"),
            ("unknown", "unknown"),
            ("nan", "nan"),
            ("-", "-{}"),
            ("", ""),
        ] {
            assert_eq!(number_or_text(text, &PAGE), expected);
        }
    }
}
