//! Newton's method on a defining system: rows on a tape, and linear rows beside it.
//!
//! Unknowns are scaled, so that a correction is a share of each one's size whatever its unit, and rows are equilibrated
//! before elimination. Linear rows hold what is not worth a tape: normalisations, a control that stays, a step's length.

use crate::analysis::passage::solve;
use crate::expr::tape::Tape;
use crate::expr::tape::gradient::GradientRun;

/// Steps before a system is given up; a regular root takes four to six.
const STEPS: usize = 14;

/// A correction this small is rounding: a few units of the last place.
const ROUNDING: f64 = 4.0 * f64::EPSILON;

/// Where corrections stop shrinking above this size, there is no regular root.
const GOOD: f64 = 1e-9;

/// A correction larger than this many scales leads away.
const FAR: f64 = 1e3;

/// Corrections that shrink by less than this have reached rounding, or a root that is not regular.
const SHRINKS: f64 = 0.25;

/// Σ coefficient · unknown/scale = value.
#[derive(Clone, Debug)]
pub(in crate::analysis::response) struct Linear {
    /// One a scaled unknown.
    pub(in crate::analysis::response) row: Vec<f64>,
    /// The right side.
    pub(in crate::analysis::response) value: f64,
}

/// A root.
#[derive(Clone, Debug)]
pub(in crate::analysis::response) struct Root {
    /// The unknowns.
    pub(in crate::analysis::response) at: Vec<f64>,
    /// The last correction of each, in its own unit.
    pub(in crate::analysis::response) last: Vec<f64>,
}

/// A system ready to be solved for one set of parameters.
pub(in crate::analysis::response) struct Newton<'t> {
    run: GradientRun<'t, f64>,
    rows: usize,
    matrix: Vec<f64>,
    right: Vec<f64>,
}

impl<'t> Newton<'t> {
    pub(in crate::analysis::response) fn new(tape: &'t Tape, values: &[f64]) -> Self {
        Self { run: tape.start_gradient(values), rows: tape.outputs(), matrix: Vec::new(), right: Vec::new() }
    }

    /// The rows' values and scaled slopes at a point, and the linear rows'; whether all is defined and finite.
    fn evaluate(&mut self, at: &[f64], scale: &[f64], linear: &[Linear]) -> bool {
        let is_defined = self.run.at(at).defined;
        let n = at.len();
        self.matrix.clear();
        self.right.clear();
        for i in 0..self.rows {
            self.right.push(-*self.run.output(i));
            match self.run.gradient(i) {
                Some(slopes) => self.matrix.extend(slopes.iter().zip(scale).map(|(slope, scale)| slope * scale)),
                None => self.matrix.extend(std::iter::repeat_n(0.0, n)),
            }
        }
        for Linear { row, value } in linear {
            let sum: f64 = row.iter().zip(at).zip(scale).map(|((l, x), scale)| l * (x / scale)).sum();
            self.right.push(value - sum);
            self.matrix.extend_from_slice(row);
        }
        is_defined && self.right.len() == n && self.right.iter().chain(&self.matrix).all(|x| x.is_finite())
    }

    /// The root that Newton's method comes to; `None` where it does not come to one quickly, or it is not regular.
    ///
    /// # Panics
    /// If there are not as many unknowns as the tape takes, or as scales.
    pub(in crate::analysis::response) fn root(
        &mut self,
        start: &[f64],
        scale: &[f64],
        linear: &[Linear],
    ) -> Option<Root> {
        assert_eq!(start.len(), scale.len(), "unknowns and scales");
        let mut at = start.to_vec();
        let mut last = f64::INFINITY;
        for _ in 0..STEPS {
            if !self.evaluate(&at, scale, linear) {
                return None;
            }
            solve(&mut self.matrix, &mut self.right)?;
            let size = self.right.iter().fold(0.0f64, |most, x| most.max(x.abs()));
            if !size.is_finite() || size > FAR {
                return None;
            }
            let corrections: Vec<f64> = self.right.iter().zip(scale).map(|(d, scale)| d * scale).collect();
            at.iter_mut().zip(&corrections).for_each(|(x, d)| *x += d);
            if size <= ROUNDING || (size <= GOOD && size > SHRINKS * last) {
                return Some(Root { at, last: corrections });
            }
            last = size;
        }
        None
    }

    /// The unit tangent in scaled unknowns at a root of a system with one unknown more than rows, at the side of `along`;
    /// and the sign of the determinant with `along` as the last row. `None` where there is none.
    pub(in crate::analysis::response) fn tangent(
        &mut self,
        at: &[f64],
        scale: &[f64],
        linear: &[Linear],
        along: &[f64],
    ) -> Option<(Vec<f64>, f64)> {
        let border = Linear { row: along.to_vec(), value: 0.0 };
        let rows: Vec<Linear> = linear.iter().cloned().chain([border]).collect();
        if !self.evaluate(at, scale, &rows) {
            return None;
        }
        self.right.fill(0.0);
        *self.right.last_mut()? = 1.0;
        let sign = solve(&mut self.matrix, &mut self.right)?;
        let length = self.right.iter().map(|x| x * x).sum::<f64>().sqrt();
        let tangent: Vec<f64> = self.right.iter().map(|x| x / length).collect();
        tangent.iter().all(|x| x.is_finite()).then_some((tangent, sign))
    }
}
