//! Newton's method from anywhere, with no proof: a search for what a list of equilibria may lack.

use restpoint::expr::tape::Tape;
use restpoint::expr::tape::gradient::GradientRun;
use restpoint::model::TimeKind;

use super::text::Read;

/// The equations of one scenario in f64.
pub struct Newton<'t> {
    run: GradientRun<'t, f64>,
    discrete: bool,
}

impl<'t> Newton<'t> {
    /// `tape` is that of the scenario's rows.
    pub fn new(read: &Read, scenario: usize, tape: &'t Tape) -> Self {
        let run = tape.start_gradient(&read.system.plans[scenario].values);
        Self { run, discrete: matches!(read.model.time, TimeKind::Discrete { .. }) }
    }

    /// Where it settles, starting from `x`; nowhere where it meets a point at which the rows are not defined, or finds no
    /// end in 60 steps.
    pub fn settles(&mut self, mut x: Vec<f64>) -> Option<Vec<f64>> {
        let n = x.len();
        for _ in 0..60 {
            if !self.run.at(&x).defined {
                return None;
            }
            let own = f64::from(self.discrete);
            let mut slopes: Vec<Vec<f64>> =
                (0..n).map(|i| self.run.gradient(i).map_or_else(|| vec![0.0; n], <[_]>::to_vec)).collect();
            (0..n).for_each(|i| slopes[i][i] -= own);
            let rows: Vec<f64> = (0..n).map(|i| self.run.output(i) - own * x[i]).collect();
            let step_of = |row: &Vec<f64>| row.iter().zip(&rows).map(|(c, f)| c * f).sum();
            let step: Vec<f64> = inverse(slopes)?.iter().map(step_of).collect();
            let far = x.iter().zip(&step).any(|(x, step)| step.abs() > 1e-11 * x.abs().max(1e-11));
            x.iter_mut().zip(&step).for_each(|(x, step)| *x -= step);
            if !x.iter().all(|x| x.is_finite()) {
                return None;
            }
            if !far {
                return Some(x);
            }
        }
        None
    }
}

/// By elimination with row exchanges; `None` where a pivot is 0 or not finite.
pub fn inverse(mut a: Vec<Vec<f64>>) -> Option<Vec<Vec<f64>>> {
    let n = a.len();
    for (i, row) in a.iter_mut().enumerate() {
        row.extend((0..n).map(|j| f64::from(i == j)));
    }
    for k in 0..n {
        let pivot = (k..n).max_by(|&i, &j| a[i][k].abs().total_cmp(&a[j][k].abs()))?;
        a.swap(k, pivot);
        let by = a[k].clone();
        if by[k] == 0.0 || !by[k].is_finite() {
            return None;
        }
        for (i, row) in a.iter_mut().enumerate() {
            let factor = if i == k { (by[k] - 1.0) / by[k] } else { row[k] / by[k] };
            row.iter_mut().zip(&by).for_each(|(entry, pivot)| *entry -= factor * pivot);
        }
    }
    Some(a.into_iter().map(|row| row[n..].to_vec()).collect())
}
