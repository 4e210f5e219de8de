//! The known word that a misspelt one was probably meant to be.

use strsim::damerau_levenshtein;

/// The candidate nearest to `word`: equal but for case, or within a third of its length in edits (Damerau 1964);
/// the first of those equally near.
pub fn nearest<'c>(word: &str, candidates: impl IntoIterator<Item = &'c str>) -> Option<&'c str> {
    let folded = word.to_lowercase();
    let allowed = (word.chars().count() / 3).max(1);
    candidates
        .into_iter()
        .filter(|candidate| *candidate != word)
        .map(|candidate| (edits(&folded, word, candidate), candidate))
        .filter(|&(distance, candidate)| distance <= allowed && distance < candidate.chars().count())
        .min_by_key(|&(distance, _)| distance)
        .map(|(_, candidate)| candidate)
}

/// Edits between two words; none where only case differs.
fn edits(folded: &str, word: &str, candidate: &str) -> usize {
    if candidate.to_lowercase() == folded { 0 } else { damerau_levenshtein(word, candidate) }
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
        check("x", None);
        check("", None);
    }
}
