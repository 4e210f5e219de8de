//! Whether the picture has every equilibrium, proved over abundances and the control together.
//!
//! On each face the box of abundances times the range of the control is cut into parts (interval branch and prune; Neumaier
//! 1990). A part is done where the rows have no zero in it, or where they have exactly one for each value of one coordinate
//! (Krawczyk's operator with that coordinate as an interval; Rump 2010) and the curve that this is was followed. The
//! coordinate need not be the control, so a part with a fold in it can be done. A curve that is on no branch is followed
//! then and there. What is left when parts are small, or too many, is a gap.

use super::equations::Face;
use super::picture::{Picture, Start};
use super::{Gap, GapReason};
use crate::expr::tape::Tape;
use crate::expr::tape::gradient::GradientRun;
use crate::expr::tape::number::Domain;
use crate::expr::tape::run::Run;
use crate::num::dense::inverse;
use crate::num::interval::Interval;

/// Species beyond which faces are too many, and parts too.
const MOST_SPECIES: usize = 6;
/// Parts looked at, on all faces together: where this is not enough, twice as many have not been either.
const MOST_PARTS: usize = 6_000;
/// A part is not cut further when each side is this share of the whole.
const SMALLEST: f64 = 1e-6;
/// Newton steps to the curve in the middle of a part.
const STEPS: usize = 12;
/// A part's sides are widened by this share of what the curve needs, so that it cannot leave through them.
const ROOM: f64 = 0.3;
/// An abundance this share of the box from 0 may be that of one who is absent.
const ABSENT: f64 = 1e-10;
/// Gaps nearer to each other than this share of the range are one.
const TOGETHER: f64 = 1e-5;

type Part = Vec<Interval>;

/// Proves what can be proved, follows what is found on the way, and gives what is left.
pub(super) fn cover(picture: &mut Picture<'_>, parts: usize) -> Vec<Gap> {
    let n = picture.equations.species;
    let range = Interval::new(picture.control.from, picture.control.to);
    if n > MOST_SPECIES {
        return vec![gap(range, GapReason::Budget)];
    }
    let mut left = parts.min(MOST_PARTS);
    let mut gaps = Vec::new();
    for face in faces(picture) {
        let rows = Tape::over(&picture.equations.graph, &face.rows, &picture.equations.inputs(&face));
        let mut cover = Cover::new(picture, &face, &rows);
        cover.run(picture, &mut left);
        gaps.append(&mut cover.gaps);
    }
    merged(gaps, range.width())
}

/// Every face that the box reaches, each once.
fn faces(picture: &mut Picture<'_>) -> Vec<Face> {
    let n = picture.equations.species;
    let mut seen: Vec<Vec<bool>> = Vec::new();
    let mut faces = Vec::new();
    for set in 0..1u32 << n {
        let present: Vec<bool> = (0..n).map(|i| set >> i & 1 == 1).collect();
        let Some(moving) = picture.pieces.moving(picture.equations, &present) else { continue };
        let is_reached = (0..n).all(|i| moving[i] || picture.equations.sides[i][0] <= 0.0);
        if is_reached && !seen.contains(&moving) {
            faces.extend(picture.equations.face(&moving));
            seen.push(moving);
        }
    }
    faces
}

struct Cover<'t> {
    face: &'t Face,
    numbers: GradientRun<'t, f64>,
    intervals: GradientRun<'t, Interval>,
    /// The same without slopes, which most parts do not need.
    plain: Run<'t, Interval>,
    whole: Part,
    gaps: Vec<Gap>,
}

/// What is known of a part.
enum Verdict {
    Empty,
    /// One curve, which passes through this point.
    Curve(Vec<f64>),
    Open {
        domain: Domain,
        along: usize,
    },
}

impl<'t> Cover<'t> {
    fn new(picture: &Picture<'_>, face: &'t Face, rows: &'t Tape) -> Self {
        let exact: Vec<Interval> = picture.equations.values.iter().map(|&value| Interval::point(value)).collect();
        let side = |&i: &usize| Interval::new(picture.equations.sides[i][0], picture.equations.sides[i][1]);
        let range = Interval::new(picture.control.from, picture.control.to);
        Self {
            face,
            numbers: rows.start_gradient(&picture.equations.values),
            intervals: rows.start_gradient(&exact),
            plain: rows.start(&exact),
            whole: face.moving.iter().map(side).chain([range]).collect(),
            gaps: Vec::new(),
        }
    }

