//! Second and third derivatives of the equations as multilinear forms, enclosed.
//!
//! With f(x + t w) = f + t f′ + t² c₂(w) + t³ c₃(w) + …: B(w, w) = 2 c₂(w), C(w, w, w) = 6 c₃(w). Mixed ones by
//! polarisation: B(u, v) = [c₂(u + v) − c₂(u − v)]/2 and C(u, u, v) = c₃(u + v) − c₃(u − v) − 2 c₃(v).

use crate::analysis::linearise::jacobian::Bounds;
use crate::expr::tape::Tape;
use crate::expr::tape::jet::Jet;
use crate::expr::tape::number::Domain;
use crate::expr::tape::run::Run;
use crate::num::interval::Interval;

use super::complex::{Vector, combined};

/// c₂(w) and c₃(w), one entry an equation.
type Along = Option<[Vec<Interval>; 2]>;

/// Gives them for any direction, over whichever numbers.
type Derivatives<'t> = dyn FnMut(&[Interval]) -> Along + 't;

/// Derivatives of some equations at a point between bounds.
pub(super) struct Forms<'t> {
    along: Box<Derivatives<'t>>,
}

impl<'t> Forms<'t> {
    pub(super) fn new<T: Bounds + 't>(tape: &'t Tape, parameters: &[T], at: &'t [Interval]) -> Self {
        let still = |value: &T| Jet::line(value.clone(), T::constant(0.0));
        let mut run = tape.start(&parameters.iter().map(still).collect::<Vec<_>>());
        Self { along: Box::new(move |w| along(&mut run, at, w)) }
    }

    /// c₂(w) and c₃(w), one entry an equation; `None` where the equations are not as smooth as that.
    pub(super) fn along(&mut self, w: &[Interval]) -> Along {
        (self.along)(w)
    }

    /// B(u, v)
    fn second(&mut self, u: &[Interval], v: &[Interval]) -> Option<Vec<Interval>> {
        let [plus, _] = self.along(&combined(u, v, 1.0))?;
        let [minus, _] = self.along(&combined(u, v, -1.0))?;
        let half = Interval::point(0.5);
        Some(plus.iter().zip(&minus).map(|(plus, minus)| half * (*plus - *minus)).collect())
    }

    /// C(u, u, v)
    fn third(&mut self, u: &[Interval], v: &[Interval]) -> Option<Vec<Interval>> {
        let [_, plus] = self.along(&combined(u, v, 1.0))?;
        let [_, minus] = self.along(&combined(u, v, -1.0))?;
        let [_, own] = self.along(v)?;
        let two = Interval::point(2.0);
        Some((0..plus.len()).map(|i| plus[i] - minus[i] - two * own[i]).collect())
    }

    /// B(u, v) of complex vectors: by real and imaginary parts.
    pub(super) fn quadratic(&mut self, u: &Vector, v: &Vector) -> Option<Vector> {
        let [rr, ss] = [self.second(&u.re, &v.re)?, self.second(&u.im, &v.im)?];
        let [rs, sr] = [self.second(&u.re, &v.im)?, self.second(&u.im, &v.re)?];
        Some(Vector { re: combined(&rr, &ss, -1.0), im: combined(&rs, &sr, 1.0) })
    }

    /// C(q, q, q̄), q = r + is: C(r, r, r) + C(s, s, r) + i [C(r, r, s) + C(s, s, s)].
    pub(super) fn cubic(&mut self, q: &Vector) -> Option<Vector> {
        let [rrr, ssr] = [self.third(&q.re, &q.re)?, self.third(&q.im, &q.re)?];
        let [rrs, sss] = [self.third(&q.re, &q.im)?, self.third(&q.im, &q.im)?];
        Some(Vector { re: combined(&rrr, &ssr, 1.0), im: combined(&rrs, &sss, 1.0) })
    }
}

fn along<T: Bounds>(run: &mut Run<'_, Jet<T>>, at: &[Interval], w: &[Interval]) -> Along {
    let line: Vec<Jet<T>> = at.iter().zip(w).map(|(&x, &w)| Jet::line(T::around(x), T::around(w))).collect();
    let domain = run.at(&line);
    let order = |k: usize| run.outputs().map(|jet| jet.0[k].bounds()).collect::<Vec<_>>();
    let found = [order(2), order(3)];
    let bounded = found.iter().flatten().all(|side| side.is_bounded());
    (domain == Domain::CLEAN && bounded).then_some(found)
}
