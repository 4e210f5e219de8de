//! Equations near a singular point, bordered so that they become regular.
//!
//! With u, v the singular vectors of the smallest singular value at a centre c, the system F(x) + μ u = 0, vᵀ(x − c) = t has
//! one solution (x(t), μ(t)) for each t, and the roots of F are the zeros of μ (Lyapunov–Schmidt reduction by bordering:
//! Keller 1977; Griewank & Reddien 1984; Golubitsky & Schaeffer 1985; from memory).

use super::newton::{Equations, Region};
use super::sharpen::Residual;
use crate::expr::tape::Tape;
use crate::expr::tape::jet::Jet;
use crate::expr::tape::number::Number;
use crate::expr::tape::written::Written;
use crate::num::dense::inverse;
use crate::num::interval::Interval;
use crate::num::singular::singular;

/// Newton steps on the bordered equations at one t: they start within the tube, where convergence is quadratic.
const STEPS: usize = 6;
/// Rounds of sharpening the enclosure of a linear system's solution.
const SHARPENINGS: usize = 12;
/// Rounds of inflation around such a solution.
const INFLATIONS: usize = 6;

/// The bordered equations around one centre, and a tube that holds all of a heap.
pub(super) struct Bordered<'e, 't> {
    equations: &'e mut Equations<'t>,
    tape: &'t Tape,
    residual: Residual<'t, Written>,
    parameters: Vec<Jet<Interval>>,
    centre: Vec<f64>,
    u: Vec<f64>,
    v: Vec<f64>,
    /// Approximate inverse of the bordered Jacobian at the centre, order n + 1.
    inverse: Vec<f64>,
    /// All x, then μ.
    tube: Vec<Interval>,
}

/// How the curve of solutions runs over a region.
pub(super) struct Course {
    /// x'
    pub(super) direction: Vec<Interval>,
    /// Taylor coefficients of μ, from the first: μ', μ''/2, μ‴/6.
    pub(super) mu: [Interval; 3],
}

impl<'e, 't> Bordered<'e, 't> {
    /// Around the hull of a heap, the tube reaching `reach` times its size beyond. `None` where that leads nowhere.
    pub(super) fn around(
        equations: &'e mut Equations<'t>,
        tape: &'t Tape,
        parameters: &[f64],
        hull: &[Interval],
        reach: f64,
    ) -> Option<Self> {
        let n = equations.n;
        let centre: Vec<f64> = hull.iter().map(|side| side.mid()).collect();
        let slopes = equations.slopes_at(&centre);
        let over_heap = equations.linear(hull);
        let [u, v] = singular_vectors(&slopes, &over_heap.slopes, hull)?;
        let inverse = inverse(&matrix(&slopes, &u, &v, 0.0), n + 1)?;
        // A side that was cut to a point still needs room for the curve, as much as the widest has for its size.
        let share = |(side, &c): (&Interval, &f64)| if c == 0.0 { 0.0 } else { side.width() / c.abs() };
        let widest = hull.iter().zip(&centre).map(share).fold(1e-14, f64::max).min(1.0);
        let side = |(side, &c): (&Interval, &f64)| {
            let r = (reach * side.width().max(widest * c.abs())).max(f64::MIN_POSITIVE);
            Interval::point(c) + Interval::new(-r, r)
        };
        let mut tube: Vec<Interval> = hull.iter().zip(&centre).map(side).collect();
        let over = equations.linear(&tube);
        // μ must be able to balance F over the whole tube in the row that it moves most, with some room.
        let weight =
            |i: usize| u[i].abs() / (0..n).map(|j| over.slopes[i * n + j].mag()).fold(f64::MIN_POSITIVE, f64::max);
        let row = (0..n).max_by(|&a, &b| weight(a).total_cmp(&weight(b)))?;
        let needed = over.values[row].div(Interval::point(u[row]), &mut true).mag();
        let room = (4.0 * needed).max(f64::MIN_POSITIVE);
        tube.push(Interval::try_new(-room, room).filter(|side| side.is_bounded())?);
        let residual = Residual::new(tape, parameters);
        let parameters = parameters.iter().map(|&p| Jet::constant(p)).collect();
        Some(Self { equations, tape, residual, parameters, centre, u, v, inverse, tube })
    }

