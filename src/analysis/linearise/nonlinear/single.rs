//! One eigenvalue on the border: 0, or for a map 1 or −1.
//!
//! With A q = λ q, Aᵀ p = λ p, p·q = 1, the flow on the centre manifold is u′ = a u² + b u³ + …, a = p·B(q, q)/2,
//! b = p·[C(q, q, q) + 3 B(q, h)]/6, (A − λ) h = −B(q, q) + 2a q; a map with λ = 1 adds the same to u. A map with λ = −1 is
//! u → −u + c u³ + …, c = p·C(q, q, q)/6 − p·B(q, (A − 1)⁻¹B(q, q))/2 (Kuznetsov 2004, ch. 5 and 8, from memory). Where an
//! absent species takes part in q only its positive side counts, and q is 1 in it: a is then what an invader adds to its own
//! growth per head, per head. Elsewhere q has length 1 in the model's units, its largest entry positive.

use nalgebra::Complex;

use super::complex::{Shifted, Vector, inner, quotient};
use super::forms::Forms;
use super::{Critical, by_sign, open};
use crate::analysis::linearise::place::Border;
use crate::analysis::linearise::{Nonlinear, Test, Verdict};
use crate::num::interval::Interval;

/// What the centre manifold is along, and which way out of it counts.
struct Direction {
    q: Vector,
    p: Vector,
    /// What ⟨w, q⟩ = 1 and the adjoint's are bordered with.
    border: [Vec<Complex<f64>>; 2],
    sides: Sides,
}

/// Which sides of the equilibrium have no abundance below 0.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Sides {
    Both,
    Positive,
    /// Neither, or not known.
    Unknown,
}

pub(super) fn judge(critical: &Critical<'_>) -> Nonlinear {
    let flips = critical.border == Border::Circle
        && critical.class.critical.first().is_some_and(|&k| critical.spectrum.values[k].re < 0.0);
    let Some(direction) = Direction::of(critical, flips) else {
        // More than one direction is critical.
        let invaded = (0..critical.order()).any(|i| !critical.equilibrium.has(i) && takes_part(critical, i));
        return open(if flips { Test::Flip } else { quadratic_test(invaded) }, None);
    };
    let mut forms = critical.forms();
    let found = if flips { flip(critical, &direction, &mut forms) } else { steady(critical, &direction, &mut forms) };
    found.unwrap_or_else(|| open(if flips { Test::Flip } else { direction.quadratic_test() }, None))
}

fn shifted<'c>(critical: &'c Critical<'_>, shift: f64) -> Shifted<'c> {
    Shifted { matrix: critical.enclosure, n: critical.order(), shift: [Interval::point(shift), Interval::ZERO] }
}

/// What the quadratic coefficient is called, with or without an absent species in it.
fn quadratic_test(invaded: bool) -> Test {
    if invaded { Test::Transcritical } else { Test::Fold }
}

/// The critical eigenvalue of a flow, or multiplier that does not flip.
fn steady_value(critical: &Critical<'_>) -> f64 {
    if critical.border == Border::Axis { 0.0 } else { 1.0 }
}

impl Direction {
    fn of(critical: &Critical<'_>, flips: bool) -> Option<Self> {
        let n = critical.order();
        let [left, mut right] = critical.vectors()?;
        let absent = |i: usize| !critical.equilibrium.has(i);
        // An absent species that takes part is the measure of q, and only its positive side counts.
        let invader = (0..n).filter(|&i| absent(i)).max_by(|&i, &j| right[i].re.abs().total_cmp(&right[j].re.abs()));
        let invader = invader.filter(|&i| right[i].re != 0.0 && takes_part(critical, i));
        if let Some(i) = invader {
            right = (0..n).map(|j| Complex::new(if i == j { 1.0 } else { 0.0 }, 0.0)).collect();
        }
        let at_value = shifted(critical, if flips { -1.0 } else { steady_value(critical) });
        let nothing = Vector::real(vec![Interval::ZERO; n]);
        let mut q = at_value.bordered([&left, &right], &nothing, 1.0, false)?;
        let p = at_value.bordered([&left, &right], &nothing, 1.0, true)?;
        for i in (0..n).filter(|&i| absent(i) && stays_out(&at_value, i)) {
            q.re[i] = Interval::ZERO;
        }
        let at_border: Vec<Interval> = (0..n).filter(|&i| absent(i)).map(|i| q.re[i]).collect();
        let sides = if at_border.iter().all(|q| *q == Interval::ZERO) {
            Sides::Both
        } else if at_border.iter().all(|q| *q == Interval::ZERO || q.positive()) {
            Sides::Positive
        } else {
            Sides::Unknown
        };
        Some(Self { q, p, border: [left, right], sides })
    }

