//! How far a mean over all draws strays, from how the means of groups differ.

use super::super::draw::Way;
use super::Group;

/// The variance of a mean, and how well it is known.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Spread {
    pub(super) variance: f64,
    /// Degrees of freedom of Student's distribution.
    pub(super) freedom: f64,
}

/// The spread of the mean of all groups; `None` where draws are independent, or there are fewer than two groups.
pub(super) fn spread(way: Way, groups: &[Group], mean: f64) -> Option<Spread> {
    let count: f64 = groups.iter().map(|group| group.of).sum();
    let filled = groups.iter().filter(|group| group.of > 0.0).count();
    if filled < 2 {
        return None;
    }
    let deviation = |group: &Group| group.of / count * (group.mean - mean);
    match way {
        Way::Independent => None,
        Way::Randomised => {
            let squares: f64 = groups.iter().map(|group| deviation(group).powi(2)).sum();
            let n = filled as f64;
            Some(Spread { variance: squares * n / (n - 1.0), freedom: n - 1.0 })
        }
        Way::InOrder { .. } => Some(in_order(&groups.iter().map(deviation).collect::<Vec<f64>>())),
    }
}

/// The variance of the sum of deviations that follow each other, by the initial monotone sequence (Geyer 1992).
///
/// Covariances at growing distance are added in pairs while these are positive, none larger than the one before. So far as
/// that goes, 2k batches hang together, and it is known as well as from as many independent stretches as there are of 2k.
fn in_order(deviations: &[f64]) -> Spread {
    let n = deviations.len();
    let covariance = |distance: usize| -> f64 {
        let later = deviations.get(distance..).unwrap_or_default();
        deviations.iter().zip(later).map(|(a, b)| a * b).sum()
    };
    let alone = covariance(0);
    let (mut sum, mut last, mut pairs) = (-alone, f64::INFINITY, 0);
    while 2 * pairs + 1 < n {
        let pair = (covariance(2 * pairs) + covariance(2 * pairs + 1)).min(last);
        if pair <= 0.0 {
            break;
        }
        sum += 2.0 * pair;
        last = pair;
        pairs += 1;
    }
    let variance = if pairs == 0 { alone } else { sum.max(0.0) };
    Spread { variance, freedom: (n as f64 / (2 * pairs.max(1)) as f64).max(1.0) }
}
