//! Parts of a control's range in which the model has no value at all.
//!
//! Looked for at states throughout the box: the logarithm of a negative parameter, a division by a control at 0. A rate
//! without a value at some states only is no such thing. Numerical: a part narrower than the steps may be overlooked.

use super::Control;
use super::equations::Equations;
use crate::expr::tape::Tape;
use crate::expr::tape::run::Run;

/// Values of the control that are looked at.
const VALUES: u32 = 64;
/// States that are looked at: shares of the box.
const SHARES: [f64; 6] = [0.5, 0.1, 0.9, 0.01, 1e-3, 1e-4];
/// Halvings of a step in which a part begins or ends.
const HALVINGS: usize = 50;

/// Each part with the rows that have no value in it.
pub(super) fn parts(equations: &Equations, control: &Control, symbols: &[String]) -> Vec<(f64, f64, String)> {
    let inputs: Vec<usize> = (0..=equations.species).collect();
    let tapes: Vec<Tape> = equations.rows.iter().map(|&row| Tape::over(&equations.graph, &[row], &inputs)).collect();
    let mut rows: Vec<Run<'_, f64>> = tapes.iter().map(|tape| tape.start(&equations.values)).collect();
    let mut missing =
        |value: f64| -> Option<usize> { rows.iter_mut().position(|run| !has_value(run, equations, value)) };
    let step = (control.to - control.from) / f64::from(VALUES);
    let value = |k: u32| if k == VALUES { control.to } else { control.from + f64::from(k) * step };
    let found: Vec<Option<usize>> = (0..=VALUES).map(|k| missing(value(k))).collect();
    let mut parts = Vec::new();
    let mut begun: Option<(f64, usize)> = None;
    for k in 0..=VALUES {
        let here = found[k as usize];
        let before = if k == 0 { None } else { found[k as usize - 1] };
        match (before, here) {
            (None, Some(row)) => {
                let from = if k == 0 { value(0) } else { border(&mut missing, value(k - 1), value(k)) };
                begun = Some((from, row));
            }
            (Some(_), None) => {
                if let Some((from, row)) = begun.take() {
                    let to = border(&mut missing, value(k), value(k - 1));
                    parts.push((from, to, text(&symbols[row], equations)));
                }
            }
            _ => {}
        }
    }
    if let Some((from, row)) = begun {
        parts.push((from, control.to, text(&symbols[row], equations)));
    }
    parts
}

fn has_value(run: &mut Run<'_, f64>, equations: &Equations, value: f64) -> bool {
    SHARES.iter().any(|share| {
        let side = |side: &[f64; 2]| side[0] + share * (side[1] - side[0]);
        let point: Vec<f64> = equations.sides.iter().map(side).chain([value]).collect();
        run.at(&point).defined && run.output(0).is_finite()
    })
}

/// The value at which rows begin to have none, from one with to one without.
fn border(missing: &mut dyn FnMut(f64) -> Option<usize>, with: f64, without: f64) -> f64 {
    let (mut with, mut without) = (with, without);
    for _ in 0..HALVINGS {
        let middle = with + (without - with) / 2.0;
        if missing(middle).is_some() { without = middle } else { with = middle }
    }
    without
}

fn text(symbol: &str, equations: &Equations) -> String {
    let what = if equations.step.is_some() { "the next state" } else { "the rate of change" };
    format!("{what} of {symbol} has no value")
}
