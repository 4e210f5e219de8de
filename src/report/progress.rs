//! How far a search has come, in words.

use crate::analysis::equilibria::Progress;

/// What is done: faces, what share of all of them that is where it is known, and boxes.
///
/// The share is rounded downwards, so that 100 % is said of nothing that goes on.
pub fn done(progress: Progress) -> String {
    let Progress { faces, boxes, .. } = progress;
    match progress.hundredths() {
        0 => format!("{faces} faces, {boxes} boxes"),
        share => format!("{faces} faces ({share} % of all), {boxes} boxes"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_share_is_said_where_it_is_known() {
        let whole = Progress::WHOLE;
        for (faces, share, text) in [
            (0, 0, "0 faces, 7 boxes"),
            (38, 0, "38 faces, 7 boxes"),
            (38, whole / 64 * 38, "38 faces (59 % of all), 7 boxes"),
            (1, whole / 100, "1 faces, 7 boxes"),
            (63, whole - 1, "63 faces (99 % of all), 7 boxes"),
            (64, whole, "64 faces (100 % of all), 7 boxes"),
        ] {
            assert_eq!(done(Progress { faces, boxes: 7, share }), text);
        }
    }
}
