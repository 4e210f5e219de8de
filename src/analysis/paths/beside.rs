//! What a path released beside an unstable state goes to.

use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::analysis::subject::Subject;
use crate::model::{Aim, Role};

use super::settle::{Ending, Known};
use super::{Destination, Paths};

/// How far beside: this share of the abundance that is moved most.
const RELEASE: f64 = 1e-3;

/// Whether an equilibrium is an unstable state of coexistence: every species that is to be kept is there.
pub fn is_unstable_coexistence(subject: &Subject<'_>, equilibrium: &Equilibrium, linear: &Linearisation) -> bool {
    let kept = |i: &usize| {
        let species = &subject.model.species[*i];
        species.role == Role::Population && species.aim == Aim::Keep
    };
    linear.stable == Some(false) && (0..subject.species()).filter(kept).all(|i| equilibrium.has(i))
}

/// As [`Paths::settles`], for one equilibrium of a scenario.
pub fn settles(
    subject: &mut Subject<'_>,
    list: &[Equilibrium],
    linear: &[Option<&Linearisation>],
    which: usize,
    stop: &dyn Fn() -> bool,
) -> Destination {
    Paths::new(subject, list, linear, stop).settles(subject, which)
}

impl Paths<'_> {
    /// What paths go to that start beside the equilibrium `which` of the list, along its leading eigenvector.
    ///
    /// They start off by a thousandth of the abundance that the eigenvector moves most, to either side; for a complex pair,
    /// around which paths wind, one side serves for both. Where the two sides differ, the one counts that keeps fewer
    /// species: first a loss, then an equilibrium with fewer, then a path that does not settle, then a cycle. Numerical; the
    /// number of steps is bounded, and `stop` is asked now and then.
    ///
    /// # Panics
    /// If the list has no such equilibrium.
    pub fn settles(&mut self, subject: &mut Subject<'_>, which: usize) -> Destination {
        let Known { list, linear, .. } = self.grounds.known;
        let state = &list[which].state;
        let (direction, winds) = leading(state, linear.get(which).copied().flatten());
        let mut follow = |sign: f64| -> Ending {
            let start: Vec<f64> = state.iter().zip(&direction).map(|(x, v)| (x + sign * v).max(0.0)).collect();
            self.go(subject, &start)
        };
        let first = follow(1.0).destination;
        if winds {
            return first;
        }
        let second = follow(-1.0).destination;
        if rank(&second, list) < rank(&first, list) { second } else { first }
    }
}

/// How much is lost: the lower, the more.
fn rank(destination: &Destination, list: &[Equilibrium]) -> (u8, usize) {
    let species = |e: &Equilibrium| (0..e.state.len()).filter(|&i| e.has(i)).count();
    match destination {
        Destination::Loss(lost) => (0, usize::MAX - lost.len()),
        Destination::Equilibrium(index) if species(&list[*index]) < list[*index].state.len() => {
            (1, species(&list[*index]))
        }
        Destination::NotSettled => (2, 0),
        Destination::Cycle(_) => (3, 0),
        Destination::Equilibrium(_) => (4, 0),
    }
}

/// The displacement along the leading eigenvector, and whether that is one of a pair. Without vectors, one in which all
/// abundances differ: whatever grows has a part in it.
fn leading(state: &[f64], linear: Option<&Linearisation>) -> (Vec<f64>, bool) {
    let n = state.len();
    let spectrum = linear.map(|linear| &linear.spectrum);
    let winds = spectrum.and_then(|s| s.values.first()).is_some_and(|value| value.im != 0.0);
    let some = |i: usize| if state[i] > 0.0 { state[i] * (1.0 + i as f64) / n as f64 } else { 0.0 };
    let vector: Vec<f64> = match spectrum.and_then(|s| s.vectors.as_ref()) {
        Some(vectors) => (0..n).map(|i| vectors.right[i * n].re).collect(),
        None => (0..n).map(some).collect(),
    };
    let moved = |i: usize| if state[i] > 0.0 { vector[i].abs() / state[i] } else { 0.0 };
    let most = (0..n).map(moved).fold(0.0, f64::max);
    let scale = if most > 0.0 { RELEASE / most } else { 0.0 };
    // An absent species stays absent: this is about those that are there.
    let shift = |i: usize| if state[i] > 0.0 { scale * vector[i] } else { 0.0 };
    ((0..n).map(shift).collect(), winds)
}
