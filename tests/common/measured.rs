//! What is measured at a state that is given, with nothing proved of it.

use restpoint::analysis::equilibria::{Derivative, Equilibrium};
use restpoint::analysis::linearise::{Linearisation, linearise};
use restpoint::analysis::measures::{Measures, measure};
use restpoint::analysis::subject::Subject;
use restpoint::num::interval::Interval;

use super::text::Read;

/// The equilibrium at `x`, a point.
pub fn equilibrium(x: &[f64]) -> Equilibrium {
    let enclosure = x.iter().map(|&x| Interval::point(x)).collect();
    Equilibrium { state: x.to_vec(), enclosure, proven: false, derivative: Derivative::Exists }
}

fn subject<'r>(read: &'r Read, scenario: usize, x: &[f64]) -> Subject<'r> {
    let sides = vec![[0.0, f64::MAX]; x.len()];
    Subject::new(&read.model, &read.system.graph, &read.system.plans[scenario], sides)
}

/// The linear part of a scenario at `x`.
pub fn linearisation(read: &Read, scenario: usize, x: &[f64]) -> Linearisation {
    linearise(&mut subject(read, scenario, x), &equilibrium(x)).unwrap()
}

/// All that is measured of a scenario at `x`.
pub fn measured(read: &Read, scenario: usize, x: &[f64]) -> Measures {
    let linear = linearisation(read, scenario, x);
    measure(&mut subject(read, scenario, x), &equilibrium(x), Some(&linear), &|| false)
}
