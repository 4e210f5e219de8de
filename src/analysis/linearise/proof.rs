//! What is proved of the eigenvalues of a Jacobian between bounds.
//!
//! Species that do not feed back on each other fall into blocks of their own (strongly connected components of the nonzero
//! entries), whose eigenvalues together are the matrix's. Blocks of one and two species are decided in closed form, those
//! of three also where they lie exactly on the border, larger ones by `num::verified`.

use super::place::{Border, Place, Shape, Side};
use super::planar::{Planar, axis_sides};
use crate::num::dense::block;
use crate::num::eigen::strongly_connected;
use crate::num::interval::Interval;
use crate::num::verified::{self, Disc};

/// What is proved.
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Proof {
    /// At least so many attract.
    pub(super) below: usize,
    /// At least so many lie on the border itself.
    pub(super) critical: usize,
    /// At least so many repel.
    pub(super) above: usize,
    /// Places that together hold all eigenvalues, each at least one; `None` where that is not known.
    places: Option<Vec<Place>>,
    /// The pair that is proved to lie on the border, where there is one.
    pub(super) critical_pair: Option<Place>,
}

impl Proof {
    /// Of a matrix of order `n` between bounds, row by row.
    pub(super) fn of(matrix: &[Interval], n: usize, border: Border) -> Self {
        let mut proof = Self { places: Some(Vec::new()), ..Self::default() };
        for part in strongly_connected(n, |i, j| matrix[i * n + j] != Interval::ZERO) {
            proof.add_block(&block(matrix, n, &part), part.len(), border);
        }
        proof
    }

    /// Of the model as written, with what is exactly critical from the f64 numbers: two enclosures of the Jacobian of order
    /// `n`, row by row, the first of which holds the second.
    pub(super) fn as_written(written: &[Interval], exact: &[Interval], n: usize, border: Border) -> Self {
        let proof = Self::of(written, n, border);
        if proof.below + proof.above == n {
            return proof;
        }
        let Self { critical, critical_pair, .. } = Self::of(exact, n, border);
        Self { critical, critical_pair, ..proof }
    }

    fn add_block(&mut self, block: &[Interval], m: usize, border: Border) {
        match *block {
            [a] => {
                let place = Place::real(a);
                self.count([place.side(border)]);
                self.hold([place]);
            }
            [a, b, c, d] => self.add_planar(&Planar { a, b, c, d }, border),
            _ => self.add_large(block, m, border),
        }
    }

    fn add_planar(&mut self, planar: &Planar, border: Border) {
        let sides = planar.sides(border);
        self.count(sides);
        let places = planar.places(border);
        if let ([place], [Side::Critical, Side::Critical]) = (&places[..], sides)
            && place.shape == Shape::Pair
        {
            self.critical_pair = Some(*place);
        }
        self.hold(places);
    }

    fn add_large(&mut self, block: &[Interval], m: usize, border: Border) {
        let counts = match border {
            Border::Axis => verified::half_plane(block, m),
            Border::Circle => verified::unit_circle(block, m),
        };
        let counts = counts.unwrap_or_default();
        if counts.below + counts.above < m && m == 3 && border == Border::Axis && self.add_cubic(block) {
            // Decided exactly, which bounds cannot do.
        } else {
            self.below += counts.below;
            self.above += counts.above;
        }
        match verified::discs(block, m) {
            Some(discs) => self.hold(clusters(&discs)),
            None => self.places = None,
        }
    }

    /// λ³ + c₁ λ² + c₂ λ + c₃ exactly on the border: c₃ = 0 leaves a quadratic, c₁ c₂ = c₃ with c₂ > 0 a pair ±i√c₂ and −c₁
    /// (Hurwitz 1895).
    fn add_cubic(&mut self, block: &[Interval]) -> bool {
        let [trace, minors, determinant] = invariants(block);
        if determinant == Interval::ZERO {
            self.count([Side::Critical]);
            self.count(axis_sides(trace, minors));
            true
        } else if trace * minors == determinant && determinant.is_point() && minors.lo() > 0.0 {
            let third = Place::real(trace).side(Border::Axis);
            self.count([Side::Critical, Side::Critical, third]);
            let im = super::place::square_root(minors);
            self.critical_pair = Some(Place { re: Interval::ZERO, im, shape: Shape::Pair });
            true
        } else {
            false
        }
    }

    fn count(&mut self, sides: impl IntoIterator<Item = Side>) {
        for side in sides {
            match side {
                Side::Below => self.below += 1,
                Side::Critical => self.critical += 1,
                Side::Above => self.above += 1,
                Side::Unknown => {}
            }
        }
    }

    fn hold(&mut self, more: impl IntoIterator<Item = Place>) {
        if let Some(places) = &mut self.places {
            places.extend(more);
        }
    }

    /// Whether the leading eigenvalues, those of largest real part or modulus, are proved to be real or a pair.
    pub(super) fn leading(&self, border: Border) -> Shape {
        let Some(places) = &self.places else { return Shape::Unknown };
        // The largest is at least as large as the lower bound of any.
        let reach = |shape| {
            let of_shape = places.iter().filter(|place| place.shape == shape);
            of_shape.map(|place| place.size(border).lo()).fold(f64::NEG_INFINITY, f64::max)
        };
        let most = |but| {
            let others = places.iter().filter(|place| place.shape != but);
            others.map(|place| place.size(border).hi()).fold(f64::NEG_INFINITY, f64::max)
        };
        let leads = |shape: &Shape| reach(*shape) > most(*shape);
        [Shape::Real, Shape::Pair].into_iter().find(leads).unwrap_or(Shape::Unknown)
    }
}

/// One place for each cluster.
fn clusters(discs: &[Disc]) -> Vec<Place> {
    let clusters = discs.iter().map(|disc| disc.cluster + 1).max().unwrap_or(0);
    let members = |k| discs.iter().filter(|disc| disc.cluster == k).copied().collect::<Vec<Disc>>();
    (0..clusters).map(members).filter(|members| !members.is_empty()).map(|members| Place::cluster(&members)).collect()
}

/// Trace, sum of the principal minors of order two, and determinant of a matrix of order three.
fn invariants(m: &[Interval]) -> [Interval; 3] {
    let minor = |i: usize, j: usize, k: usize, l: usize| m[i] * m[l] - m[j] * m[k];
    let trace = m[0] + m[4] + m[8];
    let minors = minor(0, 1, 3, 4) + minor(0, 2, 6, 8) + minor(4, 5, 7, 8);
    let determinant = m[0] * minor(4, 5, 7, 8) - m[1] * minor(3, 5, 6, 8) + m[2] * minor(3, 4, 6, 7);
    [trace, minors, determinant]
}
