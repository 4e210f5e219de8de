//! What is the same from both ends of the way; the rest was not followed.

use super::{Fate, Passage, Reason};

/// Two folds are one where they are this near along the way.
const SAME_FOLD: f64 = 1e-4;

/// Keeps arrivals that lead back to where they began, and folds at which two meet each other.
pub(super) fn agreed(passage: &Passage) -> Passage {
    let Passage { forward, backward } = passage;
    let forward_kept = forward.iter().enumerate().map(|(place, fate)| kept(place, fate, [forward, backward]));
    let backward_kept = backward.iter().enumerate().map(|(place, fate)| kept(place, fate, [backward, forward]));
    Passage { forward: forward_kept.collect(), backward: backward_kept.collect() }
}

fn kept(place: usize, fate: &Fate, [own, others]: [&[Fate]; 2]) -> Fate {
    let holds = match fate {
        Fate::Arrives { at, .. } => matches!(others.get(*at), Some(Fate::Arrives { at, .. }) if *at == place),
        Fate::Fold { at: here, with: Some(other) } => match own.get(*other) {
            Some(Fate::Fold { at, with: Some(back) }) => *back == place && (at - here).abs() <= SAME_FOLD,
            _ => false,
        },
        _ => true,
    };
    if holds { fate.clone() } else { Fate::NotFollowed(Reason::Disagrees) }
}
