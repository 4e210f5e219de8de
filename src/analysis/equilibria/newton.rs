//! Newton's method, approximately to find a root and in intervals to prove it.
//!
//! The proof is Krawczyk's test with epsilon-inflation around an approximate root (Krawczyk 1969; Rump 1983, 2010; from
//! memory), the step that cuts boxes is the preconditioned interval Gauss–Seidel step of Hansen & Sengupta (1981).

use super::sharpen::Residual;
use crate::expr::tape::Tape;
use crate::expr::tape::gradient::GradientRun;
use crate::expr::tape::number::Domain;
use crate::num::dense::{inverse, inverse_unless};
use crate::num::double::Double;
use crate::num::interval::Interval;

/// A box of states, one interval a variable.
pub(super) type Region = Vec<Interval>;

/// Newton steps from one starting point, and how far the iterates may leave the box, in its own size.
const STEPS: usize = 14;
const LEASH: f64 = 3.0;

/// Halvings of the region in which a root may be alone.
const HALVINGS: usize = 48;

/// A matrix of higher order is not multiplied without asking whether to go on.
const ASKED_FROM: usize = 16;

/// Rounds of epsilon-inflation before a root is given up.
const INFLATIONS: usize = 8;

/// The equations of one face, ready to be evaluated.
pub(super) struct Equations<'t> {
    pub(super) n: usize,
    numbers: GradientRun<'t, f64>,
    intervals: GradientRun<'t, Interval>,
    pub(super) residual: Residual<'t, Double>,
    /// Size of each variable, for what counts as nothing beside it.
    pub(super) scale: Vec<f64>,
    /// Asked on the way: the equations of a large community take long at one point.
    stop: &'t dyn Fn() -> bool,
}

/// A root that is proved to exist and to be the only one in `unique`.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Proved {
    /// Approximate root, as good as f64 gives it.
    pub(super) point: Vec<f64>,
    /// Holds the root.
    pub(super) enclosure: Region,
    /// Holds no other root.
    pub(super) unique: Region,
    /// No kink of min, max or abs is met in the enclosure.
    pub(super) smooth: bool,
}

/// Values and derivatives over a region.
pub(super) struct Linear {
    /// One a row.
    pub(super) values: Vec<Interval>,
    /// Row by row.
    pub(super) slopes: Vec<Interval>,
    pub(super) domain: Domain,
}

impl Linear {
    /// Nothing known: any value and any slope.
    fn unknown(n: usize) -> Self {
        let domain = Domain { defined: false, smooth: false };
        Self { values: vec![Interval::ENTIRE; n], slopes: vec![Interval::ENTIRE; n * n], domain }
    }
}

impl<'t> Equations<'t> {
    pub(super) fn new(tape: &'t Tape, parameters: &[f64], scale: Vec<f64>) -> Self {
        let exact: Vec<Interval> = parameters.iter().map(|&p| Interval::point(p)).collect();
        Self {
            n: tape.states(),
            numbers: tape.start_gradient(parameters),
            intervals: tape.start_gradient(&exact),
            residual: Residual::new(tape, parameters),
            scale,
            stop: &|| false,
        }
    }

    /// The same, but nothing is found or proved any more once `stop` says so.
    pub(super) fn until(self, stop: &'t dyn Fn() -> bool) -> Self {
        Self { stop, ..self }
    }

    pub(super) fn is_stopped(&self) -> bool {
        (self.stop)()
    }

    /// Values and derivatives over a region; not defined anywhere, as it were, where it was stopped.
    pub(super) fn linear(&mut self, region: &[Interval]) -> Linear {
        let Some(domain) = self.intervals.at_unless(region, self.stop) else { return Linear::unknown(self.n) };
        let n = self.n;
        let values = (0..n).map(|i| *self.intervals.output(i)).collect();
        let mut slopes = Vec::with_capacity(n * n);
        for i in 0..n {
            match self.intervals.gradient(i) {
                Some(row) => slopes.extend_from_slice(row),
                None => slopes.extend(std::iter::repeat_n(Interval::ZERO, n)),
            }
        }
        Linear { values, slopes, domain }
    }

    /// The Jacobian at a point, row by row; the values are then there too.
    pub(super) fn slopes_at(&mut self, point: &[f64]) -> Vec<f64> {
        self.numbers.at(point);
        let n = self.n;
        let mut slopes = Vec::with_capacity(n * n);
        for i in 0..n {
            match self.numbers.gradient(i) {
                Some(row) => slopes.extend_from_slice(row),
                None => slopes.extend(std::iter::repeat_n(0.0, n)),
            }
        }
        slopes
    }

    /// The values at the point last evaluated.
    pub(super) fn values(&self) -> Vec<f64> {
        (0..self.n).map(|i| *self.numbers.output(i)).collect()
    }

