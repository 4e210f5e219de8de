//! A grid of cells over a part of the plane: where each stands, and in which one a point falls.

use super::CELL_ASPECT;
use crate::num::elementary;

/// What part of the plane is shown: lower and upper side of each axis, in the species' units.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Window {
    /// Along the horizontal axis.
    pub x: [f64; 2],
    /// Along the vertical axis.
    pub y: [f64; 2],
}

impl Window {
    /// Whether a point is in it, its sides included.
    pub fn holds(&self, [x, y]: [f64; 2]) -> bool {
        (self.x[0]..=self.x[1]).contains(&x) && (self.y[0]..=self.y[1]).contains(&y)
    }

    /// Whether a line between two points may come into it, if it bends aside by less than the points are apart, in widths
    /// and heights of the window.
    pub fn may_touch(&self, from: [f64; 2], to: [f64; 2]) -> bool {
        let window = [self.x, self.y];
        let size = |i: usize| window[i][1] - window[i][0];
        let share = |i: usize| (to[i] - from[i]).abs() / size(i);
        let apart = share(0).max(share(1));
        (0..2).all(|i| {
            let room = apart * size(i);
            // Not a number where the window has no width; then nothing is ruled out.
            !(from[i].min(to[i]) - room > window[i][1] || from[i].max(to[i]) + room < window[i][0])
        })
    }
}

/// How abundances lie along an axis.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Scale {
    /// Equal differences are equally long.
    #[default]
    Linear,
    /// Equal ratios are equally long; 0 is nowhere.
    Logarithmic,
}

/// Both axes linear.
pub const LINEAR: [Scale; 2] = [Scale::Linear; 2];

/// The lower side of a logarithmic axis, as a share of the upper, where the window has none above 0; no unit.
pub const DEEPEST: f64 = 1e-12;

impl Scale {
    /// Where an abundance lies along the axis; −∞ or not a number where it lies nowhere.
    pub(super) fn of(self, x: f64) -> f64 {
        match self {
            Self::Linear => x,
            Self::Logarithmic => elementary::ln(x),
        }
    }

    /// The sides of an axis, mended where a logarithmic one would begin at 0 or below.
    fn sides(self, [low, high]: [f64; 2]) -> [f64; 2] {
        match self {
            Self::Logarithmic if low.is_nan() || low <= 0.0 => [(DEEPEST * high).max(f64::MIN_POSITIVE), high],
            _ => [low, high],
        }
    }

    /// The share of the way from the lower side to the upper; not finite where there is none.
    pub fn share(self, [low, high]: [f64; 2], x: f64) -> f64 {
        match self {
            Self::Linear => (x - low) / (high - low),
            Self::Logarithmic => elementary::ln(x / low) / elementary::ln(high / low),
        }
    }

    /// The abundance at a share of the way. The ends are met exactly, whatever the rounding in between.
    pub(super) fn at(self, [low, high]: [f64; 2], share: f64) -> f64 {
        if share <= 0.0 {
            return low;
        }
        if share >= 1.0 {
            return high;
        }
        match self {
            Self::Linear => low + (high - low) * share,
            Self::Logarithmic => low * elementary::exp(elementary::ln(high / low) * share),
        }
    }

    /// How much of the axis a unit of abundance takes at `x`.
    fn steepness(self, [low, high]: [f64; 2], x: f64) -> f64 {
        match self {
            Self::Linear => 1.0 / (high - low),
            Self::Logarithmic => 1.0 / (x * elementary::ln(high / low)),
        }
    }
}

/// A window divided into cells, row 0 lowest.
///
/// The sides of the window run through the middle of the outermost cells, so that the flow along an axis, and a state
/// without a species, are shown exactly where they are.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Frame {
    /// The part of the plane.
    pub window: Window,
    /// How abundances lie along each axis.
    pub scales: [Scale; 2],
    /// Cells side by side, at least 2.
    pub columns: usize,
    /// Cells one above the other, at least 2.
    pub rows: usize,
}

impl Frame {
    /// A frame of at least two cells each way, with linear axes.
    pub fn new(window: Window, columns: usize, rows: usize) -> Self {
        Self::scaled(window, LINEAR, columns, rows)
    }

