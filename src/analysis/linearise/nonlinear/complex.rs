//! Complex vectors between bounds, and linear systems for them.

use nalgebra::Complex;

use crate::num::interval::Interval;
use crate::num::solve::solve;

/// A complex number between bounds: real and imaginary part.
pub(super) type Scalar = [Interval; 2];

/// A complex vector between bounds.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Vector {
    pub(super) re: Vec<Interval>,
    pub(super) im: Vec<Interval>,
}

impl Vector {
    pub(super) fn real(re: Vec<Interval>) -> Self {
        let im = vec![Interval::ZERO; re.len()];
        Self { re, im }
    }

    pub(super) fn conjugate(&self) -> Self {
        Self { re: self.re.clone(), im: self.im.iter().map(|&s| -s).collect() }
    }
}

/// a + c b
pub(super) fn combined(a: &[Interval], b: &[Interval], c: f64) -> Vec<Interval> {
    a.iter().zip(b).map(|(&a, &b)| a + Interval::point(c) * b).collect()
}

/// ⟨p, v⟩ = Σ p̄ v
pub(super) fn inner(p: &Vector, v: &Vector) -> Scalar {
    let mut sum = [Interval::ZERO; 2];
    for i in 0..p.re.len() {
        let [a, b, c, d] = [p.re[i], p.im[i], v.re[i], v.im[i]];
        sum[0] += a * c + b * d;
        sum[1] += a * d - b * c;
    }
    sum
}

/// a b
pub(super) fn product(a: Scalar, b: Scalar) -> Scalar {
    [a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]]
}

/// a/b; `None` where b may be 0.
pub(super) fn quotient(a: Scalar, b: Scalar) -> Option<Scalar> {
    let size = b[0] * b[0] + b[1] * b[1];
    let size = size.intersect(Interval::NONNEGATIVE);
    let [re, im] = product(a, [b[0], -b[1]]);
    let mut defined = true;
    let found = [re.div(size, &mut defined), im.div(size, &mut defined)];
    defined.then_some(found)
}

/// A real matrix between bounds, less λ on its diagonal.
pub(super) struct Shifted<'m> {
    pub(super) matrix: &'m [Interval],
    pub(super) n: usize,
    pub(super) shift: Scalar,
}

impl Shifted<'_> {
    fn entry(&self, i: usize, j: usize) -> Scalar {
        let own = self.matrix[i * self.n + j];
        if i == j { [own - self.shift[0], -self.shift[1]] } else { [own, Interval::ZERO] }
    }

    /// The solution x of (A − λ) x = b; `None` where regularity is not proved.
    pub(super) fn solve(&self, right: &Vector) -> Option<Vector> {
        let n = self.n;
        let entries: Vec<Scalar> = (0..n * n).map(|k| self.entry(k / n, k % n)).collect();
        solved(&entries, right)
    }

    /// The solution x of (A − λ) x + s v = b, ⟨w, x⟩ = c, where A − λ has a kernel of one dimension, w is near it and v
    /// near that of the adjoint: with such a border it is regular (Keller 1977). With `adjoint`, of its conjugate
    /// transpose, v and w exchanged.
    pub(super) fn bordered(
        &self,
        border: [&[Complex<f64>]; 2],
        right: &Vector,
        c: f64,
        adjoint: bool,
    ) -> Option<Vector> {
        let (n, m) = (self.n, self.n + 1);
        let [v, w] = if adjoint { [border[1], border[0]] } else { border };
        let point = |z: Complex<f64>| [Interval::point(z.re), Interval::point(z.im)];
        let conjugate = |[re, im]: Scalar| [re, -im];
        let entry = |k: usize| match (k / m, k % m) {
            (i, j) if i < n && j < n && adjoint => conjugate(self.entry(j, i)),
            (i, j) if i < n && j < n => self.entry(i, j),
            (i, _) if i < n => point(v[i]),
            (_, j) if j < n => conjugate(point(w[j])),
            _ => [Interval::ZERO; 2],
        };
        let entries: Vec<Scalar> = (0..m * m).map(entry).collect();
        let mut right = right.clone();
        right.re.push(Interval::point(c));
        right.im.push(Interval::ZERO);
        let mut solution = solved(&entries, &right)?;
        solution.re.pop();
        solution.im.pop();
        Some(solution)
    }
}

/// M x = b as a real system of twice the order, or of the same where all is real.
fn solved(entries: &[Scalar], right: &Vector) -> Option<Vector> {
    let n = right.re.len();
    let is_real =
        entries.iter().all(|entry| entry[1] == Interval::ZERO) && right.im.iter().all(|b| *b == Interval::ZERO);
    let re = entries.iter().map(|entry| entry[0]);
    if is_real {
        return Some(Vector::real(solve(&re.collect::<Vec<_>>(), &right.re, &|| false)?));
    }
    let m = 2 * n;
    let real = |k: usize| {
        let (i, j) = (k / m, k % m);
        let [re, im] = entries[(i % n) * n + j % n];
        match (i < n, j < n) {
            (true, false) => -im,
            (false, true) => im,
            _ => re,
        }
    };
    let matrix: Vec<Interval> = (0..m * m).map(real).collect();
    let right: Vec<Interval> = right.re.iter().chain(&right.im).copied().collect();
    let mut solution = solve(&matrix, &right, &|| false)?;
    let im = solution.split_off(n);
    Some(Vector { re: solution, im })
}