    fn quadratic_test(&self) -> Test {
        quadratic_test(self.sides != Sides::Both)
    }

    /// p·v/p·q; with a defective eigenvalue, where p·q = 0, p·v itself.
    fn coordinate(&self, v: &[Interval]) -> Interval {
        let along = inner(&self.p, &Vector::real(v.to_vec()));
        quotient(along, inner(&self.p, &self.q)).map_or(along[0], |[re, _]| re)
    }
}

impl Direction {
    /// The coordinate of a + s b along the direction, and the sum of the sizes of what goes into it.
    fn sum(&self, a: &[Interval], b: &[Interval], s: f64) -> (Interval, f64) {
        let sum: Vec<Interval> = a.iter().zip(b).map(|(&a, &b)| a + Interval::point(s) * b).collect();
        let along = inner(&self.p, &Vector::real(self.q.re.clone()))[0].mid().abs();
        let sizes = a.iter().zip(b).zip(&self.p.re).map(|((a, b), p)| (a.mag() + b.mag()) * p.mag());
        let terms = sizes.sum::<f64>() / if along > 0.0 { along } else { 1.0 };
        (self.coordinate(&sum), terms)
    }
}

/// Whether an absent species may be part of a critical eigenvector.
fn takes_part(critical: &Critical<'_>, i: usize) -> bool {
    !stays_out(&shifted(critical, steady_value(critical)), i)
}

/// Whether row i of A − λ has nothing beside its diagonal, which is not 0: then no eigenvector holds species i.
fn stays_out(shifted: &Shifted<'_>, i: usize) -> bool {
    let row = &shifted.matrix[i * shifted.n..(i + 1) * shifted.n];
    let alone = (0..shifted.n).all(|j| j == i || row[j] == Interval::ZERO);
    alone && !(row[i] - shifted.shift[0]).contains_zero()
}

fn steady(critical: &Critical<'_>, direction: &Direction, forms: &mut Forms<'_>) -> Option<Nonlinear> {
    let [second, third] = forms.along(&direction.q.re)?;
    let quadratic = direction.coordinate(&second);
    let proven = critical.is_proven();
    if direction.sides == Sides::Unknown {
        return Some(open(Test::Transcritical, Some(quadratic.mid())));
    }
    if !quadratic.contains_zero() {
        let test = direction.quadratic_test();
        if direction.sides == Sides::Positive {
            return Some(by_sign(quadratic, test, proven));
        }
        return Some(Nonlinear { verdict: Verdict::SemiStable, test, coefficient: quadratic.mid(), proven });
    }
    let (cubic, _) = cubic(critical, direction, forms, [&second, &third])?;
    let symmetric = direction.sides == Sides::Both && is_symmetric(critical, &direction.q);
    let test = if symmetric { Test::Pitchfork } else { Test::Cusp };
    Some(by_sign(cubic, test, proven && quadratic == Interval::ZERO))
}

/// b, with the sum of the sizes of its terms, from the second and third derivatives along q.
fn cubic(
    critical: &Critical<'_>,
    direction: &Direction,
    forms: &mut Forms<'_>,
    [second, third]: [&[Interval]; 2],
) -> Option<(Interval, f64)> {
    let bend = bend(critical, direction, second, direction.coordinate(second))?;
    let mixed: Vec<Interval> =
        forms.quadratic(&direction.q, &bend)?.re.iter().map(|&mixed| mixed * Interval::point(0.5)).collect();
    Some(direction.sum(third, &mixed, 1.0))
}

