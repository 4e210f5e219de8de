//! The one table of kinds of equilibria: the contract's words, and the glyphs that sketches, lists and screens use.
//!
//! A disc is filled for stable, hollow for unstable, half for a saddle; in ASCII the same by letters and signs. Colour, where
//! there is any, only repeats the glyph.

use crate::analysis::linearise::Kind;

/// How one kind is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Look {
    /// The kind.
    pub kind: Kind,
    /// The contract's word.
    pub word: &'static str,
    /// Its glyph.
    pub glyph: char,
    /// Its glyph in ASCII.
    pub ascii: char,
    /// Whether paths wind around it: lists write [`SPIRALS`] after the glyph.
    pub spirals: bool,
}

/// Written after the glyph in lists where paths wind around.
pub const SPIRALS: char = '~';

/// How an equilibrium without a linear part, or not classified, is drawn: as an undecided one.
pub const UNKNOWN: Look = Look { kind: Kind::Undecided, word: "undecided", glyph: '?', ascii: '?', spirals: false };

const fn look(kind: Kind, word: &'static str, [glyph, ascii]: [char; 2], spirals: bool) -> Look {
    Look { kind, word, glyph, ascii, spirals }
}

const STABLE: [char; 2] = ['●', '@'];
const UNSTABLE: [char; 2] = ['○', 'o'];

/// Every kind.
pub const KINDS: [Look; 11] = [
    look(Kind::StableNode, "stable node", STABLE, false),
    look(Kind::StableSpiral, "stable spiral", STABLE, true),
    look(Kind::StableStar, "stable star", STABLE, false),
    look(Kind::StableImproperNode, "stable improper node", STABLE, false),
    look(Kind::UnstableNode, "unstable node", UNSTABLE, false),
    look(Kind::UnstableSpiral, "unstable spiral", UNSTABLE, true),
    look(Kind::UnstableStar, "unstable star", UNSTABLE, false),
    look(Kind::UnstableImproperNode, "unstable improper node", UNSTABLE, false),
    look(Kind::Saddle, "saddle", ['◐', '%'], false),
    look(Kind::Centre, "centre", ['=', '='], false),
    UNKNOWN,
];

/// How a kind is written.
pub fn of(kind: Kind) -> Look {
    KINDS.into_iter().find(|look| look.kind == kind).unwrap_or(UNKNOWN)
}

#[cfg(test)]
mod tests {
    use super::{KINDS, of};

    #[test]
    fn every_kind_has_one_look_and_a_word_of_its_own() {
        for (k, look) in KINDS.iter().enumerate() {
            assert_eq!(of(look.kind), *look);
            assert!(look.ascii.is_ascii());
            assert!(KINDS[..k].iter().all(|other| other.word != look.word && other.kind != look.kind));
        }
    }
}
