//! A grid of cells over a part of the plane: where each stands, and in which one a point falls.

use super::CELL_ASPECT;

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
}

/// A window divided into cells, row 0 lowest.
///
/// The sides of the window run through the middle of the outermost cells, so that the flow along an axis, and a state
/// without a species, are shown exactly where they are.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Frame {
    /// The part of the plane.
    pub window: Window,
    /// Cells side by side, at least 2.
    pub columns: usize,
    /// Cells one above the other, at least 2.
    pub rows: usize,
}

impl Frame {
    /// A frame of at least two cells each way.
    pub fn new(window: Window, columns: usize, rows: usize) -> Self {
        Self { window, columns: columns.max(2), rows: rows.max(2) }
    }

    /// The abundance in the middle of a column, which may be a fraction.
    pub fn x(&self, column: f64) -> f64 {
        along(self.window.x, column / (self.columns - 1) as f64)
    }

    /// The abundance in the middle of a row, which may be a fraction.
    pub fn y(&self, row: f64) -> f64 {
        along(self.window.y, row / (self.rows - 1) as f64)
    }

    /// Where a point lies in columns and rows; not finite where the window has no width.
    pub fn place(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let share = |[low, high]: [f64; 2], value: f64| (value - low) / (high - low);
        [share(self.window.x, x) * (self.columns - 1) as f64, share(self.window.y, y) * (self.rows - 1) as f64]
    }

    /// Column and row of the cell that holds a point; `None` outside the window.
    pub fn cell(&self, point: [f64; 2]) -> Option<[usize; 2]> {
        let [column, row] = self.place(point);
        let index = |place: f64, count: usize| nearest(place, count - 1);
        (self.window.holds(point) && column.is_finite() && row.is_finite())
            .then(|| [index(column, self.columns), index(row, self.rows)])
    }

    /// A velocity as the eye sees it, in widths of a column.
    pub fn seen(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let [[left, right], [low, high]] = [self.window.x, self.window.y];
        let across = (self.columns - 1) as f64 / (right - left);
        let up = CELL_ASPECT * (self.rows - 1) as f64 / (high - low);
        [x * across, y * up]
    }

    /// What [`Frame::seen`] shows as the given displacement.
    pub fn unseen(&self, [across, up]: [f64; 2]) -> [f64; 2] {
        let [[left, right], [low, high]] = [self.window.x, self.window.y];
        let x = across * (right - left) / (self.columns - 1) as f64;
        [x, up * (high - low) / (CELL_ASPECT * (self.rows - 1) as f64)]
    }
}

/// The whole number from 0 to `most` that is nearest; 0 for what is no number.
#[expect(clippy::cast_sign_loss, reason = "held above 0 first")]
pub fn nearest(x: f64, most: usize) -> usize {
    (x.round().max(0.0) as usize).min(most)
}

/// The ends are met exactly, whatever the rounding in between.
fn along([low, high]: [f64; 2], share: f64) -> f64 {
    if share <= 0.0 {
        low
    } else if share >= 1.0 {
        high
    } else {
        low + (high - low) * share
    }
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
            let [x, y] = frame.unseen(frame.seen([0.3, -0.2]));
            assert!((x - 0.3).abs() < 1e-15 && (y + 0.2).abs() < 1e-15);
        }
    }
}
