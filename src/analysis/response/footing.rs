//! An equilibrium of one face at controls that move along a line: solved for, with tangents, and with what harvests give.
//!
//! A *spot* is the abundances of those who move and, last, how far along the line it is. Newton's method has the face's
//! rows and one more condition, so that the same few lines serve steps along a curve, a fixed control and the zero of a
//! number that defines something (Keller 1977; Kuznetsov 2004, ch. 10). Says nothing of stability: that is `surface`.
//! Start at [`Footing::new`], then [`Standing`].

use super::equations::{Equations, Face};
use crate::analysis::passage::{dot, restricted, solve};
use crate::expr::graph::divide::AtZero;
use crate::expr::tape::Tape;
use crate::expr::tape::gradient::GradientRun;

/// Newton steps before a spot is given up.
const CORRECTIONS: usize = 12;
/// A correction this small, in scaled coordinates, is the last.
const CORRECTED: f64 = 1e-13;
/// Or this small, where rounding keeps further ones from growing smaller.
const NEARLY: f64 = 1e-9;
/// Corrections must shrink to this share of the one before.
const SHRINKS: f64 = 0.7;

/// A straight line in the space of controls: base + t direction.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Line {
    /// Where t is 0, in the controls' units.
    pub(super) base: Vec<f64>,
    /// By how much each control moves as t grows by 1.
    pub(super) direction: Vec<f64>,
}

impl Line {
    /// One control that is itself t.
    pub(super) fn of_one() -> Self {
        Self { base: vec![0.0], direction: vec![1.0] }
    }

    /// The controls at t.
    pub(super) fn at(&self, t: f64) -> Vec<f64> {
        self.base.iter().zip(&self.direction).map(|(base, part)| base + t * part).collect()
    }

    /// Abundances of a spot with the controls after them: the inputs of a face's rows.
    pub(super) fn inputs(&self, spot: &[f64]) -> Vec<f64> {
        let m = spot.len() - 1;
        spot[..m].iter().copied().chain(self.at(spot[m])).collect()
    }

    /// A gradient over abundances and controls as one over abundances and t.
    pub(super) fn along(&self, gradient: &[f64]) -> Vec<f64> {
        let m = gradient.len() - self.direction.len();
        let last = dot(&gradient[m..], &self.direction);
        gradient[..m].iter().copied().chain([last]).collect()
    }
}

/// One face's rows and takings, compiled over those who move and then every control.
#[derive(Clone, Debug)]
pub(super) struct Footing {
    /// Who moves, and their rows.
    pub(super) face: Face,
    rows: Tape,
    given: Tape,
    /// For each taking its output; `None` where it has no value on the face.
    places: Vec<Option<usize>>,
    species: usize,
    values: Vec<f64>,
}

impl Footing {
    /// The face of those present; `None` where a rate has no value with the others absent.
    pub(super) fn new(equations: &mut Equations, present: &[bool]) -> Option<Self> {
        let face = equations.face(present)?;
        let mut moves = vec![false; equations.species];
        face.moving.iter().for_each(|&i| moves[i] = true);
        let given = equations.given.clone();
        let known = restricted(&mut equations.graph, &given, &moves);
        let mut nodes = Vec::new();
        let mut place = |known: &AtZero| match known {
            AtZero::Is(node) => {
                nodes.push(*node);
                Some(nodes.len() - 1)
            }
            _ => None,
        };
        let places = known.iter().map(&mut place).collect();
        let given = Tape::over(&equations.graph, &nodes, &equations.inputs(&face));
        let rows = equations.tape(&face);
        Some(Self { rows, given, places, species: equations.species, values: equations.values.clone(), face })
    }

    /// How many move.
    pub(super) fn moving(&self) -> usize {
        self.face.moving.len()
    }

    /// A spot from the state of all species and t.
    pub(super) fn spot(&self, state: &[f64], t: f64) -> Vec<f64> {
        self.face.moving.iter().map(|&i| state[i]).chain([t]).collect()
    }

