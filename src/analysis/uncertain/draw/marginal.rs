//! The distribution of one number, by the value that a share of it lies below.
//!
//! Where hard limits cut a distribution, the share between them is spread over the whole of 0 to 1: points that are evenly
//! spread stay so. A share comes as what is below and what is above, so that neither end loses digits.

use std::f64::consts::LN_2;

use crate::model::{Draw, Parameter};
use crate::num::beta::{Beta, Side};
use crate::num::elementary::{exp, ln, log1p};
use crate::num::normal;

/// Below this, shares are worked out by their logarithms.
const SMALLEST: f64 = 1e-290;

/// The distribution of a parameter or of a stock.
#[derive(Clone, Debug)]
pub(super) struct Marginal {
    law: Law,
    /// No value lies outside these.
    limits: [f64; 2],
}

#[derive(Clone, Debug)]
enum Law {
    /// Mean and standard deviation, of the value or of its logarithm.
    Normal {
        mean: f64,
        sd: f64,
        cut: Option<CutNormal>,
    },
    Lognormal {
        median: f64,
        sd: f64,
        cut: Option<CutNormal>,
    },
    /// Evenly between the limits.
    Uniform,
    Triangular {
        range: [f64; 2],
        mode: f64,
        shares: [Shares; 2],
    },
    Beta {
        range: [f64; 2],
        beta: Beta,
        shares: [Shares; 2],
    },
}

/// What lies below a value and what above: of a beta distribution, the logarithms.
#[derive(Clone, Copy, Debug)]
struct Shares {
    below: f64,
    above: f64,
}

impl Marginal {
    /// How a parameter is drawn; `None` if it is not.
    pub(super) fn of(parameter: &Parameter) -> Option<Self> {
        let draw = parameter.draw.as_ref()?.value;
        let limits = [parameter.min.unwrap_or(f64::MIN), parameter.max.unwrap_or(f64::MAX)];
        let value = parameter.value;
        if let Draw::Normal { sd } = draw {
            let open = limits == [f64::MIN, f64::MAX];
            let cut = (!open).then(|| CutNormal::new(limits.map(|limit| (limit - value) / sd)));
            return Some(Self { law: Law::Normal { mean: value, sd, cut }, limits });
        }
        if let Draw::Lognormal { cv } = draw {
            let limits = [limits[0].max(0.0), limits[1]];
            let (open, sd) = (limits == [0.0, f64::MAX], ln_spread(cv));
            let cut = (!open).then(|| CutNormal::new(limits.map(|limit| (ln(limit) - ln(value)) / sd)));
            return Some(Self { law: Law::Lognormal { median: value, sd, cut }, limits });
        }
        let range = parameter.range.as_ref()?.value;
        let limits = [limits[0].max(range[0]), limits[1].min(range[1])];
        Some(Self { law: ranged(draw, value, range, limits), limits })
    }

    /// A stock that a survey found to be `value`, with a coefficient of variation: lognormal around it.
    pub(super) fn of_stock(value: f64, cv: f64) -> Self {
        let law = Law::Lognormal { median: value, sd: ln_spread(cv), cut: None };
        Self { law, limits: [0.0, f64::MAX] }
    }

    /// The value that a share lies below, given both sides of it; finite.
    #[inline]
    pub(super) fn at(&self, below: f64, above: f64) -> f64 {
        match &self.law {
            Law::Normal { cut: None, .. } | Law::Lognormal { cut: None, .. } => {
                self.of_normal(if below <= above { normal::quantile(below) } else { -normal::quantile(above) })
            }
            Law::Normal { cut: Some(cut), .. } | Law::Lognormal { cut: Some(cut), .. } => {
                self.scaled(cut.at(below, above))
            }
            Law::Uniform => self.kept(self.limits[0] * above + self.limits[1] * below),
            Law::Triangular { range, mode, shares } => {
                let [low, high] = shares;
                let mix = |low: f64, high: f64| low * above + high * below;
                let place = triangular(*mode, mix(low.below, high.below), mix(low.above, high.above));
                self.kept(range[0] * (1.0 - place) + range[1] * place)
            }
            Law::Beta { range, beta, shares: [low, high] } => {
                let under = mixed(low.below, high.below, below, above);
                let side = if under <= -LN_2 {
                    Side::Below(under)
                } else {
                    Side::Above(mixed(low.above, high.above, below, above))
                };
                let place = beta.quantile(side);
                self.kept(range[0] * (1.0 - place) + range[1] * place)
            }
        }
    }