    /// A frame of at least two cells each way. The sides of a logarithmic axis are to be above 0; a lower side that is not
    /// becomes [`DEEPEST`] times the upper.
    pub fn scaled(Window { x, y }: Window, scales: [Scale; 2], columns: usize, rows: usize) -> Self {
        let window = Window { x: scales[0].sides(x), y: scales[1].sides(y) };
        Self { window, scales, columns: columns.max(2), rows: rows.max(2) }
    }

    /// The abundance in the middle of a column, which may be a fraction.
    pub fn x(&self, column: f64) -> f64 {
        self.scales[0].at(self.window.x, column / (self.columns - 1) as f64)
    }

    /// The abundance in the middle of a row, which may be a fraction.
    pub fn y(&self, row: f64) -> f64 {
        self.scales[1].at(self.window.y, row / (self.rows - 1) as f64)
    }

    /// Where a point lies in columns and rows; not finite where the window has no width, and at 0 of a logarithmic axis.
    pub fn place(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let [across, up] = self.scales;
        [
            across.share(self.window.x, x) * (self.columns - 1) as f64,
            up.share(self.window.y, y) * (self.rows - 1) as f64,
        ]
    }

    /// Column and row of the cell that holds a point; `None` outside the window.
    pub fn cell(&self, point: [f64; 2]) -> Option<[usize; 2]> {
        let [column, row] = self.place(point);
        let index = |place: f64, count: usize| nearest(place, count - 1);
        (self.window.holds(point) && column.is_finite() && row.is_finite())
            .then(|| [index(column, self.columns), index(row, self.rows)])
    }

    /// A velocity at a point as the eye sees it, in widths of a column; where both axes are linear the point is of no
    /// account.
    pub fn seen(&self, point: [f64; 2], [x, y]: [f64; 2]) -> [f64; 2] {
        let [across, up] = self.stretch(point);
        [x * across, y * up]
    }

    /// What [`Frame::seen`] multiplies velocities at a point by: widths of a column a unit of abundance, along each axis.
    pub fn stretch(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let [across, up] = self.scales;
        let columns = across.steepness(self.window.x, x) * (self.columns - 1) as f64;
        [columns, CELL_ASPECT * up.steepness(self.window.y, y) * (self.rows - 1) as f64]
    }

    /// Whether a point is at 0 or below of a logarithmic axis, where no window can show it.
    pub fn is_beyond_logarithms(&self, point: [f64; 2]) -> bool {
        self.scales.iter().zip(point).any(|(&scale, x)| scale == Scale::Logarithmic && x <= 0.0)
    }

    /// How far apart two points are as the eye sees it, in widths of a column.
    pub fn apart(&self, from: [f64; 2], to: [f64; 2]) -> f64 {
        let [a, b] = [from, to].map(|point| self.place(point));
        (b[0] - a[0]).hypot(CELL_ASPECT * (b[1] - a[1]))
    }
}

/// The whole number from 0 to `most` that is nearest; 0 for what is no number.
#[expect(clippy::cast_sign_loss, reason = "held above 0 first")]
pub fn nearest(x: f64, most: usize) -> usize {
    (x.round().max(0.0) as usize).min(most)
}

/// One of eight directions, 0 to the right and on against the clock.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Octant(u8);

impl Octant {
    /// How many there are.
    pub const COUNT: usize = 8;

    /// The direction nearest to that of a vector as it is seen; `None` where it is 0 or not finite.
    ///
    /// Slopes are compared with tan(π/8), which spares an arc tangent in each of thousands of cells.
    pub fn of([x, y]: [f64; 2]) -> Option<Self> {
        const SLOPE: f64 = std::f64::consts::SQRT_2 - 1.0;
        if !(x.is_finite() && y.is_finite()) || (x == 0.0 && y == 0.0) {
            return None;
        }
        let is_level = y.abs() < SLOPE * x.abs();
        let is_steep = x.abs() < SLOPE * y.abs();
        Some(Self(match (is_level, is_steep, x > 0.0, y > 0.0) {
            (true, _, true, _) => 0,
            (true, _, false, _) => 4,
            (_, true, _, true) => 2,
            (_, true, _, false) => 6,
            (_, _, true, true) => 1,
            (_, _, false, true) => 3,
            (_, _, false, false) => 5,
            (_, _, true, false) => 7,
        }))
    }

    /// Its number, from 0 to 7.
    pub fn index(self) -> usize {
        usize::from(self.0)
    }

