//! Yields of two harvests over two controls, on one face: the state solved for at any pair, and how both yields change.
//!
//! With the state eliminated dY/dc = Y_c − Y_x Fₓ⁻¹ F_c. `front` looks for the best pairs on it.

use super::footing::{Footing, Line, Standing};
use super::watch::Watch;
use crate::analysis::passage::solve;

/// A stable state over the two controls.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Place {
    /// Shares of the two ranges, from 0 to 1.
    pub(super) share: [f64; 2],
    /// Abundances of those who move.
    pub(super) x: Vec<f64>,
    /// The two yields.
    pub(super) yields: [f64; 2],
    /// Slope of each yield by each share.
    pub(super) slopes: [[f64; 2]; 2],
    /// Slope of each abundance by each share.
    moves: [Vec<f64>; 2],
}

impl Place {
    /// Both yields together.
    pub(super) fn total(&self) -> f64 {
        self.yields[0] + self.yields[1]
    }

    /// The largest change by a share: of a yield, and of an abundance measured by it.
    pub(super) fn steepness(&self, control: usize) -> f64 {
        let relative = |dx: f64, x: f64| if x == 0.0 { 0.0 } else { (dx / x).abs() };
        let yields = (0..2).map(|i| relative(self.slopes[i][control], self.yields[i]));
        let states = self.moves[control].iter().zip(&self.x).map(|(&dx, &x)| relative(dx, x));
        yields.chain(states).fold(0.0, f64::max)
    }

    /// Slope of both together by a share.
    pub(super) fn total_slope(&self, control: usize) -> f64 {
        self.slopes[0][control] + self.slopes[1][control]
    }
}

/// What the two yields stand on.
pub(super) struct Terrain<'f> {
    pub(super) standing: Standing<'f>,
    pub(super) watch: &'f Watch,
    /// Lower ends and widths of the two ranges.
    pub(super) ranges: [[f64; 2]; 2],
    /// Takings that make up either yield.
    pub(super) parts: [Vec<usize>; 2],
}

impl<'f> Terrain<'f> {
    pub(super) fn new(
        footing: &'f Footing,
        watch: &'f Watch,
        scale: Vec<f64>,
        ranges: [[f64; 2]; 2],
        parts: [Vec<usize>; 2],
    ) -> Self {
        let line = Line { base: vec![0.0; 2], direction: vec![0.0; 2] };
        Self { standing: Standing::new(footing, line, scale), watch, ranges, parts }
    }

    /// The controls at shares of their ranges.
    pub(super) fn controls(&self, share: [f64; 2]) -> [f64; 2] {
        [0, 1].map(|j| self.ranges[j][0] + share[j] * self.ranges[j][1])
    }

    /// The stable state near a guess; `None` where there is none.
    pub(super) fn at(&mut self, share: [f64; 2], guess: &[f64]) -> Option<Place> {
        self.standing.line.base = self.controls(share).to_vec();
        let mut spot: Vec<f64> = guess.iter().copied().chain([0.0]).collect();
        self.standing.correct_at(&mut spot)?;
        let m = guess.len();
        let seen = self.watch.at(&self.standing.line.inputs(&spot))?;
        if !self.watch.is_sound(&spot[..m], &seen) {
            return None;
        }
        let moves = self.moves(&spot)?;
        let mut yields = [0.0; 2];
        let mut slopes = [[0.0; 2]; 2];
        for i in 0..2 {
            let (value, gradient) = self.standing.taken_by_control(&spot, &self.parts[i])?;
            yields[i] = value;
            for j in 0..2 {
                let by_state: f64 = gradient.iter().zip(&moves[j]).map(|(slope, dx)| slope * dx).sum();
                slopes[i][j] = by_state + gradient[m + j] * self.ranges[j][1];
            }
        }
        spot.pop();
        Some(Place { share, x: spot, yields, slopes, moves })
    }

    /// The state near one that is known, with controls not far from its own.
    pub(super) fn beside(&mut self, from: &Place, share: [f64; 2]) -> Option<Place> {
        let guess: Vec<f64> = (0..from.x.len())
            .map(|i| from.x[i] + (0..2).map(|j| from.moves[j][i] * (share[j] - from.share[j])).sum::<f64>())
            .collect();
        self.at(share, &guess)
    }

    /// Slopes of abundances by each share at a spot that is solved for.
    fn moves(&mut self, spot: &[f64]) -> Option<[Vec<f64>; 2]> {
        let (_, rows) = self.standing.rows(spot)?;
        let m = spot.len() - 1;
        let by_controls = self.standing.slopes_of_controls();
        let one = |j: usize| {
            let mut matrix: Vec<f64> = rows.chunks_exact(m + 1).flat_map(|row| &row[..m]).copied().collect();
            let mut right: Vec<f64> = (0..m).map(|i| -by_controls[2 * i + j] * self.ranges[j][1]).collect();
            solve(&mut matrix, &mut right)?;
            right.iter().all(|x| x.is_finite()).then_some(right)
        };
        Some([one(0)?, one(1)?])
    }
}