    /// The value at the same share as a standard normal number.
    pub(super) fn of_normal(&self, z: f64) -> f64 {
        match &self.law {
            Law::Normal { cut: None, .. } | Law::Lognormal { cut: None, .. } => self.scaled(z),
            _ => self.at(normal::share(z), normal::share(-z)),
        }
    }

    fn scaled(&self, z: f64) -> f64 {
        match &self.law {
            Law::Lognormal { median, sd, .. } => self.kept(median * exp(sd * z)),
            Law::Normal { mean, sd, .. } => self.kept(mean + sd * z),
            _ => self.limits[0],
        }
    }

    fn kept(&self, x: f64) -> f64 {
        x.max(self.limits[0]).min(self.limits[1])
    }
}

/// The standard deviation of the logarithm, √ln(1 + cv²).
fn ln_spread(cv: f64) -> f64 {
    if cv < 1e8 { log1p(cv * cv).sqrt() } else { (2.0 * ln(cv)).sqrt() }
}

fn ranged(draw: Draw, value: f64, range: [f64; 2], limits: [f64; 2]) -> Law {
    // Halves, so that no difference overflows.
    let place = |x: f64| ((x / 2.0 - range[0] / 2.0) / (range[1] / 2.0 - range[0] / 2.0)).clamp(0.0, 1.0);
    match draw {
        Draw::Triangular => {
            let mode = place(value);
            let shares = limits.map(|limit| shares_of_triangle(mode, place(limit)));
            Law::Triangular { range, mode, shares }
        }
        Draw::Beta { a, b } => {
            let beta = Beta::new(a, b);
            let shares = limits.map(|limit| beta.shares(place(limit)));
            Law::Beta { range, beta, shares: shares.map(|s| Shares { below: s.ln_below, above: s.ln_above }) }
        }
        _ => Law::Uniform,
    }
}

/// What lies below and above a place in 0 … 1 of the triangle with its peak at `mode`.
fn shares_of_triangle(mode: f64, place: f64) -> Shares {
    let (left, right) = (place, 1.0 - place);
    if place < mode {
        let below = left * left / mode;
        Shares { below, above: 1.0 - below }
    } else {
        // At the upper end, with the peak there, nothing is above.
        let above = if right > 0.0 { right * right / (1.0 - mode) } else { 0.0 };
        Shares { below: 1.0 - above, above }
    }
}

fn triangular(mode: f64, below: f64, above: f64) -> f64 {
    if below <= mode { (below * mode).sqrt() } else { 1.0 - (above * (1.0 - mode)).sqrt() }
}

/// ln(e^low × above + e^high × below).
fn mixed(low: f64, high: f64, below: f64, above: f64) -> f64 {
    let most = low.max(high);
    if most == f64::NEG_INFINITY {
        return most;
    }
    most + ln(exp(low - most) * above + exp(high - most) * below)
}

/// The part of a standard normal distribution between two values.
#[derive(Clone, Copy, Debug)]
struct CutNormal {
    ends: [f64; 2],
    /// Below and above each end.
    shares: [Shares; 2],
}

impl CutNormal {
    fn new(ends: [f64; 2]) -> Self {
        Self { ends, shares: ends.map(|z| Shares { below: normal::share(z), above: normal::share(-z) }) }
    }

    fn at(&self, below: f64, above: f64) -> f64 {
        let [low, high] = self.shares;
        let under = low.below * above + high.below * below;
        let over = low.above * above + high.above * below;
        let z = match (under, over) {
            _ if under <= over && under > SMALLEST => normal::quantile(under),
            _ if under <= over => self.far_out(1.0, below, above),
            _ if over > SMALLEST => -normal::quantile(over),
            _ => self.far_out(-1.0, below, above),
        };
        z.max(self.ends[0]).min(self.ends[1])
    }

    /// Where shares are too small for f64, on the side of that sign.
    fn far_out(&self, side: f64, below: f64, above: f64) -> f64 {
        let [low, high] = self.ends.map(|z| normal::ln_share(side * z));
        side * normal::of_ln_share(mixed(low, high, below, above))
    }
}
