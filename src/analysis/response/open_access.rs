//! Where a harvest's value comes down to 0: the effort at which open access settles.
//!
//! With p the price, Y the yield and C the cost, effort is drawn in while p Y − C > 0 and leaves while it is negative, so
//! along stable states it settles where that falls through 0 (Gordon 1954; Clark 1990). The point is the root of value = 0
//! together with the rows. Start at [`settling`].

use super::OpenAccess;
use super::advice::Ledger;
use super::footing::Standing;
use super::stretches::Stretch;
use crate::analysis::passage::{crossing, dot};

/// Every place where the value of a harvest falls through 0 as the control grows, by harvest and then by control.
pub(super) fn settling(ledger: &mut Ledger<'_>, stable: &[Stretch], stop: &dyn Fn() -> bool) -> Vec<OpenAccess> {
    let response = ledger.response;
    let mut all = Vec::new();
    for (place, taking) in response.takings.iter().enumerate().filter(|(_, taking)| taking.species.is_none()) {
        let mut found = Vec::new();
        for stretch in stable {
            if stop() {
                break;
            }
            let Some(mut standing) = ledger.standing(stretch) else { continue };
            let points = stretch.points_of(response);
            let most = stretch.span(response)[1];
            let spots: Vec<Vec<f64>> =
                points.iter().map(|point| standing.footing.spot(&point.state, point.at)).collect();
            for pair in spots.windows(2) {
                let Some(spot) = falling(&mut standing, [&pair[0], &pair[1]], place, most) else { continue };
                let (at, state) = (spot[spot.len() - 1], standing.footing.state(&spot));
                found.push(OpenAccess { harvest: taking.harvest.clone(), at, state, branch: stretch.branch });
            }
        }
        found.sort_by(|a, b| a.at.total_cmp(&b.at));
        all.extend(found);
    }
    all
}

/// The spot between two at which the value is 0, if it falls from above 0 to below as the control grows. Where the stretch
/// ends, at `most`, a value of 0 goes on to nothing: a stock that is lost has none.
fn falling(standing: &mut Standing<'_>, ends: [&[f64]; 2], place: usize, most: f64) -> Option<Vec<f64>> {
    let last = ends[0].len() - 1;
    let [low, high] = if ends[0][last] <= ends[1][last] { ends } else { [ends[1], ends[0]] };
    let values = [standing.amount(low, &[place])?, standing.amount(high, &[place])?];
    // At the far end 0 counts, so that a point on it counts once.
    if values[0] <= 0.0 || values[1] > 0.0 || (values[1] == 0.0 && high[last] >= most) {
        return None;
    }
    let chord = standing.chord(low, high);
    let length = dot(&chord, &chord).sqrt();
    let border: Vec<f64> = chord.iter().map(|part| part / length).collect();
    let mut found = None;
    let mut at = |share: f64| {
        let mut spot: Vec<f64> = low.iter().zip(high).map(|(a, b)| a + share * (b - a)).collect();
        standing.correct_across(&mut spot, &border)?;
        let value = standing.amount(&spot, &[place])?;
        found = Some(spot);
        Some(value)
    };
    crossing(&mut at, values[0], 1.0)?;
    let mut spot = found?;
    // The root of the value itself, to the last digits.
    let before = spot.clone();
    match standing.correct(&mut spot, &mut |standing, spot| standing.taken(spot, &[place])) {
        Some(_) => Some(spot),
        None => Some(before),
    }
}
