//! A kink of `min`, `max`, `abs`, `ramp` or `clamp` inside the search box, or a pole where a divisor passes through 0.
//!
//! Both are places where two quantities are equal. Silent where interval arithmetic proves that they never are; a
//! witness is a pair of points at which it proves that one is larger, and that the other is.

use super::formulas::in_force;
use super::reading::Reading;
use super::scene::{Findings, Scene, enclosures, start};
use crate::diag::Diagnostic;
use crate::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use crate::expr::tape::Tape;
use crate::model::Formula;
use crate::num::interval::Interval;

/// Warns at the call or the quotient, once for each.
pub(super) fn find(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let mut reading = Reading::new(scene.model, scene.system);
    let formulas = in_force(scene.model);
    let sites: Vec<_> =
        formulas.iter().flat_map(|found| sites(&found.0.expr).into_iter().map(move |site| (found, site))).collect();
    let searches = sites.len() * scene.system.plans.len();
    let mut findings = Findings::default();
    for ((formula, scenarios), site) in &sites {
        let tapes: Vec<Tape> = site.levels.iter().map(|level| tape(&mut reading, level)).collect();
        for (scenario, plan) in scene.plans().filter(|(scenario, _)| scenarios.contains(scenario)) {
            let mut levels = site.levels.iter().zip(&tapes);
            if let Some((level, _)) = levels.find(|(_, tape)| crosses(scene, tape, &plan.values, searches)) {
                findings.add(scenario, warning(formula, site, level));
            }
        }
    }
    findings.finish(scene)
}

/// A piece of a formula that is not smooth where one of some levels is met.
struct Site<'e> {
    expr: &'e Expr,
    is_pole: bool,
    levels: Vec<Level<'e>>,
}

/// Where the first is equal to the second, or to 0.
type Level<'e> = (&'e Expr, Option<&'e Expr>);

fn sites(expr: &Expr) -> Vec<Site<'_>> {
    let mut sites = Vec::new();
    expr.walk(&mut |part| {
        let (is_pole, levels) = match &part.kind {
            ExprKind::Binary(BinaryOp::Div, _, divisor) => (true, vec![(&**divisor, None)]),
            ExprKind::Call(function, arguments) => (false, kinks(*function, arguments)),
            _ => return,
        };
        sites.push(Site { expr: part, is_pole, levels });
    });
    sites
}

fn kinks(function: Builtin, arguments: &[Expr]) -> Vec<Level<'_>> {
    match (function, arguments) {
        (Builtin::Abs, [x]) => vec![(x, None)],
        (Builtin::Min | Builtin::Max, [a @ Expr { kind: ExprKind::Number(_), .. }, b]) => vec![(b, Some(a))],
        (Builtin::Min | Builtin::Max, [a, b]) => vec![(a, Some(b))],
        (Builtin::Clamp | Builtin::Ramp, [x, low, high]) => vec![(x, Some(low)), (x, Some(high))],
        _ => Vec::new(),
    }
}

/// The difference that changes sign at a level.
fn tape(reading: &mut Reading<'_>, (a, b): &Level<'_>) -> Tape {
    let a = reading.node(a);
    let b = b.map(|b| reading.node(b));
    let difference = b.map_or(a, |b| reading.graph.sub(a, b));
    Tape::new(&reading.graph, &[difference])
}

/// Whether a level is passed inside the box: the difference is proved negative at one point and positive at another.
fn crosses(scene: &Scene<'_>, tape: &Tape, values: &[f64], searches: usize) -> bool {
    let has_sign = |bounds: Vec<Interval>| bounds.iter().all(|bound| bound.lo() >= 0.0 || bound.hi() <= 0.0);
    if enclosures(tape, values, &scene.ranges).is_some_and(has_sign) {
        return false;
    }
    let mut run = start(tape, values);
    let (mut is_below, mut is_above) = (false, false);
    for point in scene.points_for(tape, searches) {
        let point: Vec<Interval> = point.iter().copied().map(Interval::point).collect();
        if run.at(&point).defined {
            is_below |= run.output(0).hi() < 0.0;
            is_above |= run.output(0).lo() > 0.0;
        }
    }
    is_below && is_above
}

fn warning(formula: &Formula, site: &Site<'_>, (a, b): &Level<'_>) -> Diagnostic {
    let span = site.expr.span;
    let text = formula.text.get(span.start..span.end).unwrap_or(&formula.text);
    let (what, help) = if site.is_pole {
        ("a pole", "rates grow without bound there; a half-saturation may be missing")
    } else {
        ("a kink", "an equilibrium on the kink has no linearisation")
    };
    let other = b.map_or_else(|| "0".to_owned(), ToString::to_string);
    let message = format!("\"{text}\" has {what} inside the search box, where {a} = {other}");
    Diagnostic::warning(formula.locate(span), message).help(help)
}