/// The cubic coefficient whatever the quadratic one is, with the sum of the sizes of its terms; `None` where a species may
/// not go to both sides.
pub(super) fn cubic_with_size(critical: &Critical<'_>) -> Option<(Interval, f64)> {
    let direction = Direction::of(critical, false).filter(|direction| direction.sides == Sides::Both)?;
    let mut forms = critical.forms();
    let [second, third] = forms.along(&direction.q.re)?;
    cubic(critical, &direction, &mut forms, [&second, &third])
}

/// The coefficient of a multiplier −1, with the sum of the sizes of its terms; `None` where a species may not go to both
/// sides.
pub(super) fn flip_with_size(critical: &Critical<'_>) -> Option<(Interval, f64)> {
    let direction = Direction::of(critical, true).filter(|direction| direction.sides == Sides::Both)?;
    flip_coefficient(critical, &direction, &mut critical.forms())
}

/// h of the centre manifold x = u q + u² h/2.
fn bend(critical: &Critical<'_>, direction: &Direction, second: &[Interval], quadratic: Interval) -> Option<Vector> {
    let two = Interval::point(2.0);
    let right = second.iter().zip(&direction.q.re).map(|(&second, &q)| two * (quadratic * q - second)).collect();
    let [left, near] = &direction.border;
    let at_value = shifted(critical, steady_value(critical));
    at_value.bordered([left, near], &Vector::real(right), 0.0, false)
}

fn flip(critical: &Critical<'_>, direction: &Direction, forms: &mut Forms<'_>) -> Option<Nonlinear> {
    let (coefficient, _) = flip_coefficient(critical, direction, forms)?;
    if direction.sides != Sides::Both {
        return Some(open(Test::Flip, Some(coefficient.mid())));
    }
    // Here a positive coefficient attracts.
    let mirrored = by_sign(-coefficient, Test::Flip, critical.is_proven());
    Some(Nonlinear { coefficient: coefficient.mid(), ..mirrored })
}

/// c, with the sum of the sizes of its terms.
fn flip_coefficient(critical: &Critical<'_>, direction: &Direction, forms: &mut Forms<'_>) -> Option<(Interval, f64)> {
    let [second, third] = forms.along(&direction.q.re)?;
    let bend = shifted(critical, 1.0).solve(&Vector::real(second))?;
    // (A − 1)⁻¹B(q, q) is twice that.
    let mixed = forms.quadratic(&direction.q, &bend)?;
    Some(direction.sum(&third, &mixed.re, -1.0))
}

/// How nearly symmetric numbers must be to be taken for it, relative to their size.
const SYMMETRIC: f64 = 1e-9;

/// Whether exchanging the species that q moves against each other leaves state and equations as they are; tried at some
/// states around, for it only chooses a word.
fn is_symmetric(critical: &Critical<'_>, q: &Vector) -> bool {
    let n = critical.order();
    let state = &critical.equilibrium.state;
    let q: Vec<f64> = q.re.iter().map(|q| q.mid()).collect();
    let largest = q.iter().fold(0.0f64, |most, q| most.max(q.abs()));
    let near = |a: f64, b: f64, size: f64| (a - b).abs() <= SYMMETRIC * size;
    let mut partner: Vec<usize> = (0..n).collect();
    for i in (0..n).filter(|&i| q[i].abs() > SYMMETRIC * largest) {
        let other = (0..n).find(|&j| near(q[i], -q[j], largest) && near(state[i], state[j], state[i].abs()));
        match other {
            Some(j) => partner[i] = j,
            None => return false,
        }
    }
    let mut run = critical.rows.whole.start(&critical.rows.values);
    let mut rows = |x: &[f64]| {
        run.at(x);
        run.outputs().copied().collect::<Vec<f64>>()
    };
    (1..=3).all(|k| {
        let moved: Vec<f64> = (0..n).map(|i| state[i] * (1.0 + 0.01 * f64::from(k) / (i + 1) as f64)).collect();
        let exchanged: Vec<f64> = (0..n).map(|i| moved[partner[i]]).collect();
        let [here, there] = [rows(&moved), rows(&exchanged)];
        let size = here.iter().fold(0.0f64, |most, rate| most.max(rate.abs()));
        (0..n).all(|i| near(there[i], here[partner[i]], size))
    })
}
