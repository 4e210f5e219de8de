//! An equilibrium with its linear part, made from the rows' gradient and the eigenvalues alone: enough for what is measured,
//! with nothing proved.

use restpoint::analysis::equilibria::{Derivative, Equilibrium};
use restpoint::analysis::linearise::{Dimensions, Kind, Linearisation};
use restpoint::analysis::measures::{Measures, measure};
use restpoint::analysis::subject::Subject;
use restpoint::model::TimeKind;
use restpoint::num::eigen::spectrum;
use restpoint::num::interval::Interval;

use super::text::Read;

/// The equilibrium at `x`, a point.
pub fn equilibrium(x: &[f64]) -> Equilibrium {
    let enclosure = x.iter().map(|&x| Interval::point(x)).collect();
    Equilibrium { state: x.to_vec(), enclosure, proven: false, derivative: Derivative::Exists }
}

/// The linear part of a scenario there. What is within 1e-12 of critical, relative to the largest eigenvalue, is critical.
pub fn linearisation(read: &Read, scenario: usize, x: &[f64]) -> Linearisation {
    let plan = &read.system.plans[scenario];
    let tape = plan.tape(&read.system.graph);
    let mut run = tape.start_gradient(&plan.values);
    run.at(x);
    let n = x.len();
    let row = |i: usize| run.gradient(i).map_or_else(|| vec![0.0; n], <[f64]>::to_vec);
    let jacobian: Vec<f64> = (0..n).flat_map(row).collect();
    let found = spectrum(&jacobian, n).unwrap();
    let discrete = matches!(read.model.time, TimeKind::Discrete { .. });
    let spectrum = if discrete { found.by_modulus() } else { found };
    let largest = spectrum.values.iter().fold(0.0f64, |largest, value| largest.max(value.norm()));
    let mut dimensions = Dimensions::default();
    for value in &spectrum.values {
        let beyond = if discrete { value.norm() - 1.0 } else { value.re };
        let count = match beyond {
            _ if beyond.abs() <= 1e-12 * largest => &mut dimensions.centre,
            _ if beyond < 0.0 => &mut dimensions.stable,
            _ => &mut dimensions.unstable,
        };
        *count += 1;
    }
    let stable = if dimensions.unstable > 0 { Some(false) } else { (dimensions.centre == 0).then_some(true) };
    Linearisation {
        jacobian,
        enclosure: Vec::new(),
        spectrum,
        kind: Kind::Undecided,
        kind_proven: false,
        stable,
        stable_proven: false,
        dimensions,
        alternating: false,
        nonlinear: None,
    }
}

/// All that is measured of a scenario at `x`.
pub fn measured(read: &Read, scenario: usize, x: &[f64]) -> Measures {
    let plan = &read.system.plans[scenario];
    let sides = vec![[0.0, f64::MAX]; x.len()];
    let mut subject = Subject::new(&read.model, &read.system.graph, plan, sides);
    measure(&mut subject, &equilibrium(x), Some(&linearisation(read, scenario, x)), &|| false)
}