    fn m(&self) -> usize {
        self.face.moving.len()
    }

    fn run(&mut self, picture: &mut Picture<'_>, left: &mut usize) {
        let mut stack = vec![self.whole.clone()];
        while let Some(part) = stack.pop() {
            if *left == 0 || (picture.stop)() {
                self.gaps.push(gap(part[self.m()], GapReason::Budget));
                continue;
            }
            *left -= 1;
            match self.look_at(&part) {
                Verdict::Empty => {}
                Verdict::Curve(point) if self.is_known(picture, &point) => {}
                Verdict::Curve(_) => self.split(&mut stack, &part, GapReason::Unjoined, None),
                Verdict::Open { domain, along } => {
                    let reason = if domain.defined { GapReason::Meeting } else { GapReason::Undefined };
                    self.split(&mut stack, &part, reason, Some(along));
                }
            }
        }
    }

    /// Cuts a part in two, or gives it up.
    fn split(&mut self, stack: &mut Vec<Part>, part: &[Interval], reason: GapReason, along: Option<usize>) {
        let share = |j: usize| part[j].width() / self.whole[j].width();
        let widest = (0..part.len()).max_by(|&a, &b| share(a).total_cmp(&share(b)));
        let Some(widest) = widest.filter(|&j| share(j) > SMALLEST) else {
            self.gaps.push(gap(part[self.m()], reason));
            return;
        };
        // The side that the rows depend on most, unless it is small beside the others already.
        let j = along.filter(|&j| share(j) > 1e-2 * share(widest)).unwrap_or(widest);
        let middle = part[j].mid();
        for half in [Interval::new(part[j].lo(), middle), Interval::new(middle, part[j].hi())] {
            let mut next = part.to_vec();
            next[j] = half;
            stack.push(next);
        }
    }

    /// Whether a point of a curve is on a branch; one that is not is followed, if it is in the box.
    fn is_known(&mut self, picture: &mut Picture<'_>, point: &[f64]) -> bool {
        let mut state = vec![0.0; picture.equations.species];
        for (&i, &x) in self.face.moving.iter().zip(point) {
            state[i] = if x.abs() <= ABSENT * picture.equations.sides[i][1].abs() { 0.0 } else { x };
        }
        let control = point[self.m()];
        if picture.branch_through(&state, control).is_some() {
            return true;
        }
        let is_inside = point.iter().zip(&self.whole).all(|(&x, side)| side.contains(x));
        if !is_inside {
            return false;
        }
        let present = state.iter().map(|&x| x != 0.0).collect();
        picture.follow(&Start { present, state: state.clone(), control, across: None });
        picture.follow_all();
        picture.branch_through(&state, control).is_some()
    }

    fn look_at(&mut self, part: &[Interval]) -> Verdict {
        let (m, n) = (self.m(), self.m() + 1);
        self.plain.at(part);
        if self.plain.outputs().any(|row| !row.contains_zero()) {
            return Verdict::Empty;
        }
        let domain = self.intervals.at(part);
        let slopes = self.slopes(m);
        let along = steepest(&slopes, part, n);
        let open = Verdict::Open { domain, along };
        if !domain.defined || !slopes.iter().all(|slope| slope.is_bounded()) {
            return open;
        }
        let middle: Vec<f64> = part.iter().map(|side| side.mid()).collect();
        if self.is_empty_around(part, &middle, &slopes) {
            return Verdict::Empty;
        }
        self.curve(part, &middle).unwrap_or(open)
    }

    fn slopes(&self, m: usize) -> Vec<Interval> {
        let mut slopes = Vec::with_capacity(m * (m + 1));
        for i in 0..m {
            match self.intervals.gradient(i) {
                Some(row) => slopes.extend_from_slice(row),
                None => slopes.extend(std::iter::repeat_n(Interval::ZERO, m + 1)),
            }
        }
        slopes
    }