    /// An approximate root by Newton's method from `start`; with a leash, only where the iterates stay near that region.
    pub(super) fn approximate(&mut self, start: &[f64], leash: Option<&[Interval]>) -> Option<Vec<f64>> {
        let n = self.n;
        let mut x = start.to_vec();
        for _ in 0..STEPS {
            let slopes = self.slopes_at(&x);
            let inverse = inverse_unless(&slopes, n, self.stop)?;
            let mut largest = 0.0f64;
            for i in 0..n {
                let step: f64 = (0..n).map(|j| inverse[i * n + j] * self.numbers.output(j)).sum();
                x[i] -= step;
                // An absolute floor, or a component that is exactly 0 would never settle.
                largest = largest.max(step.abs() / x[i].abs().max(1e-10 * self.scale[i]));
            }
            if !x.iter().all(|v| v.is_finite()) || leash.is_some_and(|region| strays(&x, region)) {
                return None;
            }
            if largest < 4.0 * f64::EPSILON {
                return Some(x);
            }
            // Rounding may keep the last digit moving: as good as it gets.
            if largest < 1e-12 {
                return Some(self.polished(x));
            }
        }
        None
    }

    /// One more step; at this distance it squares the error away.
    fn polished(&mut self, mut x: Vec<f64>) -> Vec<f64> {
        let n = self.n;
        let slopes = self.slopes_at(&x);
        if let Some(inverse) = inverse(&slopes, n) {
            for i in 0..n {
                x[i] -= (0..n).map(|j| inverse[i * n + j] * self.numbers.output(j)).sum::<f64>();
            }
        }
        x
    }

    /// Proves a root beside an approximate one, and how far it is alone.
    pub(super) fn prove(&mut self, point: &[f64], around: &[Interval]) -> Option<Proved> {
        let inverse = inverse_unless(&self.slopes_at(point), self.n, self.stop)?;
        let exact: Region = point.iter().map(|&x| Interval::point(x)).collect();
        let at_point = self.linear(&exact);
        if !at_point.domain.defined {
            return None;
        }
        let shift = self.preconditioned(&inverse, &at_point.values);
        let mut radius: Vec<f64> =
            (0..self.n).map(|i| (2.0 * shift[i].mag()).max(2.0 * f64::EPSILON * point[i].abs()).max(1e-300)).collect();
        for _ in 0..INFLATIONS {
            let region = spread(point, &radius);
            // On an unbounded region being inside proves nothing.
            if !region.iter().all(|side| side.is_bounded()) {
                return None;
            }
            let image = self.krawczyk(point, &shift, &inverse, &region)?;
            if image.iter().zip(&region).all(|(image, region)| image.interior_of(*region)) {
                let found = self.linear(&image).domain;
                // The equations are defined on all of the region; not on its part means stopped.
                if !found.defined {
                    return None;
                }
                let alone = self.alone(point, &inverse, around);
                let wider = region.iter().zip(&alone).all(|(proved, alone)| proved.subset_of(*alone));
                let unique = if wider { alone } else { region };
                return Some(Proved { point: middle(&image, point), enclosure: image, unique, smooth: found.smooth });
            }
            for i in 0..self.n {
                let reach = (image[i] - Interval::point(point[i])).mag();
                radius[i] = (2.0 * reach).max(2.0 * radius[i]);
            }
        }
        None
    }

    /// K(X) = x − C f(x) + (I − C J(X)) (X − x); `None` where the equations are not defined on X.
    fn krawczyk(&mut self, point: &[f64], shift: &[Interval], inverse: &[f64], region: &[Interval]) -> Option<Region> {
        let n = self.n;
        let linear = self.linear(region);
        if !linear.domain.defined {
            return None;
        }
        let defect = self.defect(inverse, &linear.slopes);
        let image = (0..n).map(|i| {
            let spread: Interval = (0..n)
                .map(|j| defect[i * n + j] * (region[j] - Interval::point(point[j])))
                .fold(Interval::ZERO, |sum, part| sum + part);
            Interval::point(point[i]) - shift[i] + spread
        });
        Some(image.collect())
    }

    /// C v
    pub(super) fn preconditioned(&self, inverse: &[f64], values: &[Interval]) -> Vec<Interval> {
        let n = self.n;
        let row =
            |i: usize| (0..n).fold(Interval::ZERO, |sum, j| sum + Interval::point(inverse[i * n + j]) * values[j]);
        (0..n).map(row).collect()
    }

    /// C J; anything where it was stopped.
    fn product(&self, inverse: &[f64], slopes: &[Interval]) -> Vec<Interval> {
        let n = self.n;
        let mut product = Vec::with_capacity(n * n);
        for i in 0..n {
            // Asking costs as much as a row of a small matrix.
            if n > ASKED_FROM && self.is_stopped() {
                return vec![Interval::ENTIRE; n * n];
            }
            for j in 0..n {
                let entry = (0..n)
                    .filter(|&k| inverse[i * n + k] != 0.0)
                    .fold(Interval::ZERO, |sum, k| sum + Interval::point(inverse[i * n + k]) * slopes[k * n + j]);
                product.push(entry);
            }
        }
        product
    }

