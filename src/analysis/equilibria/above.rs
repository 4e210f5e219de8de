//! Is there an equilibrium with an abundance above the box? Where constraint propagation on unbounded boxes leaves nothing,
//! none is proved; else nothing is claimed.

use super::newton::Region;
use crate::expr::tape::Tape;
use crate::expr::tape::propagate::{Propagation, Sweep};
use crate::num::interval::Interval;

/// Unbounded boxes that one face may cost.
const MOST_BOXES: usize = 64;
/// Sweeps on each.
const SWEEPS: usize = 6;

/// Whether it is proved that no root has a component above its side of the region.
pub(super) fn is_empty(tape: &Tape, values: &[f64], region: &[Interval]) -> bool {
    let exact: Vec<Interval> = values.iter().map(|&value| Interval::point(value)).collect();
    let mut propagation = tape.start_propagation(&exact);
    // All that may hold roots above: one side beyond, those before it within, those after it anywhere.
    let beyond = |i: usize| -> Region {
        let side = |(j, side): (usize, &Interval)| match j.cmp(&i) {
            std::cmp::Ordering::Less => *side,
            std::cmp::Ordering::Equal => Interval::new(side.hi(), f64::INFINITY),
            std::cmp::Ordering::Greater => Interval::new(side.lo(), f64::INFINITY),
        };
        region.iter().enumerate().map(side).collect()
    };
    let mut left: Vec<Region> = (0..region.len()).map(beyond).collect();
    for _ in 0..MOST_BOXES {
        let Some(mut part) = left.pop() else { return true };
        if holds_nothing(&mut propagation, &mut part) {
            continue;
        }
        let Some((side, cut)) = place_to_halve(&part) else { return false };
        let mut high = part.clone();
        part[side] = Interval::new(part[side].lo(), cut);
        high[side] = Interval::new(cut, high[side].hi());
        left.extend([high, part]);
    }
    left.is_empty()
}

fn holds_nothing(propagation: &mut Propagation<'_>, part: &mut Region) -> bool {
    for _ in 0..SWEEPS {
        let before = part.clone();
        if propagation.sweep(part) == Sweep::Empty {
            return true;
        }
        if *part == before {
            break;
        }
    }
    false
}

/// The side that spans most orders of magnitude, and where to cut it.
fn place_to_halve(part: &Region) -> Option<(usize, f64)> {
    let span = |side: &Interval| (side.hi() / side.lo().max(side.hi().min(1e300) * 1e-9)).max(1.0);
    let widest = (0..part.len()).max_by(|&i, &j| span(&part[i]).total_cmp(&span(&part[j])))?;
    let side = part[widest];
    let cut = if side.hi() < f64::INFINITY { side.mid() } else { 16.0 * side.lo().max(1e-9) };
    (cut > side.lo() && cut < side.hi()).then_some((widest, cut))
}
