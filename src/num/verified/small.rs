//! Blocks of order one, and of order two and three from the coefficients of their characteristic polynomial.
//!
//! Routh (1877) and Hurwitz (1895) count roots on each side of the axis by signs of the first column of Routh's array; the
//! unit circle is brought to the axis by z = (1 + w)/(1 − w), which gives the conditions of Jury (1974). In bounds, so a sign
//! is taken only where all matrices share it.

use nalgebra::Complex;

use super::discs::Disc;
use super::{Border, Counts};
use crate::num::interval::Interval;

/// Counts for a block of order one to three; `None` for others and where a sign is open.
pub(super) fn counts(entries: &[Interval], border: Border) -> Option<Counts> {
    match *entries {
        [a] => of_one(a, border),
        [a, b, c, d] => of_two([a, b, c, d], border),
        [_, _, _, _, _, _, _, _, _] => of_three(entries, border),
        _ => None,
    }
}

fn of_one(a: Interval, border: Border) -> Option<Counts> {
    let beyond = match border {
        Border::Axis => a,
        Border::Circle => a.abs() - Interval::ONE,
    };
    let above = usize::from(sign(beyond)? > 0);
    Some(Counts { below: 1 - above, above })
}

/// Roots of x w² + y w + z.
fn of_two([a, b, c, d]: [Interval; 4], border: Border) -> Option<Counts> {
    // Each entry stands once in each of these, so that their bounds are the range.
    let determinant = a * d - b * c;
    let at = |z: f64| (Interval::point(z) - a) * (Interval::point(z) - d) - b * c;
    let [x, y, z] = match border {
        Border::Axis => [Interval::ONE, -(a + d), determinant],
        Border::Circle => [at(-1.0), Interval::ONE - determinant, at(1.0)],
    };
    match (sign(x)?, sign(z)?) {
        (first, last) if first != last => Some(Counts { below: 1, above: 1 }),
        (first, _) if sign(y)? == first => Some(Counts { below: 2, above: 0 }),
        _ => Some(Counts { below: 0, above: 2 }),
    }
}

/// Roots of k₃ w³ + k₂ w² + k₁ w + k₀.
fn of_three(entries: &[Interval], border: Border) -> Option<Counts> {
    let a = |i: usize, j: usize| entries[3 * i + j];
    let minor = |i: usize, j: usize, k: usize, l: usize| a(i, k) * a(j, l) - a(i, l) * a(j, k);
    let two = -(a(0, 0) + a(1, 1) + a(2, 2));
    let one = minor(0, 1, 0, 1) + minor(0, 2, 0, 2) + minor(1, 2, 1, 2);
    let zero = -(a(0, 0) * minor(1, 2, 1, 2) - a(0, 1) * minor(1, 2, 0, 2) + a(0, 2) * minor(1, 2, 0, 1));
    let three = Interval::point(3.0);
    let k = match border {
        Border::Axis => [Interval::ONE, two, one, zero],
        Border::Circle => [
            Interval::ONE - two + one - zero,
            three - two - one + three * zero,
            three + two - one - three * zero,
            Interval::ONE + two + one + zero,
        ],
    };
    let column = [sign(k[0])?, sign(k[1])?, sign(k[1] * k[2] - k[0] * k[3])? * sign(k[1])?, sign(k[3])?];
    let above = column.windows(2).filter(|pair| pair[0] != pair[1]).count();
    Some(Counts { below: 3 - above, above })
}

/// 1 or −1 where no other sign, and no zero, is possible.
fn sign(x: Interval) -> Option<i8> {
    if x.lo() > 0.0 {
        Some(1)
    } else if x.hi() < 0.0 {
        Some(-1)
    } else {
        None
    }
}

/// Discs of a block of order two by the closed form, where its discriminant has a sign: then each holds one eigenvalue.
pub(super) fn discs_of_two(&[a, b, c, d]: &[Interval; 4]) -> Option<[Disc; 2]> {
    let half = Interval::point(0.5);
    let middle = (a + d) * half;
    let difference = (a - d) * half;
    let square = difference.abs() * difference.abs();
    let discriminant = square + b * c;
    let turn = discriminant.abs().sqrt(&mut true);
    let [re, im] = match sign(discriminant)? {
        1 => [[middle + turn, middle - turn], [Interval::ZERO; 2]],
        _ => [[middle; 2], [turn, -turn]],
    };
    let disc = |k: usize| {
        let centre = Complex::new(re[k].mid(), im[k].mid());
        let radius = (Interval::point(re[k].radius()) + Interval::point(im[k].radius())).hi();
        Disc { centre, radius, cluster: k, held: 1 }
    };
    let found = [disc(0), disc(1)];
    let bounded = [re[0], re[1], im[0], im[1]].iter().all(|side| side.is_bounded());
    (bounded && !found[0].touches(&found[1])).then_some(found)
}
