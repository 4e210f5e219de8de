//! The smallest move of all parameters with a range together that takes a stable state away (Dobson 1993).
//!
//! Parameters are measured in widths of their ranges, u = (p − p₀)/width. Along a unit direction d the state is followed to
//! where it is lost, at distance t(d); there the defining system has a normal n of the surface of such places, from the left
//! vector of its slopes by everything but the parameters. Since dt/t = −n·δd/(n·d), t is stationary where d lies along n. From
//! several directions t is made smaller, by steps towards the normal and then by a quasi-Newton method (Broyden, Fletcher,
//! Goldfarb & Shanno 1970), until d and n agree. What comes out is a local minimum; that there is none nearer is not
//! proved. Start at [`closest`].

use super::ClosestEdge;
use super::margins::{Mover, Setting, is_loss};
use super::ray::Course;
use super::surface::{Hit, Surface};
use crate::analysis::equilibria::Equilibrium;
use crate::analysis::passage::dot;
use crate::analysis::subject::Subject;
use crate::num::random::Source;

/// Directions that are drawn, beside those along parameters.
const DRAWN: usize = 12;
/// The seed that they are drawn with, so that the same model has the same answer.
const SEED: u64 = 6;
/// How far to go, in widths of the ranges.
const FAR: f64 = 4.0;
/// Steps of a descent.
const MOST_STEPS: usize = 120;
/// A move this nearly along the normal is stationary: sine of the angle.
const ALONG: f64 = 1e-12;
/// Beyond this one is not.
const ACROSS: f64 = 1e-9;
/// Edges are one where distance and direction agree to this.
const SAME: f64 = 1e-6;
/// Times that a nearer surface may be met in the way.
const MOST_SURFACES: usize = 6;
/// By how much a direction is turned to see whether the distance is least there, not merely stationary.
const TURN: f64 = 0.02;

/// A stationary point of the distance.
struct Least {
    direction: Vec<f64>,
    hit: Hit,
    residual: f64,
}

/// The closest edge found, and how many starts led to it; movers along which the state is lost soonest come first.
///
/// A parameter that is 0 and can only grow, such as a quota of nothing or a restocking, is held at first, for with it no
/// abundance need go through 0 any more; then each of these moves with all others, at last all of them.
pub(super) fn closest(
    subject: &Subject<'_>,
    start: &Equilibrium,
    movers: &[Mover],
    stop: &dyn Fn() -> bool,
) -> Option<(ClosestEdge, usize)> {
    let (idle, moving): (Vec<&Mover>, Vec<&Mover>) =
        movers.iter().partition(|mover| mover.present == 0.0 && mover.limits[0] == 0.0);
    let with = |added: &[&Mover]| -> Vec<Mover> { moving.iter().chain(added).map(|mover| **mover).collect() };
    let mut rounds = vec![(with(&[]), 0)];
    rounds.extend(idle.iter().map(|&one| (with(&[one]), 1)));
    if idle.len() > 1 {
        rounds.push((with(&idle), idle.len()));
    }
    let mut best: Option<(ClosestEdge, usize)> = None;
    for (movers, added) in rounds.into_iter().filter(|(movers, _)| !movers.is_empty()) {
        let Some(mut setting) = Setting::new(subject, start, &movers, stop) else { continue };
        let Some((least, count)) = least(&mut setting, added) else { continue };
        if best.as_ref().is_none_or(|(best, _)| least.hit.t < best.distance) {
            best = Some((edge(&setting, &least), count));
        }
    }
    best
}

/// Whether more starts are worth their time: not once the expected number of local minima, found `seen` different ones from
/// `starts` that led anywhere, is theirs (Boender & Rinnooy Kan 1987). Starts along parameters count as if they were drawn.
fn is_enough(seen: usize, starts: usize) -> bool {
    let (w, n) = (seen as f64, starts as f64);
    n > w + 2.0 && w * (n - 1.0) / (n - w - 2.0) < w + 0.5
}

/// The least distance found, and how many starts led to it; the last `added` of the movers are 0 at present.
fn least(setting: &mut Setting<'_>, added: usize) -> Option<(Least, usize)> {
    let mut found: Vec<(Least, usize)> = Vec::new();
    for direction in starts(setting.movers.len(), added) {
        let led: usize = found.iter().map(|(_, count)| count).sum();
        if (setting.stop)() || is_enough(found.len(), led) {
            break;
        }
        let Some(new) = descend(setting, direction) else { continue };
        match found.iter_mut().find(|(old, _)| is_same(old, &new)) {
            Some((_, count)) => *count += 1,
            None => found.push((new, 1)),
        }
    }
    found.into_iter().min_by(|a, b| a.0.hit.t.total_cmp(&b.0.hit.t))
}