    /// The t that a region spans: vᵀ(x − c).
    pub(super) fn along(&self, region: &[Interval]) -> Interval {
        let parts = region.iter().zip(&self.centre).zip(&self.v);
        parts.fold(Interval::ZERO, |sum, ((side, &c), &v)| sum + Interval::point(v) * (*side - Interval::point(c)))
    }

    /// Whether it is proved that the tube holds exactly one solution for each t of an interval.
    pub(super) fn is_regular(&mut self, t: Interval) -> bool {
        let (centre, tube) = (self.centre.clone(), self.tube.clone());
        let image = self.image(&centre, 0.0, t, &tube);
        image.is_some_and(|image| image.iter().zip(&tube).all(|(image, side)| image.interior_of(*side)))
    }

    /// How the curve runs over the tube.
    pub(super) fn course(&mut self) -> Option<Course> {
        let tube = self.tube[..self.equations.n].to_vec();
        self.course_over(&tube, 3)
    }

    /// Taylor coefficients of x and μ along the curve, wherever on it in a region: with all lower ones known, F's next one
    /// is J x_k plus what the lower give, so that each takes one more linear system with the same matrix. Of μ those up to `orders`.
    fn course_over(&mut self, region: &[Interval], orders: usize) -> Option<Course> {
        let n = self.equations.n;
        let over = self.equations.linear(region);
        let bordered = matrix(&over.slopes, &points(&self.u), &points(&self.v), Interval::ZERO);
        let mut direction = self.solve(&bordered, &unit(n))?;
        let mut mu = [direction.pop()?, Interval::ENTIRE, Interval::ENTIRE];
        let line = region.iter().zip(&direction).map(|(x, direction)| Jet::line(*x, *direction));
        let mut line: Vec<Jet<Interval>> = line.collect();
        let mut run = self.tape.start(&self.parameters);
        for order in 2..=orders {
            let domain = run.at(&line);
            if !domain.defined {
                return None;
            }
            // Beside a kink the slopes hold those of either branch; a second derivative there is none.
            if !domain.smooth {
                break;
            }
            let mut right: Vec<Interval> = (0..n).map(|i| -run.output(i).0[order]).collect();
            right.push(Interval::ZERO);
            let Some(mut next) = self.solve(&bordered, &right) else { break };
            mu[order - 1] = next.pop()?;
            line.iter_mut().zip(&next).for_each(|(x, next)| x.0[order] = *next);
        }
        Some(Course { direction, mu })
    }

    /// The solution at one t: tight enclosures of x and of μ.
    pub(super) fn at(&mut self, t: f64) -> Option<(Region, Interval)> {
        let (n, m) = (self.equations.n, self.equations.n + 1);
        let mut x = self.centre.clone();
        let mut mu = 0.0;
        for _ in 0..STEPS {
            let slopes = self.equations.slopes_at(&x);
            let mut rest: Vec<f64> = self.equations.values().iter().zip(&self.u).map(|(f, u)| f + mu * u).collect();
            let along: f64 = x.iter().zip(&self.centre).zip(&self.v).map(|((x, c), v)| v * (x - c)).sum();
            rest.push(along - t);
            let inverse = inverse(&matrix(&slopes, &self.u, &self.v, 0.0), m)?;
            let step = |i: usize| (0..m).map(|k| inverse[i * m + k] * rest[k]).sum::<f64>();
            x.iter_mut().enumerate().for_each(|(i, x)| *x -= step(i));
            mu -= step(n);
        }
        self.enclose(&x, mu, t)
    }

