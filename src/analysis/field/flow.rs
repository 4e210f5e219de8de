//! The equations over a slice: rates at many points at once, and where a species' growth changes sign.

use super::{Frame, Slice};
use crate::analysis::subject::Subject;
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::expr::tape::run::Run;

/// Numbers that the inputs of a batch take, all species together: 64 KiB, which stay near the processor.
const BATCH: usize = 1 << 13;

/// How often a bracket of a sign change is halved until it is taken for a jump.
const HALVINGS: usize = 30;

/// Rates at the middle of every cell, row by row from the lowest; not a number where the rates are not defined.
#[derive(Clone, Debug, PartialEq)]
pub struct Motion {
    /// Of the horizontal species, in its unit per unit of time; for a map what a step adds.
    pub x: Vec<f64>,
    /// Of the vertical species.
    pub y: Vec<f64>,
}

/// A scenario's equations over a slice.
pub struct Flow {
    slice: Slice,
    /// Rates of the species along the axes.
    rates: Tape,
    /// The same per head, where that can be divided out.
    per_head: [Tape; 2],
    values: Vec<f64>,
}

impl Flow {
    /// Compiles what a slice of a scenario needs.
    pub fn new(subject: &mut Subject<'_>, slice: Slice) -> Self {
        let values = subject.plan.values.clone();
        // Parameters that are 0 take their terms with them, so that more rows can be divided.
        let rows = subject.graph.with_zeros(&subject.balance, &values);
        let axes = [slice.x, slice.y.unwrap_or(slice.x)];
        let graph = &mut subject.graph;
        let growth: [NodeId; 2] = axes.map(|i| graph.divide(rows[i], i).quotient.unwrap_or(rows[i]));
        let rates = Tape::new(graph, &axes.map(|i| rows[i]));
        let per_head = growth.map(|node| Tape::new(graph, &[node]));
        Self { slice, rates, per_head, values }
    }

    /// The slice that it is over.
    pub fn slice(&self) -> &Slice {
        &self.slice
    }

    /// Rates in the middle of every cell.
    pub fn motion(&self, frame: &Frame) -> Motion {
        let columns: Vec<f64> = (0..frame.columns).map(|column| frame.x(column as f64)).collect();
        let rows: Vec<f64> = (0..frame.rows).map(|row| frame.y(row as f64)).collect();
        let [x, y] = self.over(&self.rates, &columns, &rows);
        Motion { x, y }
    }

    /// Evaluates at every point of a grid, row by row: one column an output of the tape; its second output may be missing.
    fn over(&self, tape: &Tape, columns: &[f64], rows: &[f64]) -> [Vec<f64>; 2] {
        let points = columns.len() * rows.len();
        let mut out = [vec![0.0; points], vec![0.0; if tape.outputs() > 1 { points } else { 0 }]];
        let mut lanes = tape.lanes_of_points(&self.values);
        let batch = (BATCH / self.slice.held.len() / columns.len()).clamp(1, rows.len().max(1));
        let mut inputs: Vec<Vec<f64>> = self.slice.held.iter().map(|&x| vec![x; batch * columns.len()]).collect();
        inputs[self.slice.x].chunks_mut(columns.len()).for_each(|row| row.copy_from_slice(columns));
        for from in (0..rows.len()).step_by(batch) {
            let count = batch.min(rows.len() - from);
            let (start, size) = (from * columns.len(), count * columns.len());
            if let Some(up) = self.slice.y {
                for (row, cells) in rows[from..from + count].iter().zip(inputs[up].chunks_mut(columns.len())) {
                    cells.fill(*row);
                }
            }
            let inputs: Vec<&[f64]> = inputs.iter().map(|column| &column[..size]).collect();
            let mut parts: Vec<&mut [f64]> =
                out.iter_mut().filter(|o| !o.is_empty()).map(|o| &mut o[start..start + size]).collect();
            if !lanes.run(&inputs, &mut parts) {
                for part in &mut parts {
                    let undefined = part.iter_mut().zip(lanes.defined()).filter(|(_, defined)| !**defined);
                    undefined.for_each(|(value, _)| *value = f64::NAN);
                }
            }
        }
        out
    }

