//! The known word that a misspelt one was probably meant to be.

use strsim::damerau_levenshtein;

/// Letters of the longest word that is compared letter by letter; the cost grows with the square.
const LONGEST: usize = 64;

/// Candidates that are looked at; files with more names than this are not written by hand.
const MOST: usize = 1_000;

/// The candidate nearest to `word`: equal but for case, or within a third of its length in edits (Damerau 1964);
/// the first of those equally near. Words of more than 64 letters resemble only those equal but for case; only the first
/// 1,000 candidates are looked at.
pub fn nearest<'c>(word: &str, candidates: impl IntoIterator<Item = &'c str>) -> Option<&'c str> {
    let folded = word.to_lowercase();
    let length = word.chars().count();
    let allowed = (length / 3).max(1);
    candidates
        .into_iter()
        .take(MOST)
        .filter(|candidate| *candidate != word)
        .filter_map(|candidate| Some((edits(&folded, word, length, candidate, allowed)?, candidate)))
        .min_by_key(|&(distance, _)| distance)
        .map(|(_, candidate)| candidate)
}

/// Edits between two words, up to `allowed` and fewer than the candidate has letters; none where only case differs.
fn edits(folded: &str, word: &str, length: usize, candidate: &str, allowed: usize) -> Option<usize> {
    if candidate.chars().flat_map(char::to_lowercase).eq(folded.chars()) {
        return Some(0);
    }
    let other = candidate.chars().count();
    let differing = (letters(word) ^ letters(candidate)).count_ones() as usize;
    if length.max(other) > LONGEST || length.abs_diff(other) > allowed || differing > 2 * allowed {
        return None;
    }
    Some(damerau_levenshtein(word, candidate)).filter(|&distance| distance <= allowed && distance < other)
}

/// A bit for each kind of character in a word, 64 kinds in all. An edit changes two bits at most, so that most words are
/// told apart without being compared letter by letter.
fn letters(word: &str) -> u64 {
    word.chars().fold(0, |bits, c| bits | 1 << (u32::from(c) % 64))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_the_meant_word() {
        let check = |word, expected| {
            assert_eq!(nearest(word, ["species", "parameters", "scenarios", "r", "K"]), expected, "{word}");
        };
        check("specis", Some("species"));
        check("Species", Some("species"));
        check("scenraios", Some("scenarios"));
        check("k", Some("K"));
        check("colour", None);
        check("pqrameterz", Some("parameters"));
        check("x", None);
        check("", None);
    }

    #[test]
    fn long_words_cost_nothing() {
        let (word, other) = ("a".repeat(500_000), format!("{}b", "a".repeat(499_999)));
        assert_eq!(nearest(&word, [other.as_str()]), None);
        let upper = word.to_uppercase();
        assert_eq!(nearest(&word, [upper.as_str()]), Some(upper.as_str()));
    }
}
