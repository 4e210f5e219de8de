//! The report as text: its sections in order, the heading and the equations.
//!
//! Names from the file are cleansed; formulas hold only identifiers. Lines keep to 80 columns where their words allow.
//! The tables of names and values stand in [`tables`].

use unicode_width::UnicodeWidthStr;

use super::Subject;
use super::equations::{Equation, community_size, equations, left_side};
use super::formula::{Style, number};
use super::layout::wrapped;
use super::tables;
use crate::diag::cleanse::cleanse;
use crate::diag::render::render;
use crate::model::{Model, TimeKind};

/// The report, ending in a line break.
pub fn text(subject: &Subject<'_>, style: Style) -> String {
    let Subject { model, warnings, .. } = subject;
    let sections: [(&str, String); 9] = [
        ("Equations", equation_lines(model, style)),
        ("Species", tables::species(subject)),
        ("Parameters", tables::parameters(subject)),
        ("Harvest", tables::harvests(model, style)),
        ("Today", tables::today(model)),
        ("Scenarios", tables::scenarios(model, style)),
        ("Rank correlations", tables::correlations(model)),
        ("Joint draws", tables::joint_draws(model)),
        (
            "Warnings",
            warnings.iter().map(|warning| render(warning, &model.sources, false)).collect::<Vec<_>>().join("\n"),
        ),
    ];
    let mut text = heading(model);
    for (title, body) in sections.iter().filter(|(_, body)| !body.is_empty()) {
        for part in ["\n", title, "\n", body] {
            text.push_str(part);
        }
    }
    text
}

fn heading(model: &Model) -> String {
    let unit = cleanse(&model.time_unit.value);
    let time = match model.time {
        TimeKind::Continuous => format!("Time runs continuously, in {unit}."),
        TimeKind::Discrete { step } => format!("Time runs in steps of {} {unit}.", number(step)),
    };
    let note = model.note.as_deref().map(paragraph).unwrap_or_default();
    format!("{}\n{note}{time}\n", paragraph(&model.title.value).trim_end())
}

fn paragraph(text: &str) -> String {
    let clean: Vec<String> = text.split_whitespace().map(|word| cleanse(word).into_owned()).collect();
    format!("{}\n", wrapped(clean.iter().map(String::as_str), 0, 0))
}

fn equation_lines(model: &Model, style: Style) -> String {
    let mut text = String::new();
    if let Some((species, entries)) = community_size(model) {
        let times = style.times();
        let sum = format!(
            "growth_i + sum over j of matrix_ij{times}x_j for each of {species} species, {entries} entries not 0"
        );
        text.push_str(&sum_lines("  community = ", &sum));
    }
    for equation in equations(model).iter().filter(|equation| !equation.is_community_alone()) {
        text.push_str(&one_equation(model, equation, style));
    }
    for shorthand in &model.shorthand {
        text.push_str(&sum_lines(&format!("  with {} = ", shorthand.name), &style.formula(&shorthand.formula.expr)));
    }
    text
}

fn one_equation(model: &Model, equation: &Equation, style: Style) -> String {
    let Some(species) = model.species.get(equation.species.0) else { return String::new() };
    let left = format!("  {} = ", left_side(model, &species.symbol));
    let sum = style.sum(&equation.terms).join(" ");
    let mut text = sum_lines(&left, &sum);
    if let Some(inner) = equation.per_capita_text(style, &species.symbol).filter(|inner| *inner != sum) {
        let again = format!("{}= ", " ".repeat(left.width() - 2));
        text.push_str(&sum_lines(&again, &inner));
    }
    for expr in &equation.taken_before {
        let symbol = &species.symbol;
        text.push_str(&sum_lines(
            &format!("    where {symbol} is what is left of {symbol} after "),
            &style.formula(expr),
        ));
    }
    text
}

/// A left side, and a sum that breaks between its words under its own beginning.
fn sum_lines(left: &str, sum: &str) -> String {
    // A sign stays with the term that it belongs to.
    let mut words: Vec<String> = Vec::new();
    for word in sum.split(' ') {
        match words.last_mut() {
            Some(sign) if matches!(sign.as_str(), "+" | "-") => *sign = format!("{sign} {word}"),
            _ => words.push(word.to_owned()),
        }
    }
    let indent = left.width();
    format!("{left}{}\n", wrapped(words.iter().map(String::as_str), indent, indent))
}
