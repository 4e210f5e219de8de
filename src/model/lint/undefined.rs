//! A rate that is not defined somewhere in the search box, mostly on its border: 0/0, ln 0.
//!
//! Silent where interval arithmetic proves a formula defined on the whole box. A witness is a point where evaluation
//! leaves the domain; the smallest piece of the formula that does so there is what is shown.

use super::formulas::in_force;
use super::reading::Reading;
use super::scene::{Findings, Scene, enclosures};
use crate::diag::Diagnostic;
use crate::expr::ast::{Expr, ExprKind};
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::model::{Formula, SpeciesId};

/// Warns at the smallest piece that is not defined, once for each.
pub(super) fn find(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let mut reading = Reading::new(scene.model, scene.system);
    let mut findings = Findings::default();
    let formulas = in_force(scene.model);
    for (formula, scenarios) in &formulas {
        let node = reading.node(&formula.expr);
        let tape = Tape::new(&reading.graph, &[node]);
        let points = scene.points_for(&tape, formulas.len() * scene.system.plans.len());
        for (scenario, plan) in scene.plans().filter(|(scenario, _)| scenarios.contains(scenario)) {
            if enclosures(&tape, &plan.values, &scene.ranges).is_some() {
                continue;
            }
            let mut run = tape.start(&plan.values);
            let undefined: Vec<&Vec<f64>> = points.iter().filter(|point| !run.at(point).defined).collect();
            let Some(first) = undefined.first() else { continue };
            let is_everywhere = undefined.len() == points.len();
            if let Some(warning) = warning(scene, &mut reading, formula, &plan.values, (first, is_everywhere)) {
                findings.add(scenario, warning);
            }
        }
    }
    findings.finish(scene)
}

fn warning(
    scene: &Scene<'_>,
    reading: &mut Reading<'_>,
    formula: &Formula,
    values: &[f64],
    (point, is_everywhere): (&[f64], bool),
) -> Option<Diagnostic> {
    let piece = smallest(reading, &formula.expr, values, point)?;
    let text = formula.text.get(piece.span.start..piece.span.end).unwrap_or(&formula.text);
    let node = reading.node(piece);
    let place = if is_everywhere { "anywhere".to_owned() } else { place(scene, reading, node, point) };
    Some(
        Diagnostic::warning(formula.locate(piece.span), format!("\"{text}\" is not defined {place}"))
            .expected("a number everywhere in the search box")
            .help("raise \"lower\" if no equilibrium there matters"),
    )
}

/// The smallest piece that is not defined at a point: all of its own pieces are. Shorthands are looked at by themselves.
fn smallest<'e>(reading: &mut Reading<'_>, expr: &'e Expr, values: &[f64], point: &[f64]) -> Option<&'e Expr> {
    if is_defined(reading, expr, values, point) {
        return None;
    }
    let pieces: Vec<&Expr> = match &expr.kind {
        ExprKind::Neg(a) => vec![a],
        ExprKind::Binary(_, a, b) => vec![a, b],
        ExprKind::Call(_, arguments) => arguments.iter().collect(),
        ExprKind::Name(_) => return None,
        ExprKind::Number(_) | ExprKind::Hole => Vec::new(),
    };
    let broken = pieces.into_iter().find(|piece| !is_defined(reading, piece, values, point));
    broken.map_or(Some(expr), |piece| smallest(reading, piece, values, point))
}

fn is_defined(reading: &mut Reading<'_>, expr: &Expr, values: &[f64], point: &[f64]) -> bool {
    let node = reading.node(expr);
    Tape::new(&reading.graph, &[node]).start(values).at(point).defined
}

/// `where S = 0 and C = 0`: the point, as far as the piece depends on it.
fn place(scene: &Scene<'_>, reading: &Reading<'_>, node: NodeId, point: &[f64]) -> String {
    let facts = reading.graph.facts(node);
    let rows = point.iter().enumerate().filter(|(row, _)| facts.may_depend_on(*row));
    let states: Vec<String> = rows.map(|(row, x)| format!("{} = {x}", scene.symbol(SpeciesId(row)))).collect();
    match states.split_last() {
        Some((last, [])) => format!("where {last}"),
        Some((last, others)) => format!("where {} and {last}", others.join(", ")),
        None => "anywhere".to_owned(),
    }
}
