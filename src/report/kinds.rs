//! The one table of kinds of equilibria: the contract's words, the glyphs that sketches, lists and screens use, and the
//! strokes of branches.
//!
//! A disc is filled for stable, hollow for unstable, half for a saddle; in ASCII the same by letters and signs. A branch is
//! solid where it is stable, dashed where it is a saddle, dotted where it is unstable. Colour, where there is any, only
//! repeats the glyph.

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
    /// How a branch of it is drawn.
    pub stroke: Stroke,
}

/// How a branch is drawn: every cell that it runs through holds the sign, so that steep parts have no gaps.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Stroke {
    /// What it means, for all kinds that share it.
    pub word: &'static str,
    /// Its sign.
    pub glyph: char,
    /// Its sign in ASCII.
    pub ascii: char,
}

const fn stroke(word: &'static str, [glyph, ascii]: [char; 2]) -> Stroke {
    Stroke { word, glyph, ascii }
}

/// Every stroke; where branches cross, an earlier one is drawn over a later one.
pub const STROKES: [Stroke; 5] = [SOLID, DOUBLE, OPEN, DASHED, DOTTED];

const SOLID: Stroke = stroke("stable", ['█', '#']);
const DOUBLE: Stroke = stroke("centre", ['=', '=']);
const OPEN: Stroke = stroke("undecided", ['?', '?']);
const DASHED: Stroke = stroke("saddle", ['╌', '-']);
const DOTTED: Stroke = stroke("unstable", ['░', ':']);

/// Written after the glyph in lists where paths wind around.
pub const SPIRALS: char = '~';

/// How an equilibrium without a linear part, or not classified, is drawn: as an undecided one.
pub const UNKNOWN: Look = look(Kind::Undecided, "undecided", ['?', '?'], false, OPEN);

const fn look(kind: Kind, word: &'static str, [glyph, ascii]: [char; 2], spirals: bool, stroke: Stroke) -> Look {
    Look { kind, word, glyph, ascii, spirals, stroke }
}

const STABLE: [char; 2] = ['●', '@'];
const UNSTABLE: [char; 2] = ['○', 'o'];

/// Every kind.
pub const KINDS: [Look; 11] = [
    look(Kind::StableNode, "stable node", STABLE, false, SOLID),
    look(Kind::StableSpiral, "stable spiral", STABLE, true, SOLID),
    look(Kind::StableStar, "stable star", STABLE, false, SOLID),
    look(Kind::StableImproperNode, "stable improper node", STABLE, false, SOLID),
    look(Kind::UnstableNode, "unstable node", UNSTABLE, false, DOTTED),
    look(Kind::UnstableSpiral, "unstable spiral", UNSTABLE, true, DOTTED),
    look(Kind::UnstableStar, "unstable star", UNSTABLE, false, DOTTED),
    look(Kind::UnstableImproperNode, "unstable improper node", UNSTABLE, false, DOTTED),
    look(Kind::Saddle, "saddle", ['◐', '%'], false, DASHED),
    look(Kind::Centre, "centre", ['=', '='], false, DOUBLE),
    UNKNOWN,
];

/// How a kind is written.
pub fn of(kind: Kind) -> Look {
    KINDS.into_iter().find(|look| look.kind == kind).unwrap_or(UNKNOWN)
}

#[cfg(test)]
mod tests {
    use super::{KINDS, STROKES, of};

    #[test]
    fn every_kind_has_one_look_and_a_word_of_its_own() {
        for (k, look) in KINDS.iter().enumerate() {
            assert_eq!(of(look.kind), *look);
            assert!(look.ascii.is_ascii() && look.stroke.ascii.is_ascii());
            assert!(STROKES.contains(&look.stroke) && look.word.starts_with(look.stroke.word));
            assert!(KINDS[..k].iter().all(|other| other.word != look.word && other.kind != look.kind));
        }
    }
    #[test]
    fn no_two_strokes_are_alike() {
        for (k, stroke) in STROKES.iter().enumerate() {
            let differs = |other: &super::Stroke| {
                other.word != stroke.word && other.glyph != stroke.glyph && other.ascii != stroke.ascii
            };
            assert!(STROKES[..k].iter().all(differs), "{stroke:?}");
        }
    }
}