    /// For each cell, row by row, whether the growth per head of the species along an axis (0 across, 1 up) changes sign
    /// in it, seen along the cross of its two middle lines: the curve comes within half a cell of the middle.
    ///
    /// Where growth cannot be divided by the abundance, its own sign counts. A jump from one sign to the other is none of
    /// the curve.
    pub fn zero_growth(&self, axis: usize, frame: &Frame) -> Vec<bool> {
        let middles = |count: usize| (0..count).map(|k| k as f64).collect::<Vec<_>>();
        let halves = |count: usize| (0..2 * count - 1).map(|k| k as f64 / 2.0).collect::<Vec<_>>();
        let mut cells = vec![false; frame.columns * frame.rows];
        let run = self.per_head[axis].start(&self.values);
        let mut test = SignChange { flow: self, state: self.slice.held.clone(), run, frame };
        test.mark(&mut cells, axis, &halves(frame.columns), &middles(frame.rows), Along::Row);
        test.mark(&mut cells, axis, &middles(frame.columns), &halves(frame.rows), Along::Column);
        cells
    }

    /// Rates at one point; `None` where they are not defined.
    pub(super) fn start(&self) -> At<'_> {
        At { state: self.slice.held.clone(), flow: self, run: self.rates.start(&self.values) }
    }
}

/// Rates at one point after the other.
pub(super) struct At<'f> {
    flow: &'f Flow,
    state: Vec<f64>,
    run: Run<'f, f64>,
}

impl At<'_> {
    /// Rates of the two species along the axes; `None` where they are not defined.
    pub(super) fn rates(&mut self, point: [f64; 2]) -> Option<[f64; 2]> {
        put(&self.flow.slice, &mut self.state, point);
        let domain = self.run.at(&self.state);
        let rates = [*self.run.output(0), *self.run.output(1)];
        (domain.defined && rates.iter().all(|rate| rate.is_finite())).then_some(rates)
    }
}

fn put(slice: &Slice, state: &mut [f64], [x, y]: [f64; 2]) {
    state[slice.x] = x;
    if let Some(up) = slice.y {
        state[up] = y;
    }
}

/// Which middle line of the cells is walked along.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Along {
    Row,
    Column,
}

struct SignChange<'f> {
    flow: &'f Flow,
    state: Vec<f64>,
    run: Run<'f, f64>,
    frame: &'f Frame,
}

impl SignChange<'_> {
    fn mark(&mut self, cells: &mut [bool], axis: usize, columns: &[f64], rows: &[f64], along: Along) {
        let at = |places: &[f64], of: &dyn Fn(f64) -> f64| places.iter().map(|&k| of(k)).collect::<Vec<f64>>();
        let (xs, ys) = (at(columns, &|k| self.frame.x(k)), at(rows, &|k| self.frame.y(k)));
        let [growth, _] = self.flow.over(&self.flow.per_head[axis], &xs, &ys);
        for (row, here) in growth.chunks(columns.len()).enumerate() {
            // Along a row each value is followed by the next, along a column by the one above.
            let next = match along {
                Along::Row => &here[1..],
                Along::Column => &growth[(row + 1) * columns.len()..],
            };
            for (column, (&a, &b)) in here.iter().zip(next).enumerate() {
                if !((a < 0.0 && b >= 0.0) || (a >= 0.0 && b < 0.0)) {
                    continue;
                }
                // The first half of a step starts in the middle of a cell, the second ends in the middle of the next.
                let (to, cell) = match along {
                    Along::Row => ([xs[column + 1], ys[row]], row * self.frame.columns + column.div_ceil(2)),
                    Along::Column => ([xs[column], ys[row + 1]], row.div_ceil(2) * self.frame.columns + column),
                };
                cells[cell] |= self.is_zero([[xs[column], ys[row]], to], [a, b]);
            }
        }
    }

    /// Whether growth goes through 0 between two points rather than jumping over it: halving the bracket must bring it
    /// down to half of what it was.
    fn is_zero(&mut self, [mut from, mut to]: [[f64; 2]; 2], [mut a, mut b]: [f64; 2]) -> bool {
        let start = a.abs().max(b.abs());
        for _ in 0..HALVINGS {
            if a.abs().max(b.abs()) <= start / 2.0 {
                return true;
            }
            let middle = [from[0] + (to[0] - from[0]) / 2.0, from[1] + (to[1] - from[1]) / 2.0];
            put(&self.flow.slice, &mut self.state, middle);
            let domain = self.run.at(&self.state);
            let value = *self.run.output(0);
            if !domain.defined || !value.is_finite() {
                return false;
            }
            if (value < 0.0) == (a < 0.0) {
                (from, a) = (middle, value);
            } else {
                (to, b) = (middle, value);
            }
        }
        false
    }
}
