//! The word that was probably meant.

/// The candidate nearest to a word: one that differs by case alone, else the one with the fewest slips, where a slip is a
/// letter added, dropped, replaced or swapped with its neighbour (Damerau 1964). `None` where more than a third of the
/// word's letters (at least one) would have to change. The first of equals wins.
#[must_use]
pub fn nearest<'c>(word: &str, candidates: impl IntoIterator<Item = &'c str>) -> Option<&'c str> {
    let limit = (word.chars().count() / 3).max(1);
    let folded = word.to_lowercase();
    candidates
        .into_iter()
        .filter_map(|candidate| Some((slips(word, &folded, candidate, limit)?, candidate)))
        .min_by_key(|&(slips, _)| slips)
        .map(|(_, candidate)| candidate)
}

/// Slips between word and candidate, 0 where only case differs; `None` above the limit. A single letter resembles any
/// other, so it counts only against a candidate of one letter where case alone differs.
fn slips(word: &str, folded: &str, candidate: &str, limit: usize) -> Option<usize> {
    if candidate.to_lowercase() == folded {
        return Some(0);
    }
    let (length, other) = (word.chars().count(), candidate.chars().count());
    if length < 2 || other < 2 || length.abs_diff(other) > limit {
        return None;
    }
    Some(strsim::damerau_levenshtein(word, candidate)).filter(|&slips| slips <= limit)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_nearest_word_is_found_or_none() {
        let words = ["species", "symbol", "upper", "lower", "unit", "r", "K", "Nmax"];
        for (word, expected) in [
            ("speceis", Some("species")),
            ("uper", Some("upper")),
            ("lover", Some("lower")),
            ("R", Some("r")),
            ("k", Some("K")),
            ("nmax", Some("Nmax")),
            ("q", None),
            ("anything", None),
            ("", None),
        ] {
            assert_eq!(nearest(word, words), expected, "{word}");
        }
    }
}
