//! The comparison as LaTeX, to be taken into a report by `\input`; needs no package but `booktabs`.

use super::super::table::columns::Glyphs;
use super::super::table::latex::{escaped, grids, heading};
use super::super::table::provenance::plain;
use super::super::table::words::{INCOMPLETE, INTERRUPTED, UNDECIDED, proof, verdict};
use super::super::table::{CAUTION, Page, scene};
use super::sheet::sheet;
use super::{Comparison, meanings, overview, words};

/// The comparison, ending in a line break; the width and colour of the page are not used.
pub fn latex(comparison: &Comparison<'_>, page: Page) -> String {
    let table = comparison.table;
    let mut parts = vec![
        "% Needs \\usepackage{booktabs}.".to_owned(),
        format!("\\subsection*{{{}}}", escaped(&table.model.title.value, &page)),
    ];
    parts.extend(table.model.note.iter().map(|note| escaped(note, &page)));
    parts.push(heading(table, &page));
    if table.interrupted {
        parts.push(format!("\\textbf{{{INTERRUPTED}}}"));
    }
    for place in 0..table.scenes.len() {
        parts.extend(scenario(comparison, place, &page));
    }
    for identity in &comparison.rows {
        parts.push(format!("\\subsubsection*{{{}}}", escaped(&identity.id, &page)));
        parts.extend(grids(&sheet(comparison, identity, Glyphs::Words), &page));
        let scenes = 0..identity.entries.len();
        let sentences = scenes.filter_map(|scene| words::sentence(comparison, identity, scene));
        parts.extend(sentences.map(|sentence| escaped(&sentence, &page)));
    }
    parts
        .extend(meanings(table).iter().map(|(word, meaning)| format!("\\emph{{{word}}}: {}", escaped(meaning, &page))));
    parts.push(CAUTION.to_owned());
    parts.join("\n\n") + "\n"
}

fn scenario(comparison: &Comparison<'_>, place: usize, page: &Page) -> Vec<String> {
    let table = comparison.table;
    let scene = &table.scenes[place];
    let mut parts = vec![format!("\\subsubsection*{{Scenario: {}}}", escaped(words::name(table, place), page))];
    match &scene.outcome {
        Err(problems) => {
            let all = scene::problems(table.model, problems);
            parts.extend(all.iter().map(|problem| format!("\\textbf{{FAILED}}: {}", escaped(problem, page))));
        }
        Ok(solved) => {
            let (is_proof, verdict) = verdict(&solved.equilibria);
            let word = if is_proof { proof(true) } else { INCOMPLETE };
            parts.push(format!("Changes: {}.", escaped(&scene::changes(table, scene, solved, plain), page)));
            parts.push(format!("\\textbf{{{word}}}: {verdict}"));
            parts.extend(overview(table, place).iter().map(|sentence| escaped(sentence, page)));
            let open = scene::all_undecided(table, solved);
            parts.extend(open.iter().map(|body| format!("\\emph{{{UNDECIDED}}}: {}.", escaped(body, page))));
        }
    }
    parts
}