    /// The state of all species at a spot.
    pub(super) fn state(&self, spot: &[f64]) -> Vec<f64> {
        let mut state = vec![0.0; self.species];
        self.face.moving.iter().zip(spot).for_each(|(&i, &x)| state[i] = x);
        state
    }
}

/// A number and its gradient over a spot's coordinates.
pub(super) type Sloped = (f64, Vec<f64>);

/// A footing ready to be evaluated, on a line.
pub(super) struct Standing<'f> {
    /// What it stands on.
    pub(super) footing: &'f Footing,
    /// How controls move.
    pub(super) line: Line,
    /// One a coordinate of a spot: in these units corrections and tangents are measured.
    pub(super) scale: Vec<f64>,
    rows: GradientRun<'f, f64>,
    given: GradientRun<'f, f64>,
}

impl<'f> Standing<'f> {
    /// On a line, with these units of abundance (of those who move) and of t.
    pub(super) fn new(footing: &'f Footing, line: Line, scale: Vec<f64>) -> Self {
        let rows = footing.rows.start_gradient(&footing.values);
        let given = footing.given.start_gradient(&footing.values);
        Self { footing, line, scale, rows, given }
    }

    /// The rows and their slopes, row by row over a spot's coordinates; `None` where they are not defined and finite.
    pub(super) fn rows(&mut self, spot: &[f64]) -> Option<(Vec<f64>, Vec<f64>)> {
        let domain = self.rows.at(&self.line.inputs(spot));
        let m = spot.len() - 1;
        let values: Vec<f64> = (0..m).map(|i| *self.rows.output(i)).collect();
        let mut slopes = Vec::with_capacity(m * (m + 1));
        for i in 0..m {
            match self.rows.gradient(i) {
                Some(gradient) => slopes.extend(self.line.along(gradient)),
                None => slopes.extend(std::iter::repeat_n(0.0, m + 1)),
            }
        }
        let is_finite = values.iter().chain(&slopes).all(|x| x.is_finite());
        (domain.defined && is_finite).then_some((values, slopes))
    }

    /// The rows' slopes with respect to each control, row by row; after [`Standing::rows`] at the spot.
    pub(super) fn slopes_of_controls(&self) -> Vec<f64> {
        let (m, k) = (self.footing.moving(), self.line.direction.len());
        let row = |i: usize| self.rows.gradient(i).map_or_else(|| vec![0.0; k], |gradient| gradient[m..].to_vec());
        (0..m).flat_map(row).collect()
    }

    /// The sum of some takings, with its slopes over abundances and controls.
    pub(super) fn taken_by_control(&mut self, spot: &[f64], takings: &[usize]) -> Option<Sloped> {
        let inputs = self.line.inputs(spot);
        // Where a cost or a price has no value, another harvest's catch may have one.
        self.given.at(&inputs);
        let mut sum = (0.0, vec![0.0; inputs.len()]);
        for &taking in takings {
            let place = self.footing.places[taking]?;
            sum.0 += self.given.output(place);
            if let Some(gradient) = self.given.gradient(place) {
                sum.1.iter_mut().zip(gradient).for_each(|(sum, slope)| *sum += slope);
            }
        }
        (sum.0.is_finite() && sum.1.iter().all(|x| x.is_finite())).then_some(sum)
    }

    /// The sum of some takings, with its slopes over the spot's coordinates.
    pub(super) fn taken(&mut self, spot: &[f64], takings: &[usize]) -> Option<Sloped> {
        let (value, gradient) = self.taken_by_control(spot, takings)?;
        Some((value, self.line.along(&gradient)))
    }

    /// The sum of some takings, where its slopes are of no account.
    pub(super) fn amount(&mut self, spot: &[f64], takings: &[usize]) -> Option<f64> {
        self.given.at(&self.line.inputs(spot));
        let mut sum = 0.0;
        for &taking in takings {
            sum += self.given.output(self.footing.places[taking]?);
        }
        sum.is_finite().then_some(sum)
    }