fn edge(setting: &Setting<'_>, least: &Least) -> ClosestEdge {
    let located = &least.hit.located;
    let controls = &located.point[located.point.len() - setting.movers.len()..];
    let is_within = |(mover, value): (&Mover, &f64)| {
        let room = SAME * mover.width();
        (mover.range[0] - room..=mover.range[1] + room).contains(value)
    };
    let mut values: Vec<_> = setting.movers.iter().map(|mover| mover.parameter).zip(controls.iter().copied()).collect();
    values.sort_by_key(|(parameter, _)| *parameter);
    ClosestEdge {
        equilibrium: 0,
        kind: located.kind,
        values,
        distance: least.hit.t,
        state: located.state.clone(),
        residual: least.residual,
        within_ranges: setting.movers.iter().zip(controls).all(is_within),
    }
}

fn is_same(a: &Least, b: &Least) -> bool {
    let off: f64 = a.direction.iter().zip(&b.direction).map(|(a, b)| (a - b).powi(2)).sum();
    a.hit.located.kind == b.hit.located.kind && (a.hit.t - b.hit.t).abs() <= SAME * a.hit.t && off.sqrt() <= SAME.sqrt()
}

/// Along each of k parameters both ways, all together, and drawn ones. The last `added` only grow, and only where they do is
/// there anything new.
fn starts(k: usize, added: usize) -> Vec<Vec<f64>> {
    let mut starts = Vec::new();
    for place in k.saturating_sub(if added == 0 { k } else { added })..k {
        for sign in if added == 0 { &[-1.0, 1.0][..] } else { &[1.0] } {
            let mut direction = vec![0.0; k];
            direction[place] = *sign;
            starts.push(direction);
        }
    }
    if k > 1 {
        let equal = 1.0 / (k as f64).sqrt();
        starts.extend([vec![equal; k], vec![-equal; k]]);
        let mut source = Source::new(SEED);
        let mut draw = || -> Vec<f64> { (0..k).map(|_| source.between(-1.0, 1.0)).collect() };
        let drawn = if added == 0 { DRAWN } else { DRAWN / 2 };
        starts.extend((0..drawn).filter_map(|_| unit(&draw())));
    }
    for start in &mut starts {
        start[k - added..].iter_mut().for_each(|part| *part = part.abs());
    }
    starts
}

/// A least distance that a direction leads to, met by the state on its way.
fn descend(setting: &mut Setting<'_>, mut direction: Vec<f64>) -> Option<Least> {
    let mut hit = first_hit(setting, &direction, FAR)?;
    for _ in 0..MOST_SURFACES {
        let mut least = minimise(setting, direction, hit)?;
        if let Some((turned, nearer)) = lower_beside(setting, &least) {
            least = minimise(setting, turned, nearer)?;
        }
        // Along the new direction another surface may lie before.
        let met = first_hit(setting, &least.direction, least.hit.t * (1.0 + SAME) + SAME)?;
        if met.t >= least.hit.t * (1.0 - SAME) {
            return (least.residual <= ACROSS).then_some(least);
        }
        direction = least.direction;
        hit = met;
    }
    None
}

/// Where the state is lost along a direction, no further than `far`.
fn first_hit(setting: &mut Setting<'_>, direction: &[f64], far: f64) -> Option<Hit> {
    let bound = |(mover, part): (&Mover, &f64)| {
        let limit = if *part > 0.0 { mover.limits[1] } else { mover.limits[0] };
        if *part == 0.0 { f64::INFINITY } else { (limit - mover.present) / (part * mover.width()) }
    };
    let limit = setting.movers.iter().zip(direction).map(bound).fold(far, f64::min);
    match setting.follow(direction, limit.max(0.0)) {
        Course::Lost { t, located, .. } if is_loss(located.kind, &located, setting) && t > 0.0 => {
            Some(Hit { t, located: *located })
        }
        _ => None,
    }
}

/// A direction a little beside in which the surface is nearer.
fn lower_beside(setting: &Setting<'_>, least: &Least) -> Option<(Vec<f64>, Hit)> {
    let surface = Surface::new(setting, &least.hit.located)?;
    let k = least.direction.len();
    for place in 0..k {
        for sign in [-1.0, 1.0] {
            let mut turned = least.direction.clone();
            turned[place] += sign * TURN;
            let Some(turned) = unit(&turned) else { continue };
            let Some(hit) = surface.hit(&turned, &least.hit) else { continue };
            if hit.t < least.hit.t * (1.0 - SAME * TURN) {
                return Some((turned, hit));
            }
        }
    }
    None
}