    /// The other way.
    #[must_use]
    pub fn opposite(self) -> Self {
        Self((self.0 + 4) % 8)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn octants_are_those_of_the_arc_tangent() {
        for k in 0..3600 {
            // Half a tenth of a degree off, so that no direction is on a border.
            let angle = (f64::from(k) + 0.5) / 10.0;
            let (sin, cos) = angle.to_radians().sin_cos();
            let expected = nearest(angle / 45.0, 8) % Octant::COUNT;
            for size in [1e-300, 1.0, 1e300] {
                let octant = Octant::of([size * cos, size * sin]);
                assert_eq!(octant.map(Octant::index), Some(expected), "{angle} degrees");
                assert_eq!(Octant::of([-size * cos, -size * sin]), octant.map(Octant::opposite));
            }
        }
        for none in [[0.0, 0.0], [-0.0, 0.0], [f64::NAN, 1.0], [1.0, f64::INFINITY]] {
            assert_eq!(Octant::of(none), None);
        }
    }

    #[test]
    fn cells_hold_their_middle_and_no_point_outside() {
        let window = Window { x: [0.0, 7.0], y: [-1.0, 2.5] };
        for (columns, rows) in [(2, 2), (3, 17), (70, 18), (1000, 1000)] {
            let frame = Frame::new(window, columns, rows);
            for k in 0..columns.max(rows) {
                let (column, row) = (k % columns, k % rows);
                let point = [frame.x(column as f64), frame.y(row as f64)];
                assert_eq!(frame.cell(point), Some([column, row]), "{columns}x{rows}: {point:?}");
            }
            assert_eq!(frame.cell([0.0, 2.5]), Some([0, rows - 1]));
            assert_eq!((frame.cell([-1e-9, 0.0]), frame.cell([0.0, 2.6])), (None, None));
            assert_frame_is_its_own_derivative(&frame, [0.3, -0.2]);
        }
    }

    /// Velocities are seen as the differences of places say.
    fn assert_frame_is_its_own_derivative(frame: &Frame, velocity: [f64; 2]) {
        for share in [0.1, 0.5, 0.9] {
            let point = [frame.x(share * (frame.columns - 1) as f64), frame.y(share * (frame.rows - 1) as f64)];
            let step = 1e-6 * point[0].abs().min(point[1].abs());
            let ahead = |sign: f64| [0, 1].map(|i: usize| point[i] + sign * step * velocity[i]);
            let [a, b] = [ahead(-1.0), ahead(1.0)].map(|point| frame.place(point));
            let seen = frame.seen(point, velocity);
            for (seen, difference) in [(seen[0], b[0] - a[0]), (seen[1], CELL_ASPECT * (b[1] - a[1]))] {
                let expected = difference / (2.0 * step);
                assert!((seen - expected).abs() <= 1e-6 * expected.abs(), "{frame:?}: {seen}, not {expected}");
            }
        }
    }

    #[test]
    fn a_logarithmic_axis_gives_each_decade_the_same_room() {
        let window = Window { x: [1e-3, 1e3], y: [1.0, 10.0] };
        let frame = Frame::scaled(window, [Scale::Logarithmic, Scale::Linear], 61, 10);
        for decade in -3..=3 {
            let x = 10f64.powi(decade);
            let column = nearest(f64::from(decade + 3) * 10.0, 60);
            assert_eq!(frame.cell([x, 1.0]), Some([column, 0]), "{x}");
            assert!((frame.x(column as f64) / x - 1.0).abs() < 1e-13);
        }
        assert_eq!((frame.x(0.0), frame.x(60.0)), (1e-3, 1e3));
        assert_eq!((frame.cell([0.0, 2.0]), frame.cell([9e-4, 2.0])), (None, None));
        for scales in [[Scale::Logarithmic; 2], [Scale::Linear, Scale::Logarithmic]] {
            assert_frame_is_its_own_derivative(&Frame::scaled(window, scales, 40, 30), [2.0, -0.7]);
        }
        let mended = Frame::scaled(Window { x: [0.0, 10.0], y: [-1.0, 1.0] }, [Scale::Logarithmic; 2], 9, 9);
        assert_eq!(mended.window, Window { x: [10.0 * DEEPEST, 10.0], y: [DEEPEST, 1.0] });
    }
}