    /// I − C J
    pub(super) fn defect(&self, inverse: &[f64], slopes: &[Interval]) -> Vec<Interval> {
        let n = self.n;
        let mut defect = self.product(inverse, slopes);
        for (position, entry) in defect.iter_mut().enumerate() {
            let unit = if position % (n + 1) == 0 { Interval::ONE } else { Interval::ZERO };
            *entry = unit - *entry;
        }
        defect
    }

    /// A large region around a point in which there is at most one root: C J strictly diagonally dominant, weighted by the
    /// region's sides (then f is one-to-one there). Its sides are alike, each relative to its variable: a flat box would
    /// weigh the dominance away. Starts at twice each variable's size and halves.
    fn alone(&mut self, point: &[f64], inverse: &[f64], around: &[Interval]) -> Region {
        let n = self.n;
        let size = |i: usize| {
            let reach = (around[i] - Interval::point(point[i])).mag();
            let reach = if reach.is_finite() { reach } else { self.scale[i] };
            point[i].abs().max(reach).max(1e-10 * self.scale[i])
        };
        let mut radius: Vec<f64> = (0..n).map(|i| 2.0 * size(i)).collect();
        for _ in 0..HALVINGS {
            let region = spread(point, &radius);
            let linear = self.linear(&region);
            // What is proved so far stands; it is only not known how far the root is alone.
            if self.is_stopped() {
                break;
            }
            if linear.domain.defined {
                let defect = self.defect(inverse, &linear.slopes);
                let dominant = (0..n).all(|i| {
                    let row: f64 = (0..n).map(|j| defect[i * n + j].mag() * radius[j]).sum();
                    // The sum is rounded; the margin covers that.
                    row < 0.999_999 * radius[i]
                });
                if dominant {
                    return region;
                }
            }
            for r in &mut radius {
                *r *= 0.5;
            }
        }
        spread(point, &vec![0.0; n])
    }

    /// One interval Newton step; the region is cut in place.
    pub(super) fn cut(&mut self, region: &mut [Interval]) -> Cut {
        let n = self.n;
        let whole = self.linear(region);
        if whole.values.iter().any(|value| !value.contains_zero()) {
            return Cut::Empty;
        }
        let middle: Vec<f64> = region.iter().map(|side| side.mid()).collect();
        let centre: Vec<f64> = whole.slopes.iter().map(|slope| slope.mid()).collect();
        let bounded = whole.slopes.iter().all(|slope| slope.is_bounded());
        let exact: Region = middle.iter().map(|&x| Interval::point(x)).collect();
        let at_middle = if bounded { Some(self.linear(&exact)) } else { None };
        let at_middle = at_middle.filter(|linear| linear.domain.defined && whole.domain.defined);
        let (Some(at_middle), Some(inverse)) = (at_middle, inverse(&centre, n)) else {
            return Cut::Left { unique: false, slopes: whole.slopes };
        };
        let product = self.product(&inverse, &whole.slopes);
        let shift = self.preconditioned(&inverse, &at_middle.values);
        let mut inside = true;
        for i in 0..n {
            let mut rest = shift[i];
            for j in (0..n).filter(|&j| j != i) {
                rest += product[i * n + j] * (region[j] - Interval::point(middle[j]));
            }
            let (first, second) = (-rest).div_pieces(product[i * n + i]);
            let at = Interval::point(middle[i]);
            let old = region[i];
            let new =
                old.intersect(at + first).hull(second.map_or(Interval::EMPTY, |second| old.intersect(at + second)));
            if new.is_empty() {
                return Cut::Empty;
            }
            inside &= second.is_none() && old.is_bounded() && (at + first).interior_of(old);
            region[i] = new;
        }
        Cut::Left { unique: inside, slopes: whole.slopes }
    }
}

/// What an interval Newton step left of a region.
pub(super) enum Cut {
    /// No root was in it.
    Empty,
    /// What may hold roots; `unique` where exactly one is proved to be in it. `slopes` are those over the region before.
    Left { unique: bool, slopes: Vec<Interval> },
}

fn spread(point: &[f64], radius: &[f64]) -> Region {
    let side = |(&x, &r): (&f64, &f64)| Interval::point(x) + Interval::new(-r, r);
    point.iter().zip(radius).map(side).collect()
}

/// The middle of each side, unless the point itself is in it and as good.
fn middle(enclosure: &[Interval], point: &[f64]) -> Vec<f64> {
    enclosure.iter().zip(point).map(|(side, &x)| if side.contains(x) { x } else { side.mid() }).collect()
}

fn strays(x: &[f64], region: &[Interval]) -> bool {
    x.iter().zip(region).any(|(&x, side)| (x - side.mid()).abs() > LEASH * side.width())
}
