//! Unknown units: products of powers of units and unknowns, and the equations between them.
//!
//! Units form an abelian group whose equations are linear in the powers, so substitution solves them: each equation
//! either names one unknown by the others, holds, or fails. Exact up to the rounding of powers, see
//! [`SAME`](super::unit::SAME).

use super::unit::{Agreement, Unit, add_power, compare};
use crate::diag::Location;

/// An unknown unit.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Unknown(usize);

/// A unit times powers of unknown units.
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Term {
    unit: Unit,
    unknowns: Vec<(Unknown, f64)>,
}

impl From<Unit> for Term {
    fn from(unit: Unit) -> Self {
        Self { unit, unknowns: Vec::new() }
    }
}

impl Term {
    /// The unit of plain numbers.
    pub(super) fn one() -> Self {
        Self::default()
    }

    /// This times `other` to the power `power`.
    #[must_use]
    pub(super) fn times(mut self, other: &Term, power: f64) -> Self {
        self.unit.multiply(&other.unit, power);
        for (unknown, exponent) in &other.unknowns {
            add_power(&mut self.unknowns, unknown, exponent * power);
        }
        self
    }

    /// This to the power `power`.
    #[must_use]
    pub(super) fn to_power(&self, power: f64) -> Self {
        Term::one().times(self, power)
    }
}

/// The unknowns, and what is known of them.
#[derive(Debug, Default)]
pub(super) struct Solver {
    /// What each unknown is, by earlier unknowns alone, and the place that told.
    solutions: Vec<Option<(Term, Location)>>,
    /// What each unknown is the unit of.
    labels: Vec<String>,
}

/// The outcome of an equation that does not hold.
#[derive(Debug, PartialEq)]
pub(super) struct Mismatch {
    /// The left side, what is unknown as [`Solver::shown`] names it.
    pub(super) got: Unit,
    /// The right side.
    pub(super) want: Unit,
    /// How they stand to one another; never [`Agreement::Same`].
    pub(super) agreement: Agreement,
}

impl Solver {
    /// A new unknown, the unit of what `label` says.
    pub(super) fn unknown(&mut self, label: &str) -> Term {
        self.solutions.push(None);
        self.labels.push(label.to_owned());
        Term { unit: Unit::one(), unknowns: vec![(Unknown(self.solutions.len() - 1), 1.0)] }
    }

    /// Makes the two equal, or says why they cannot be; `at` is remembered as the place that told.
    ///
    /// # Errors
    ///
    /// [`Mismatch`] when no unknown is left to choose.
    pub(super) fn equate(&mut self, got: &Term, want: &Term, at: Location) -> Result<(), Mismatch> {
        let (got, want) = (self.resolve(got), self.resolve(want));
        let ratio = got.clone().times(&want, -1.0);
        // The latest unknown, so that solutions hold only earlier ones and never go in circles.
        let Some(&(unknown, exponent)) = ratio.unknowns.iter().max_by_key(|(unknown, _)| unknown.0) else {
            return match compare(&got.unit, &want.unit) {
                Agreement::Same => Ok(()),
                agreement => Err(Mismatch { got: self.shown(got), want: self.shown(want), agreement }),
            };
        };
        let mut rest = ratio;
        rest.unknowns.retain(|(other, _)| *other != unknown);
        self.solutions[unknown.0] = Some((rest.to_power(-1.0 / exponent), at));
        Ok(())
    }

    /// A unit for showing: what is unknown stands as the unit of its label, such as `[S]`.
    fn shown(&self, term: Term) -> Unit {
        let mut unit = term.unit;
        for (unknown, power) in term.unknowns {
            let label = self.labels.get(unknown.0).map_or("?", String::as_str);
            unit.multiply(&Unit::named(&format!("[{label}]")), power);
        }
        unit
    }

    /// The unit that `term` stands for, if its unknowns are solved.
    pub(super) fn unit_of(&self, term: &Term) -> Option<Unit> {
        let resolved = self.resolve(term);
        resolved.unknowns.is_empty().then_some(resolved.unit)
    }

    /// The place that told what the unknown of `term` is, where `term` is one unknown.
    pub(super) fn told_at(&self, term: &Term) -> Option<Location> {
        let [(unknown, _)] = term.unknowns.as_slice() else { return None };
        self.solutions.get(unknown.0)?.as_ref().map(|(_, at)| *at)
    }

    /// Puts in what is known, latest unknown first: a solution holds only earlier ones, so each is met once.
    fn resolve(&self, term: &Term) -> Term {
        let mut resolved = term.clone();
        for (index, solution) in self.solutions.iter().enumerate().rev() {
            let Some((solution, _)) = solution else { continue };
            let Some(place) = resolved.unknowns.iter().position(|(unknown, _)| unknown.0 == index) else { continue };
            let (_, power) = resolved.unknowns.swap_remove(place);
            resolved = resolved.times(solution, power);
        }
        resolved
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::model::units::read;

    fn term(text: &str) -> Term {
        read(text).unwrap().into()
    }

    fn solved(solver: &Solver, unknown: &Term) -> Option<String> {
        solver.unit_of(unknown).map(|unit| unit.to_string())
    }

    #[test]
    fn substitution_solves_what_is_determined() {
        let mut solver = Solver::default();
        let (a, h) = (solver.unknown("a"), solver.unknown("h"));
        // a h kt = 1 and a kt = 1/yr: the two parameters of a saturating intake.
        solver.equate(&a.clone().times(&h, 1.0).times(&term("kt"), 1.0), &Term::one(), Location::default()).unwrap();
        assert_eq!(solved(&solver, &h), None);
        solver.equate(&a.clone().times(&term("kt"), 1.0), &term("1/yr"), Location::default()).unwrap();
        assert_eq!(solved(&solver, &a).as_deref(), Some("1/(kt*yr)"));
        assert_eq!(solved(&solver, &h).as_deref(), Some("yr"));
    }

    #[test]
    fn roots_are_taken() {
        let mut solver = Solver::default();
        let a = solver.unknown("a");
        solver.equate(&a.to_power(2.0), &term("kg/yr^3"), Location::default()).unwrap();
        assert_eq!(solved(&solver, &a).as_deref(), Some("kg^0.5/yr^1.5"));
    }

    #[test]
    fn a_second_opinion_is_a_mismatch() {
        let mut solver = Solver::default();
        let a = solver.unknown("a");
        solver.equate(&a, &term("kt"), Location::default()).unwrap();
        let mismatch = solver.equate(&a, &term("t"), Location::default()).unwrap_err();
        assert_eq!((mismatch.got.to_string(), mismatch.want.to_string()), ("kt".into(), "t".into()));
        assert!(solver.equate(&a, &term("yr"), Location::default()).is_err());
    }
}
