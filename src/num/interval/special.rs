//! Functions of several arguments whose natural formula would overestimate: saturation, and a choice by comparison.

use super::Interval;
use crate::num::round::{add_down, add_up, div_down, div_up, mul_down, mul_up};

/// Saturation s/(v + c s): every value over the three arguments, without the overestimate of using s twice.
///
/// For s, c, v ≥ 0 it rises in s and falls in c and v, so two corners decide, and it never exceeds 1/c. Clears `defined`
/// where v + c s can be 0; where s = v = 0 is among the arguments the result is filled up to \[0, 1/c\], which every limit
/// there lies in. With an argument that may be negative it is plain division.
#[must_use]
pub fn saturation(s: Interval, c: Interval, v: Interval, defined: &mut bool) -> Interval {
    if s.is_empty() || c.is_empty() || v.is_empty() {
        return Interval::EMPTY;
    }
    if !(s.nonnegative() && c.nonnegative() && v.nonnegative()) {
        return s.div(v + c * s, defined);
    }
    let ceiling = if c.lo > 0.0 { div_up(1.0, c.lo) } else { f64::INFINITY };
    if v.lo == 0.0 && s.lo == 0.0 {
        *defined = false;
        return Interval { lo: 0.0, hi: ceiling };
    }
    *defined &= v.lo > 0.0 || c.lo > 0.0;
    if v == Interval::ZERO && c == Interval::ZERO {
        return Interval::EMPTY;
    }
    let most = add_up(v.hi, mul_up(c.hi, s.lo));
    let least = add_down(v.lo, mul_down(c.lo, s.hi));
    let lo = if most < f64::INFINITY { div_down(s.lo, most) } else { 0.0 };
    let hi = if least > 0.0 && s.hi < f64::INFINITY { div_up(s.hi, least).min(ceiling) } else { ceiling };
    Interval { lo, hi }
}

/// x where a ≤ b, y where a > b; both, and `defined` cleared, where the comparison is open.
#[must_use]
pub fn select(a: Interval, b: Interval, x: Interval, y: Interval, defined: &mut bool) -> Interval {
    if a.is_empty() || b.is_empty() {
        Interval::EMPTY
    } else if a.hi <= b.lo {
        x
    } else if a.lo > b.hi {
        y
    } else {
        *defined = false;
        x.hull(y)
    }
}