    /// Taylor coefficients of μ around one t, from μ itself up to order `orders`; nothing is known of those above.
    pub(super) fn taylor_at(&mut self, t: f64, orders: usize) -> Option<[Interval; 4]> {
        let (x, value) = self.at(t)?;
        let over = self.equations.linear(&x);
        let centre: Vec<f64> = over.slopes.iter().map(|slope| slope.mid()).collect();
        let here = inverse(&matrix(&centre, &self.u, &self.v, 0.0), self.equations.n + 1)?;
        let at_centre = std::mem::replace(&mut self.inverse, here);
        let course = self.course_over(&x, orders);
        self.inverse = at_centre;
        let [slope, bend, twist] = course?.mu;
        Some([value, slope, bend, twist])
    }

    fn enclose(&mut self, x: &[f64], mu: f64, t: f64) -> Option<(Region, Interval)> {
        let mut at = x.to_vec();
        at.push(mu);
        let mut radius: Vec<f64> = at.iter().map(|y| (8.0 * f64::EPSILON * y.abs()).max(f64::MIN_POSITIVE)).collect();
        for _ in 0..INFLATIONS {
            let region: Vec<Interval> =
                at.iter().zip(&radius).map(|(&y, &r)| Interval::point(y) + Interval::new(-r, r)).collect();
            if !region.iter().zip(&self.tube).all(|(side, tube)| side.subset_of(*tube)) {
                return None;
            }
            let mut image = self.image(x, mu, Interval::point(t), &region)?;
            if image.iter().zip(&region).all(|(image, side)| image.interior_of(*side)) {
                let mu = image.pop()?;
                return Some((image, mu));
            }
            for (r, (image, &y)) in radius.iter_mut().zip(image.iter().zip(&at)) {
                // Twice what the image needs, not twice what was tried: μ is small only where x is held tightly.
                *r = (2.0 * (*image - Interval::point(y)).mag()).max(f64::MIN_POSITIVE);
            }
        }
        None
    }

    /// Krawczyk's operator: y − C G(y; t) + (I − C M(Y)) (Y − y). `None` where the equations are not defined on Y.
    fn image(&mut self, x: &[f64], mu: f64, t: Interval, region: &[Interval]) -> Option<Vec<Interval>> {
        if self.equations.is_stopped() {
            return None;
        }
        let (n, m) = (self.equations.n, self.equations.n + 1);
        let exact: Region = points(x);
        // Between two roots F is as small as the square of their distance: too small to be seen beside the rounding of its
        // terms. What the rounding of the parameters decides is left open.
        let at = self.residual.at(x)?;
        let over = self.equations.linear(&region[..n]);
        if !over.domain.defined {
            return None;
        }
        let scaled = |u: f64| Interval::point(mu) * Interval::point(u);
        let mut rest: Vec<Interval> = at.iter().zip(&self.u).map(|(f, &u)| *f + scaled(u)).collect();
        rest.push(self.along(&exact) - t);
        let defect = self.defect(&matrix(&over.slopes, &points(&self.u), &points(&self.v), Interval::ZERO));
        let y = |i: usize| Interval::point(if i < n { x[i] } else { mu });
        let image = |i: usize| {
            let shift = (0..m).fold(Interval::ZERO, |sum, k| sum + self.c(i, k) * rest[k]);
            let spread = (0..m).fold(Interval::ZERO, |sum, j| sum + defect[i * m + j] * (region[j] - y(j)));
            y(i) - shift + spread
        };
        Some((0..m).map(image).collect())
    }

    fn c(&self, i: usize, k: usize) -> Interval {
        Interval::point(self.inverse[i * (self.equations.n + 1) + k])
    }

    /// I − C M
    fn defect(&self, bordered: &[Interval]) -> Vec<Interval> {
        let m = self.equations.n + 1;
        let entry = |i: usize, j: usize| {
            let product = (0..m).fold(Interval::ZERO, |sum, k| sum + self.c(i, k) * bordered[k * m + j]);
            if i == j { Interval::ONE - product } else { -product }
        };
        (0..m * m).map(|position| entry(position / m, position % m)).collect()
    }