/// Turns a direction until the distance to the surface that was hit is stationary.
fn minimise(setting: &Setting<'_>, direction: Vec<f64>, hit: Hit) -> Option<Least> {
    let surface = Surface::new(setting, &hit.located)?;
    let mut here = Step::new(&surface, direction, hit)?;
    let k = here.direction.len();
    let mut inverse = crate::num::dense::identity(k);
    for _ in 0..MOST_STEPS {
        if here.residual <= ALONG || (setting.stop)() {
            break;
        }
        let Some(next) = here.better(&surface, &inverse) else {
            // The quasi-Newton matrix may be stale; the plain gradient never is.
            let plain = crate::num::dense::identity(k);
            if inverse == plain {
                break;
            }
            inverse = plain;
            continue;
        };
        update(&mut inverse, &here, &next);
        here = next;
    }
    Some(Least { direction: here.direction, hit: here.hit, residual: here.residual })
}

/// A direction, what it hits, and the slope of ln t by the direction there.
struct Step {
    direction: Vec<f64>,
    hit: Hit,
    slope: Vec<f64>,
    residual: f64,
}

impl Step {
    fn new(surface: &Surface<'_>, direction: Vec<f64>, hit: Hit) -> Option<Self> {
        let normal = surface.normal(&hit.located)?;
        let along = dot(&normal, &direction);
        let across: Vec<f64> = normal.iter().zip(&direction).map(|(n, d)| n - along * d).collect();
        let residual = dot(&across, &across).sqrt();
        let slope: Vec<f64> = across.iter().map(|part| -part / along).collect();
        slope.iter().all(|part| part.is_finite()).then_some(Self { direction, hit, slope, residual })
    }

    /// The first of ever shorter steps that leads nearer, or at the same distance more nearly along the normal.
    fn better(&self, surface: &Surface<'_>, inverse: &[f64]) -> Option<Self> {
        let k = self.direction.len();
        let mut step: Vec<f64> = inverse.chunks_exact(k).map(|row| -dot(row, &self.slope)).collect();
        if dot(&step, &self.slope) >= 0.0 {
            return None;
        }
        let length = dot(&step, &step).sqrt();
        let longest = 0.5 / length;
        if longest < 1.0 {
            for part in &mut step {
                *part *= longest;
            }
        }
        for _ in 0..30 {
            let moved: Vec<f64> = self.direction.iter().zip(&step).map(|(d, part)| d + part).collect();
            if let Some(direction) = unit(&moved)
                && let Some(hit) = surface.hit(&direction, &self.hit)
                && let Some(next) = Self::new(surface, direction, hit)
            {
                let is_nearer = next.hit.t < self.hit.t * (1.0 - 1e-9);
                let is_flatter = next.hit.t <= self.hit.t * (1.0 + 1e-12) && next.residual < 0.9 * self.residual;
                if is_nearer || is_flatter {
                    return Some(next);
                }
            }
            for part in &mut step {
                *part *= 0.4;
            }
        }
        None
    }
}

/// H ← (I − ρ s yᵀ) H (I − ρ y sᵀ) + ρ s sᵀ with ρ = 1/(s·y), where that stays positive definite.
fn update(inverse: &mut [f64], before: &Step, after: &Step) {
    let k = before.direction.len();
    let s: Vec<f64> = after.direction.iter().zip(&before.direction).map(|(a, b)| a - b).collect();
    let y: Vec<f64> = after.slope.iter().zip(&before.slope).map(|(a, b)| a - b).collect();
    let along = dot(&s, &y);
    if along <= 1e-12 * (dot(&s, &s) * dot(&y, &y)).sqrt() {
        return;
    }
    let turned: Vec<f64> = inverse.chunks_exact(k).map(|row| dot(row, &y)).collect();
    let bend = (1.0 + dot(&y, &turned) / along) / along;
    for i in 0..k {
        for j in 0..k {
            inverse[i * k + j] += bend * s[i] * s[j] - (turned[i] * s[j] + s[i] * turned[j]) / along;
        }
    }
}

fn unit(vector: &[f64]) -> Option<Vec<f64>> {
    let length = dot(vector, vector).sqrt();
    let unit: Vec<f64> = vector.iter().map(|part| part / length).collect();
    unit.iter().all(|part| part.is_finite()).then_some(unit)
}