    /// Moves a spot to where the rows are 0 and `condition`, a number with its slopes, is 0 too. The last correction of
    /// each coordinate; `None` where Newton's method does not converge, or something is not defined.
    pub(super) fn correct(
        &mut self,
        spot: &mut [f64],
        condition: &mut dyn FnMut(&mut Self, &[f64]) -> Option<Sloped>,
    ) -> Option<Corrected> {
        let n = spot.len();
        let mut done = Corrected { first: 0.0, last: vec![0.0; n] };
        let mut before = f64::INFINITY;
        for step in 0..CORRECTIONS {
            let (values, mut matrix) = self.rows(spot)?;
            let (value, gradient) = condition(self, spot)?;
            matrix.extend(gradient);
            for row in matrix.chunks_exact_mut(n) {
                row.iter_mut().zip(&self.scale).for_each(|(slope, scale)| *slope *= scale);
            }
            let mut right: Vec<f64> = values.iter().map(|value| -value).chain([-value]).collect();
            solve(&mut matrix, &mut right)?;
            let size = right.iter().fold(0.0f64, |most, x| most.max(x.abs()));
            if !size.is_finite() {
                return None;
            }
            if step > 1 && size > SHRINKS * before {
                return (before <= NEARLY).then_some(done);
            }
            for (x, (d, scale)) in spot.iter_mut().zip(right.iter().zip(&self.scale)) {
                *x += d * scale;
            }
            done.last.iter_mut().zip(right.iter().zip(&self.scale)).for_each(|(last, (d, scale))| *last = d * scale);
            if step == 0 {
                done.first = size;
            }
            if size <= CORRECTED {
                return Some(done);
            }
            before = size;
        }
        (before <= NEARLY).then_some(done)
    }

    /// As [`Standing::correct`], at right angles to a border in scaled coordinates.
    pub(super) fn correct_across(&mut self, spot: &mut [f64], border: &[f64]) -> Option<Corrected> {
        let normal: Vec<f64> = border.iter().zip(&self.scale).map(|(part, scale)| part / scale).collect();
        self.correct(spot, &mut |_, _| Some((0.0, normal.clone())))
    }

    /// As [`Standing::correct`], with t as it is.
    pub(super) fn correct_at(&mut self, spot: &mut [f64]) -> Option<Corrected> {
        let mut upright = vec![0.0; spot.len()];
        upright[spot.len() - 1] = 1.0;
        self.correct_across(spot, &upright)
    }

    /// The unit tangent in scaled coordinates, on the side of `before`.
    pub(super) fn tangent(&mut self, spot: &[f64], before: &[f64]) -> Option<Vec<f64>> {
        let n = spot.len();
        let (_, mut matrix) = self.rows(spot)?;
        for row in matrix.chunks_exact_mut(n) {
            row.iter_mut().zip(&self.scale).for_each(|(slope, scale)| *slope *= scale);
        }
        matrix.extend_from_slice(before);
        let mut tangent = vec![0.0; n];
        tangent[n - 1] = 1.0;
        solve(&mut matrix, &mut tangent)?;
        let length = dot(&tangent, &tangent).sqrt();
        for part in &mut tangent {
            *part /= length;
        }
        tangent.iter().all(|part| part.is_finite()).then_some(tangent)
    }

    /// From one spot to another, in scaled coordinates.
    pub(super) fn chord(&self, from: &[f64], to: &[f64]) -> Vec<f64> {
        from.iter().zip(to).zip(&self.scale).map(|((from, to), scale)| (to - from) / scale).collect()
    }
}

/// How a spot was corrected.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Corrected {
    /// Size of the first correction, in scaled coordinates.
    pub(super) first: f64,
    /// The last correction of each coordinate, in its own unit.
    pub(super) last: Vec<f64>,
}
