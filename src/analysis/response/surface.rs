//! The surface in the space of parameters on which a state is lost: points of it, and its normal.
//!
//! A point is a root of the defining system G(y, p) = 0, y being abundances and the system's own unknowns, one equation more
//! than unknowns y. With ν the vector of νᵀG_y = 0, the surface's normal is νᵀG_p (Dobson 1993; Kuznetsov 2004, ch. 10): at
//! a fold the left vector of Fₓ alone. Start at [`Surface::new`].

use super::defining::Defining;
use super::defining::frame::{Frame, Sizes};
use super::defining::newton::{Linear, Newton};
use super::locate::Located;
use super::margins::Setting;
use crate::analysis::passage::{dot, solve};

/// Rounds of bordering by which the left vector is found; the second has a border that fits.
const ROUNDS: usize = 3;

/// A place at which the state is lost.
#[derive(Clone, Debug)]
pub(super) struct Hit {
    /// Distance from the present values, in widths of the ranges.
    pub(super) t: f64,
    /// What it is.
    pub(super) located: Located,
}

/// The surface that a place lies on.
pub(super) struct Surface<'s> {
    setting: &'s Setting<'s>,
    system: &'s Defining,
    sizes: Sizes,
}

impl<'s> Surface<'s> {
    /// The surface of a located threshold.
    pub(super) fn new(setting: &'s Setting<'_>, located: &Located) -> Option<Self> {
        let (system, over) = setting.locator.system(located.system)?;
        let moving = setting.locator.moving(located.system)?;
        let size = |&i: &usize| {
            let own = setting.footing.face.moving.iter().position(|&moving| moving == i);
            let before = own.map_or(0.0, |place| setting.x[place].abs());
            let side = setting.equations.sides[i][1].abs();
            let size = before.max(located.state[i].abs());
            if size > 0.0 {
                size
            } else if side.is_finite() && side > 0.0 {
                side
            } else {
                1.0
            }
        };
        let sizes = Sizes {
            moving: moving.iter().map(size).collect(),
            controls: setting.movers.iter().map(super::margins::Mover::width).collect(),
            vector: over.iter().map(size).collect(),
        };
        Some(Self { setting, system, sizes })
    }

    /// The point of the surface along a unit direction, near one that is known.
    pub(super) fn hit(&self, direction: &[f64], near: &Hit) -> Option<Hit> {
        let values = &self.setting.equations.values;
        let m = self.system.counts[0];
        let mut start = near.located.unknowns.clone();
        for (place, (mover, part)) in self.setting.movers.iter().zip(direction).enumerate() {
            start[m + place] = mover.present + near.t * part * mover.width();
        }
        let Frame { scale, mut linear } = self.system.frame(values, &mut start, &self.sizes)?;
        linear.extend(self.line(direction, start.len()));
        let root = Newton::new(&self.system.tape, values).root(&start, &scale, &linear)?;
        let controls = &root.at[m..m + direction.len()];
        let moved = self.setting.movers.iter().zip(controls).map(|(mover, p)| (p - mover.present) / mover.width());
        let t: f64 = moved.zip(direction).map(|(u, part)| u * part).sum();
        let mut located = near.located.clone();
        located.point = root.at[..m + direction.len()].to_vec();
        let moving = self.setting.locator.moving(located.system)?;
        moving.iter().zip(&root.at).for_each(|(&i, &x)| located.state[i] = x);
        located.unknowns = root.at;
        (t.is_finite() && t > 0.0).then_some(Hit { t, located })
    }

    /// Rows that keep all parameters on the line along a direction.
    fn line(&self, direction: &[f64], unknowns: usize) -> Vec<Linear> {
        let m = self.system.counts[0];
        let largest = (0..direction.len()).max_by(|&i, &j| direction[i].abs().total_cmp(&direction[j].abs()));
        let Some(lead) = largest else { return Vec::new() };
        let base = |j: usize| self.setting.movers[j].present / self.setting.movers[j].width();
        let held = (0..direction.len()).filter(|&j| j != lead).map(|j| {
            let share = direction[j] / direction[lead];
            let mut row = vec![0.0; unknowns];
            row[m + j] = 1.0;
            row[m + lead] = -share;
            Linear { row, value: base(j) - share * base(lead) }
        });
        held.collect()
    }

    /// The unit normal in widths of the ranges, pointing away from the present values.
    pub(super) fn normal(&self, located: &Located) -> Option<Vec<f64>> {
        let values = &self.setting.equations.values;
        let [m, k] = self.system.counts;
        let mut at = located.unknowns.clone();
        let frame = self.system.frame(values, &mut at, &self.sizes)?;
        let n = at.len();
        let mut run = self.system.tape.start_gradient(values);
        run.at(&at);
        let mut rows: Vec<Vec<f64>> = Vec::with_capacity(n - k + 1);
        for i in 0..self.system.tape.outputs() {
            let slopes = run.gradient(i).map_or_else(|| vec![0.0; n], <[f64]>::to_vec);
            rows.push(slopes.iter().zip(&frame.scale).map(|(slope, scale)| slope * scale).collect());
        }
        rows.extend(frame.linear.iter().map(|linear| linear.row.clone()));
        for row in &mut rows {
            let most = row.iter().fold(0.0f64, |most, x| most.max(x.abs()));
            for x in row {
                *x /= most;
            }
        }
        let own: Vec<usize> = (0..n).filter(|j| !(m..m + k).contains(j)).collect();
        let left = left_vector(&rows, &own)?;
        let normal: Vec<f64> = (m..m + k).map(|j| rows.iter().zip(&left).map(|(row, v)| row[j] * v).sum()).collect();
        let outward: f64 = {
            let controls = &at[m..m + k];
            let moved = self.setting.movers.iter().zip(controls).map(|(mover, p)| (p - mover.present) / mover.width());
            moved.zip(&normal).map(|(u, n)| u * n).sum()
        };
        let length = dot(&normal, &normal).sqrt() * outward.signum();
        let unit: Vec<f64> = normal.iter().map(|part| part / length).collect();
        unit.iter().all(|part| part.is_finite()).then_some(unit)
    }
}

/// ν with νᵀB = 0 for the columns `own` of some rows, one row more than columns; bordered by a vector that becomes ν.
fn left_vector(rows: &[Vec<f64>], own: &[usize]) -> Option<Vec<f64>> {
    let n = rows.len();
    if own.len() + 1 != n {
        return None;
    }
    let mut border: Vec<f64> = (0..n).map(|i| 1.0 + 0.3 * ((i * i) as f64 + 1.0).sin()).collect();
    for _ in 0..ROUNDS {
        let mut matrix: Vec<f64> = own.iter().flat_map(|&j| rows.iter().map(move |row| row[j])).collect();
        matrix.extend_from_slice(&border);
        let mut vector = vec![0.0; n];
        vector[n - 1] = 1.0;
        solve(&mut matrix, &mut vector)?;
        let length = dot(&vector, &vector).sqrt();
        border = vector.iter().map(|x| x / length).collect();
        if !length.is_finite() {
            return None;
        }
    }
    Some(border)
}