    /// Whether a row's mean value form has no zero: F(c) + F'(X)(X − c).
    fn is_empty_around(&mut self, part: &[Interval], middle: &[f64], slopes: &[Interval]) -> bool {
        let exact: Part = middle.iter().map(|&x| Interval::point(x)).collect();
        if !self.plain.at(&exact).defined {
            return false;
        }
        slopes.chunks_exact(part.len()).zip(self.plain.outputs()).any(|(row, &value)| {
            let reach = row
                .iter()
                .zip(part)
                .zip(middle)
                .fold(value, |sum, ((slope, side), &x)| sum + *slope * (*side - Interval::point(x)));
            !reach.contains_zero()
        })
    }

    /// Proves that a part holds one curve at most, running along one of its coordinates.
    fn curve(&mut self, part: &[Interval], middle: &[f64]) -> Option<Verdict> {
        let n = part.len();
        let tangent = self.tangent(middle, part)?;
        let share = |j: usize| tangent[j].abs() / part[j].width().max(f64::MIN_POSITIVE);
        let z = (0..n).max_by(|&a, &b| share(a).total_cmp(&share(b)))?;
        let others: Vec<usize> = (0..n).filter(|&j| j != z).collect();
        let (point, inverse) = self.corrected(middle, part, z, &others)?;
        let mut tube = part.to_vec();
        for &j in &others {
            let spread = (tangent[j] / tangent[z]).abs() * part[z].width() / 2.0;
            let reach = (1.0 + ROOM) * spread + ROOM * 0.5 * part[j].width();
            let around = Interval::point(point[j]) + Interval::new(-reach, reach);
            tube[j] = part[j].hull(around);
        }
        let image = self.image(&tube, &point, z, &others, &inverse)?;
        let is_inside = others.iter().zip(&image).all(|(&j, image)| image.interior_of(tube[j]));
        if !is_inside {
            return None;
        }
        let misses = others.iter().zip(&image).any(|(&j, image)| image.intersect(part[j]).is_empty());
        Some(if misses { Verdict::Empty } else { Verdict::Curve(point) })
    }

    /// The null direction of the slopes at a point; in the units of the coordinates.
    fn tangent(&mut self, point: &[f64], part: &[Interval]) -> Option<Vec<f64>> {
        let (m, n) = (self.m(), self.m() + 1);
        if !self.numbers.at(point).defined {
            return None;
        }
        // With each coordinate as a border in turn, the one that leaves the matrix best conditioned decides.
        let mut best: Option<(f64, Vec<f64>)> = None;
        for k in 0..n {
            let mut matrix = Vec::with_capacity(n * n);
            for i in 0..m {
                match self.numbers.gradient(i) {
                    Some(row) => matrix.extend(row.iter().zip(part).map(|(slope, side)| slope * side.width())),
                    None => matrix.extend(std::iter::repeat_n(0.0, n)),
                }
            }
            matrix.extend((0..n).map(|j| f64::from(u8::from(j == k))));
            let Some(inverse) = inverse(&matrix, n) else { continue };
            let direction: Vec<f64> = (0..n).map(|j| inverse[j * n + m]).collect();
            let length = direction.iter().map(|x| x * x).sum::<f64>().sqrt();
            if best.as_ref().is_none_or(|(known, _)| length < *known) {
                best = Some((length, direction.iter().zip(part).map(|(x, side)| x / length * side.width()).collect()));
            }
        }
        best.map(|(_, direction)| direction)
    }

    /// The curve's point where one coordinate is in its middle, with the inverse of the slopes in the others there.
    fn corrected(
        &mut self,
        middle: &[f64],
        part: &[Interval],
        z: usize,
        others: &[usize],
    ) -> Option<(Vec<f64>, Vec<f64>)> {
        let m = others.len();
        let mut point = middle.to_vec();
        let mut last = f64::INFINITY;
        for _ in 0..STEPS {
            if !self.numbers.at(&point).defined {
                return None;
            }
            let mut matrix = Vec::with_capacity(m * m);
            for i in 0..m {
                let row = self.numbers.gradient(i);
                matrix.extend(others.iter().map(|&j| row.map_or(0.0, |row| row[j])));
            }
            let inverse = inverse(&matrix, m)?;
            let mut size = 0.0f64;
            for (k, &j) in others.iter().enumerate() {
                let step: f64 = (0..m).map(|i| inverse[k * m + i] * self.numbers.output(i)).sum();
                point[j] -= step;
                size = size.max(step.abs() / part[j].width());
            }
            if !size.is_finite() || size > 4.0 {
                return None;
            }
            if size <= 1e-9 || (size <= 1e-6 && size > 0.5 * last) {
                point[z] = middle[z];
                return Some((point, inverse));
            }
            last = size;
        }
        None
    }