    /// Encloses every solution of M y = r: with |I − C M| w ≤ q w for weights w ≥ |C r|, |y − C r| ≤ q/(1 − q) w.
    fn solve(&self, bordered: &[Interval], right: &[Interval]) -> Option<Vec<Interval>> {
        let m = right.len();
        let shift: Vec<Interval> =
            (0..m).map(|i| (0..m).fold(Interval::ZERO, |sum, k| sum + self.c(i, k) * right[k])).collect();
        let defect = self.defect(bordered);
        // A component that C r leaves at 0 still gets what the others may spill into it.
        let spilt = |i: usize| (0..m).map(|j| defect[i * m + j].mag() * shift[j].mag()).sum::<f64>();
        let weight: Vec<f64> = (0..m).map(|i| shift[i].mag().max(4.0 * spilt(i)).max(f64::MIN_POSITIVE)).collect();
        let mut q = 0.0f64;
        for i in 0..m {
            let row = (0..m).fold(Interval::ZERO, |sum, j| {
                sum + Interval::point(defect[i * m + j].mag()) * Interval::point(weight[j])
            });
            q = q.max(row.div(Interval::point(weight[i]), &mut true).hi());
        }
        if !q.is_finite() || q >= 0.5 {
            return None;
        }
        // q/(1 − q) ≤ 2q, rounded up with a margin.
        let room = |i: usize| 2.0 * q * weight[i] * (1.0 + 8.0 * f64::EPSILON);
        let mut y: Vec<Interval> = (0..m).map(|i| shift[i] + Interval::new(-room(i), room(i))).collect();
        // Every solution satisfies y = C r + (I − C M) y, which cuts what the norms overestimate.
        for _ in 0..SHARPENINGS {
            for i in 0..m {
                let image = (0..m).fold(shift[i], |sum, j| sum + defect[i * m + j] * y[j]);
                y[i] = y[i].intersect(image);
            }
        }
        Some(y)
    }
}

/// The left and right singular vectors of the smallest singular value, with rows and columns scaled to a like size: that
/// of the slopes over the heap, since those at its centre may all be 0.
fn singular_vectors(slopes: &[f64], over: &[Interval], hull: &[Interval]) -> Option<[Vec<f64>; 2]> {
    let n = hull.len();
    let scale: Vec<f64> = hull.iter().map(|side| side.mag().max(f64::MIN_POSITIVE)).collect();
    let size = |i: usize| (0..n).map(|j| over[i * n + j].mag() * scale[j]).fold(0.0, f64::max);
    let rows: Vec<f64> = (0..n).map(size).map(|size| if size > 0.0 { size } else { 1.0 }).collect();
    let scaled: Vec<f64> = (0..n * n).map(|k| slopes[k] * scale[k % n] / rows[k / n]).collect();
    let parts = singular(&scaled, n)?;
    let u = (0..n).map(|i| parts.left[i * n + n - 1] * rows[i]).collect();
    let v = (0..n).map(|j| parts.right[j * n + n - 1] / scale[j]).collect();
    Some([u, v])
}

/// [J u; vᵀ 0], row by row.
fn matrix<T: Copy>(slopes: &[T], u: &[T], v: &[T], zero: T) -> Vec<T> {
    let mut matrix = Vec::with_capacity((v.len() + 1) * (v.len() + 1));
    for (row, &u) in slopes.chunks(v.len()).zip(u) {
        matrix.extend_from_slice(row);
        matrix.push(u);
    }
    matrix.extend_from_slice(v);
    matrix.push(zero);
    matrix
}

fn points(values: &[f64]) -> Vec<Interval> {
    values.iter().map(|&value| Interval::point(value)).collect()
}

/// The right-hand side whose solution is the derivative in t.
fn unit(n: usize) -> Vec<Interval> {
    let mut right = vec![Interval::ZERO; n + 1];
    right[n] = Interval::ONE;
    right
}
