//! The search box: what the file says, and what is chosen where it says nothing.
//!
//! Without an `upper`, a species gets 1000 times the largest level at which its own growth, all others absent, vanishes,
//! over all scenarios. A box that large costs the search next to nothing, so it is drawn wide.

use crate::diag::Diagnostic;
use crate::expr::graph::{Graph, NodeId};
use crate::expr::tape::Tape;
use crate::expr::tape::run::Run;
use crate::model::{Model, TimeKind};

use super::System;

/// How far above the largest own level the box reaches.
pub const HEADROOM: f64 = 1000.0;

/// The levels looked at, in powers of ten.
const DECADES: (i32, i32) = (-12, 15);
const LEVELS_A_DECADE: i32 = 16;

/// One side pair of the search box.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bound {
    /// In the species' unit.
    pub lower: f64,
    /// In the species' unit.
    pub upper: f64,
    /// Whether `upper` was chosen here rather than given.
    pub chosen: bool,
}

impl System {
    /// The search box, one side pair a species.
    ///
    /// # Errors
    /// For each species that has no `upper` and whose own growth vanishes at no level.
    pub fn bounds(&mut self, model: &Model) -> Result<Vec<Bound>, Vec<Diagnostic>> {
        let mut bounds = Vec::new();
        let mut problems = Vec::new();
        for (i, species) in model.species.iter().enumerate() {
            let (upper, chosen) = match species.upper {
                Some(upper) => (Some(upper), false),
                None => (self.largest_own_level(model, i).map(|level| HEADROOM * level), true),
            };
            match upper.filter(|&upper| upper > species.lower && upper.is_finite()) {
                Some(upper) => bounds.push(Bound { lower: species.lower, upper, chosen }),
                None => problems.push(
                    Diagnostic::error(
                        species.at,
                        format!("\"{}\" needs an upper side of the search box", species.name),
                    )
                    .expected("upper: …")
                    .help("its own growth, with all others absent, vanishes at no level; say how far to search"),
                ),
            }
        }
        if problems.is_empty() { Ok(bounds) } else { Err(problems) }
    }

    fn largest_own_level(&mut self, model: &Model, i: usize) -> Option<f64> {
        let mut largest: Option<f64> = None;
        for plan in 0..self.plans.len() {
            let growth = own_growth(&mut self.graph, self.plans[plan].rows[i], i, &model.time);
            let tape = Tape::new(&self.graph, &[growth]);
            let mut own =
                OwnGrowth { run: tape.start(&self.plans[plan].values), state: vec![0.0; model.species.len()], i };
            if let Some(level) = own.largest_zero() {
                largest = Some(largest.map_or(level, |known| known.max(level)));
            }
        }
        largest
    }
}

/// Growth per head where the row can be divided, so that the zero at absence does not count; else the row itself.
fn own_growth(graph: &mut Graph, row: NodeId, i: usize, time: &TimeKind) -> NodeId {
    let change = match time {
        TimeKind::Continuous => row,
        TimeKind::Discrete { .. } => {
            let x = graph.state(i);
            graph.sub(row, x)
        }
    };
    graph.divide(change, i).quotient.unwrap_or(change)
}

struct OwnGrowth<'t> {
    run: Run<'t, f64>,
    state: Vec<f64>,
    i: usize,
}

impl OwnGrowth<'_> {
    fn at(&mut self, level: f64) -> Option<f64> {
        self.state[self.i] = level;
        let domain = self.run.at(&self.state);
        let value = *self.run.output(0);
        (domain.defined && value.is_finite()).then_some(value)
    }

    /// The largest level at which growth changes sign, coming down from above.
    fn largest_zero(&mut self) -> Option<f64> {
        let level = |k: i32| 10f64.powf(f64::from(k) / f64::from(LEVELS_A_DECADE));
        let mut above: Option<(f64, f64)> = None;
        for k in (DECADES.0 * LEVELS_A_DECADE..=DECADES.1 * LEVELS_A_DECADE).rev() {
            let here = self.at(level(k)).map(|value| (level(k), value));
            if let (Some((x, value)), Some((x_above, value_above))) = (here, above) {
                if value == 0.0 && value_above != 0.0 {
                    return Some(x);
                }
                if value.signum() != value_above.signum() && value != 0.0 && value_above != 0.0 {
                    return Some(self.bisect(x, value, x_above));
                }
            }
            above = here;
        }
        None
    }

    fn bisect(&mut self, mut low: f64, value_low: f64, mut high: f64) -> f64 {
        // 60 halvings bring any bracket of one step of the scan down to rounding.
        for _ in 0..60 {
            let middle = low + (high - low) / 2.0;
            match self.at(middle) {
                Some(value) if value.signum() == value_low.signum() => low = middle,
                _ => high = middle,
            }
        }
        low + (high - low) / 2.0
    }
}