    /// Krawczyk's operator in all coordinates but one, which is an interval.
    fn image(
        &mut self,
        tube: &[Interval],
        point: &[f64],
        z: usize,
        others: &[usize],
        inverse: &[f64],
    ) -> Option<Vec<Interval>> {
        let m = others.len();
        let exact: Part = point.iter().map(|&x| Interval::point(x)).collect();
        if !self.plain.at(&exact).defined {
            return None;
        }
        let values: Vec<Interval> = self.plain.outputs().copied().collect();
        let mut slice = exact.clone();
        slice[z] = tube[z];
        if !self.intervals.at(&slice).defined {
            return None;
        }
        let run = tube[z] - exact[z];
        let rest: Vec<Interval> =
            (0..m).map(|i| values[i] + self.intervals.gradient(i).map_or(Interval::ZERO, |row| row[z]) * run).collect();
        if !self.intervals.at(tube).defined {
            return None;
        }
        let image = |k: usize| {
            let c = |i: usize| Interval::point(inverse[k * m + i]);
            let shift = (0..m).fold(Interval::ZERO, |sum, i| sum + c(i) * rest[i]);
            let spread = others.iter().enumerate().fold(Interval::ZERO, |sum, (l, &j)| {
                let product = (0..m).fold(Interval::ZERO, |sum, i| {
                    sum + c(i) * self.intervals.gradient(i).map_or(Interval::ZERO, |row| row[j])
                });
                let unit = if k == l { Interval::ONE } else { Interval::ZERO };
                sum + (unit - product) * (tube[j] - exact[j])
            });
            exact[others[k]] - shift + spread
        };
        Some((0..m).map(image).collect())
    }
}

/// The coordinate over whose side the rows vary most.
fn steepest(slopes: &[Interval], part: &[Interval], n: usize) -> usize {
    let mut sums = vec![0.0f64; n];
    for row in slopes.chunks_exact(n) {
        let parts: Vec<f64> = row.iter().zip(part).map(|(slope, side)| slope.mag() * side.width()).collect();
        let largest = parts.iter().fold(0.0f64, |most, &x| most.max(x));
        if largest > 0.0 && largest.is_finite() {
            sums.iter_mut().zip(&parts).for_each(|(sum, part)| *sum += part / largest);
        }
    }
    (0..n).max_by(|&a, &b| sums[a].total_cmp(&sums[b])).unwrap_or(0)
}

fn gap(range: Interval, reason: GapReason) -> Gap {
    Gap { from: range.lo(), to: range.hi(), reason }
}

/// Gaps by rising value, those that touch joined; what was not looked at outweighs what could not be decided.
fn merged(mut gaps: Vec<Gap>, width: f64) -> Vec<Gap> {
    gaps.sort_by(|a, b| a.from.total_cmp(&b.from));
    let mut merged: Vec<Gap> = Vec::new();
    for gap in gaps {
        match merged.last_mut() {
            Some(last) if gap.from <= last.to + TOGETHER * width => {
                last.to = last.to.max(gap.to);
                if last.reason != gap.reason {
                    last.reason = heavier(last.reason, gap.reason);
                }
            }
            _ => merged.push(gap),
        }
    }
    merged
}

fn heavier(a: GapReason, b: GapReason) -> GapReason {
    let weight = |reason: &GapReason| match reason {
        GapReason::Meeting => 0,
        GapReason::Undefined => 1,
        GapReason::Unresolved => 2,
        GapReason::Unjoined => 3,
        GapReason::Budget => 4,
    };
    if weight(&a) >= weight(&b) { a } else { b }
}
