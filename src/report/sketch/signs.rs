//! The signs of a sketch, in Unicode and in ASCII. Those of equilibria come from the table of kinds, and from nowhere else.
//!
//! Of what else there is, each has a sign of its own in either style, so that nothing is told by colour alone.

use super::Style;
use crate::analysis::field::{Octant, Slice};
use crate::report::grid::Ink;
use crate::report::kinds::{Look, SPIRALS};

/// Whose growth is 0 in a cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Growth {
    /// That of the species across.
    Across,
    /// That of the species upwards.
    Upwards,
    /// That of both.
    Both,
}

/// What is drawn in a cell.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Mark {
    /// Nothing.
    Blank,
    /// A part, counted from 0, of the sign of a direction.
    Flow(Octant, usize),
    /// The rate 0, in the profile of one species.
    Level,
    /// The rate itself, there.
    Rate,
    /// Zero growth.
    Growth(Growth),
    /// A line that divides paths.
    Divide,
    /// A straight path, which way the state moves on it, and whether the tip of its arrow is here.
    Straight(Octant, bool),
    /// The path from the point that the user moves.
    Forwards,
    /// The path that leads to it.
    Backwards,
    /// Where a path is after so many units of its scale; 1 to 9.
    Moment(u8),
    /// Today's stocks.
    Now,
    /// The point that the user moves.
    Point,
    /// An equilibrium.
    State(Look),
    /// The equilibrium that is selected.
    Chosen(Look),
    /// A letter of an equilibrium's name.
    Letter(char),
    /// A letter of the selected one's name, and the brackets around it.
    ChosenLetter(char),
}

/// Columns from one sign of a direction to the next; with the height of a cell the lattice is about square.
pub fn spacing(style: Style) -> usize {
    match style {
        Style::Unicode => 2,
        Style::Ascii => 4,
    }
}

/// The sign of a direction.
///
/// ASCII has no slanting arrows, so there a sign is a stroke with its tip beside it, on the side that it points to.
pub fn flow(octant: Octant, style: Style) -> &'static str {
    const UNICODE: [&str; Octant::COUNT] = ["→", "↗", "↑", "↖", "←", "↙", "↓", "↘"];
    const ASCII: [&str; Octant::COUNT] = ["->", "/^", "^", "^\\", "<-", "v/", "v", "\\v"];
    match style {
        Style::Unicode => UNICODE[octant.index()],
        Style::Ascii => ASCII[octant.index()],
    }
}

/// The sign of a straight path.
fn straight(octant: Octant, is_tip: bool, style: Style) -> char {
    const UNICODE: [char; Octant::COUNT] = ['⇒', '⇗', '⇑', '⇖', '⇐', '⇙', '⇓', '⇘'];
    const TIPS: [char; Octant::COUNT] = ['>', '^', '^', '^', '<', 'v', 'v', 'v'];
    const STROKES: [char; Octant::COUNT] = ['-', '/', '|', '\\', '-', '/', '|', '\\'];
    match (style, is_tip) {
        (Style::Unicode, _) => UNICODE[octant.index()],
        (Style::Ascii, true) => TIPS[octant.index()],
        (Style::Ascii, false) => STROKES[octant.index()],
    }
}

impl Mark {
    /// Its character.
    pub fn glyph(self, style: Style) -> char {
        let either = |unicode: char, ascii: char| if style == Style::Unicode { unicode } else { ascii };
        match self {
            Mark::Blank => ' ',
            Mark::Flow(octant, part) => flow(octant, style).chars().nth(part).unwrap_or(' '),
            Mark::Level => either('─', '-'),
            Mark::Rate | Mark::Growth(Growth::Across) => either('▓', '#'),
            Mark::Growth(Growth::Upwards) => either('░', ':'),
            Mark::Growth(Growth::Both) => either('█', '&'),
            Mark::Divide => either('•', '+'),
            Mark::Straight(octant, is_tip) => straight(octant, is_tip, style),
            Mark::Forwards => either('×', 'x'),
            Mark::Backwards => '.',
            Mark::Moment(digit) => char::from_digit(u32::from(digit), 10).unwrap_or('?'),
            Mark::Now => either('◆', '*'),
            Mark::Point => either('╳', 'X'),
            Mark::State(look) | Mark::Chosen(look) => either(look.glyph, look.ascii),
            Mark::Letter(c) | Mark::ChosenLetter(c) => c,
        }
    }

    /// What it means, for whoever shows it: that repeats what the sign says. The slice says whose growth a curve is.
    pub fn ink(self, slice: &Slice) -> Ink {
        match self {
            Mark::Blank | Mark::Level => Ink::Plain,
            Mark::Flow(..) => Ink::Faint,
            Mark::Growth(Growth::Across) | Mark::Rate => Ink::Species(slice.x),
            Mark::Growth(Growth::Upwards) => Ink::Species(slice.y.unwrap_or(slice.x)),
            Mark::Now => Ink::Now,
            Mark::Point => Ink::Point,
            Mark::Forwards | Mark::Backwards | Mark::Moment(_) => Ink::Path,
            Mark::Chosen(_) | Mark::ChosenLetter(_) => Ink::Chosen,
            Mark::Growth(Growth::Both) | Mark::Divide | Mark::Straight(..) | Mark::State(_) | Mark::Letter(_) => {
                Ink::Strong
            }
        }
    }
}

/// The sign of an equilibrium in a list.
pub(super) fn listed(look: Look, style: Style) -> String {
    let mut sign = String::from(Mark::State(look).glyph(style));
    sign.push(if look.spirals { SPIRALS } else { ' ' });
    sign
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::kinds::KINDS;

    fn octants() -> Vec<Octant> {
        let at = |k: usize| {
            let (sin, cos) = (k as f64 * std::f64::consts::FRAC_PI_4).sin_cos();
            Octant::of([cos, sin]).unwrap()
        };
        (0..Octant::COUNT).map(at).collect()
    }

    #[test]
    fn each_sign_means_one_thing() {
        for style in [Style::Unicode, Style::Ascii] {
            let mut signs: Vec<String> = octants().into_iter().map(|octant| flow(octant, style).to_owned()).collect();
            let others = [
                Mark::Growth(Growth::Across),
                Mark::Growth(Growth::Upwards),
                Mark::Growth(Growth::Both),
                Mark::Divide,
                Mark::Now,
                Mark::Point,
                Mark::Forwards,
                Mark::Backwards,
            ];
            signs.extend(others.map(|mark| mark.glyph(style).to_string()));
            let mut states: Vec<String> =
                KINDS.iter().map(|&look| Mark::State(look).glyph(style).to_string()).collect();
            states.sort();
            states.dedup();
            signs.extend(states);
            for (k, sign) in signs.iter().enumerate() {
                assert!(!signs[..k].contains(sign), "{sign} means two things");
                assert!(style == Style::Unicode || sign.is_ascii(), "{sign}");
                assert!(sign.chars().count() < spacing(style), "{sign} touches the next");
            }
        }
    }

    #[test]
    fn ascii_tips_are_on_the_side_that_they_point_to() {
        for octant in octants() {
            let tip = straight(octant, true, Style::Ascii);
            let sign = flow(octant, Style::Ascii);
            assert!(sign.contains(tip), "{sign} {tip}");
            let points_right = [0, 1, 7].contains(&octant.index());
            assert!(sign.len() == 1 || sign.ends_with(tip) == points_right, "{sign}");
            assert_eq!(straight(octant, false, Style::Ascii), straight(octant.opposite(), false, Style::Ascii));
        }
    }
}
