//! What is measured at a state that is given, with nothing proved of it.

use restpoint::analysis::equilibria::{Derivative, Equilibrium};
use restpoint::analysis::linearise::linearise;
use restpoint::analysis::measures::{Measures, measure};
use restpoint::analysis::subject::Subject;
use restpoint::num::interval::Interval;

use super::text::Read;

/// The equilibrium at `x`, a point.
pub fn equilibrium(x: &[f64]) -> Equilibrium {
    let enclosure = x.iter().map(|&x| Interval::point(x)).collect();
    Equilibrium { state: x.to_vec(), enclosure, proven: false, derivative: Derivative::Exists }
}

/// All that is measured of a scenario at `x`.
pub fn measured(read: &Read, scenario: usize, x: &[f64]) -> Measures {
    let plan = &read.system.plans[scenario];
    let sides = vec![[0.0, f64::MAX]; x.len()];
    let mut subject = Subject::new(&read.model, &read.system.graph, plan, sides);
    let equilibrium = equilibrium(x);
    let linear = linearise(&mut subject, &equilibrium).unwrap();
    measure(&mut subject, &equilibrium, Some(&linear), &|| false)
}
