//! When the norm is largest, to nearly all digits, once a search has found the hump.

use super::{Moment, Peak, RELATIVE, Search};
use crate::num::dense::{product, transposed};
use crate::num::eigen;

/// Steps to where the slope is 0; ten are usual.
const MOST_STEPS: usize = 60;

/// How far to either side of the best a change of the slope's sign is looked for, relative to its time.
const NEARBY: [f64; 6] = [1e-4, 1e-3, 1e-2, 0.05, 0.2, 0.5];

/// From where the norm rises, for a time, to where it falls.
struct Bracket {
    start: Moment,
    width: f64,
    slopes: [f64; 2],
}

impl Search<'_> {
    /// The best moment moved to where the slope of the norm is 0, which says when far more exactly than comparing values:
    /// by false position, a side that stays being weighed half (Illinois; Dowell & Jarratt 1971).
    pub(super) fn refined(&self) -> Peak {
        let mut peak = Peak { factor: self.best.size, time: self.best.time };
        let Some(Bracket { start, width, mut slopes }) = self.bracket() else { return peak };
        let mut ends = [0.0, width];
        let mut last = ends.len();
        for _ in 0..MOST_STEPS {
            let by = ends[0] + (ends[1] - ends[0]) * (slopes[0] / (slopes[0] - slopes[1]));
            let Some(moment) = self.near(&start, by) else { break };
            let Some(slope) = self.slope(&moment) else { break };
            // Values near the top are equal but for rounding, so the slope says when.
            if moment.size >= peak.factor * (1.0 - RELATIVE) {
                peak = Peak { factor: moment.size.max(peak.factor), time: moment.time };
            }
            let side = usize::from(slope <= 0.0);
            if side == last {
                slopes[1 - side] /= 2.0;
            }
            last = side;
            slopes[side] = slope;
            let moved = (by - ends[side]).abs();
            ends[side] = by;
            if slope == 0.0 || moved <= 4.0 * f64::EPSILON * moment.time {
                break;
            }
        }
        peak
    }

    /// From where the norm rises to where it falls, close around the best.
    fn bracket(&self) -> Option<Bracket> {
        for aside in NEARBY {
            let start = self.near(&self.origin(), self.best.time * (1.0 - aside))?;
            let width = 2.0 * aside * self.best.time;
            let slopes = [self.slope(&start)?, self.slope(&self.near(&start, width)?)?];
            if slopes[0] > 0.0 && slopes[1] < 0.0 {
                return Some(Bracket { start, width, slopes });
            }
        }
        None
    }

    /// d ln‖F‖/dt = uᵀAu, u the left singular vector of the largest singular value; per time unit.
    fn slope(&self, moment: &Moment) -> Option<f64> {
        let n = self.flow.order;
        let f = self.flow.unscaled(&moment.matrix);
        let largest = f.iter().fold(0.0f64, |largest, x| largest.max(x.abs()));
        let f: Vec<f64> = f.iter().map(|x| x / largest).collect();
        let spectrum = eigen::symmetric_spectrum(&product(&f, &transposed(&f, n), n), n).ok()?;
        let u: Vec<f64> = (0..n).map(|i| spectrum.vectors[i * n]).collect();
        let row = |i: usize| -> f64 { (0..n).map(|j| self.entries[i * n + j] * u[j]).sum() };
        Some((0..n).map(|i| u[i] * row(i)).sum())
    }
}
