//! Frames painted one after another, and read back by a terminal that is not ours.

use std::num::NonZeroU16;

use proptest::collection::vec;
use proptest::prelude::*;
use ratatui::layout::Rect;
use ratatui::style::Style as Dress;

use super::*;

const COLOURS: [Color; 5] = [Color::Reset, Color::Red, Color::Cyan, Color::Indexed(74), Color::Rgb(230, 159, 0)];
const MODIFIERS: [Modifier; 6] = [
    Modifier::empty(),
    Modifier::BOLD,
    Modifier::DIM,
    Modifier::REVERSED,
    Modifier::BOLD.union(Modifier::REVERSED),
    Modifier::BOLD.union(Modifier::ITALIC),
];
/// With what no frame should hold, and what a terminal may hold for wider than we do.
const GLYPHS: [&str; 16] =
    [" ", " ", " ", " ", "a", "Z", "~", "■", "─", "é", "e\u{301}", "漢", "🐟", "", "\u{7}", "\u{200b}"];

/// A change of a frame: where, which glyph, which colour and modifier.
type Change = (usize, usize, usize, usize);

fn terminal(columns: u16, rows: u16) -> vt100::Parser {
    let size = |n| NonZeroU16::new(n).expect("not empty");
    vt100::Parser::new(size(rows), size(columns), 0)
}

fn colour(colour: Color) -> vt100::Color {
    match colour {
        Color::Red => vt100::Color::Idx(1),
        Color::Cyan => vt100::Color::Idx(6),
        Color::Indexed(index) => vt100::Color::Idx(index),
        Color::Rgb(red, green, blue) => vt100::Color::Rgb(red, green, blue),
        _ => vt100::Color::Default,
    }
}

/// What a reader of the terminal should see of a glyph.
fn seen(glyph: &str, room: usize, style: Style) -> &str {
    match glyph {
        "" => " ",
        "漢" | "🐟" if room < 2 => " ",
        "\u{7}" | "\u{200b}" => "?",
        _ if style == Style::Ascii && !glyph.is_ascii() => "?",
        _ => glyph,
    }
}

fn compare(frame: &Buffer, screen: &vt100::Screen, style: Style, depth: Depth) -> Result<(), TestCaseError> {
    let Rect { width, height, .. } = frame.area;
    for y in 0..height {
        let mut x = 0;
        while x < width {
            let cell = &frame[(x, y)];
            let expected = seen(cell.symbol(), usize::from(width - x), style);
            let found = screen.cell(y, x).expect("inside");
            let text = if found.contents().is_empty() { " " } else { found.contents() };
            prop_assert_eq!(text, expected, "column {}, row {}", x, y);
            let is_reversed = cell.modifier.contains(Modifier::REVERSED);
            prop_assert_eq!(found.inverse(), is_reversed, "column {}, row {}", x, y);
            if expected != " " || is_reversed {
                let shown = if depth == Depth::None { Color::Reset } else { cell.fg };
                prop_assert_eq!(found.fgcolor(), colour(shown));
                prop_assert_eq!(found.bold(), cell.modifier.contains(Modifier::BOLD));
                prop_assert_eq!(found.dim(), cell.modifier.contains(Modifier::DIM));
                prop_assert!(!found.italic() && found.bgcolor() == vt100::Color::Default);
            }
            x += if ["漢", "🐟"].contains(&expected) { 2 } else { 1 };
        }
    }
    Ok(())
}

fn play(size: (u16, u16), frames: &[Vec<Change>], style: Style, depth: Depth) -> Result<(), TestCaseError> {
    let (columns, rows) = size;
    let mut painter = Painter::new(style, depth);
    let mut terminal = terminal(columns, rows);
    // What stood there before must not shine through.
    terminal.process("x".repeat(usize::from(columns) * usize::from(rows)).as_bytes());
    let mut frame = Buffer::empty(Rect::new(0, 0, columns, rows));
    for changes in frames {
        for &(place, glyph, colour, modifier) in changes {
            let place = place % frame.content.len();
            frame.content[place].reset();
            frame.content[place].set_symbol(GLYPHS[glyph]);
            frame.content[place].set_style(Dress::default().fg(COLOURS[colour]).add_modifier(MODIFIERS[modifier]));
        }
        let mut out = Vec::new();
        painter.paint(frame.clone(), &mut out).expect("a vector takes everything");
        prop_assert!(style == Style::Unicode || out.is_ascii());
        terminal.process(&out);
        compare(&frame, terminal.screen(), style, depth)?;
        let mut again = Vec::new();
        painter.paint(frame.clone(), &mut again).expect("a vector takes everything");
        prop_assert_eq!(again.len(), 0, "nothing has changed");
    }
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn the_terminal_shows_every_frame(
        size in (1u16..30, 1u16..8),
        frames in vec(vec((0usize..1000, 0..GLYPHS.len(), 0..COLOURS.len(), 0..MODIFIERS.len()), 0..60), 1..6),
        ascii in any::<bool>(),
        colours in any::<bool>(),
    ) {
        let style = if ascii { Style::Ascii } else { Style::Unicode };
        play(size, &frames, style, if colours { Depth::Any } else { Depth::None })?;
    }
}

/// The bytes of a change of some texts at some places.
fn bytes(before: &[(u16, u16, &str)], after: &[(u16, u16, &str)]) -> Vec<u8> {
    let frame = |texts: &[(u16, u16, &str)]| {
        let mut frame = Buffer::empty(Rect::new(0, 0, 40, 5));
        for (x, y, text) in texts {
            frame.set_string(*x, *y, text, Dress::default());
        }
        frame
    };
    let mut painter = Painter::new(Style::Unicode, Depth::Any);
    let mut out = Vec::new();
    painter.paint(frame(before), &mut out).expect("a vector takes everything");
    out.clear();
    painter.paint(frame(after), &mut out).expect("a vector takes everything");
    out
}

#[test]
fn the_shortest_way_is_taken() {
    let check = |before: &[(u16, u16, &str)], after: &[(u16, u16, &str)], expected: &str| {
        assert_eq!(String::from_utf8_lossy(&bytes(before, after)), expected);
    };
    check(&[(3, 2, "12.5")], &[(3, 2, "17.9")], "\x1b[3;5H7.9");
    check(&[], &[(0, 0, "a"), (12, 0, "b")], "\x1b[Ha\x1b[11Cb");
    check(&[], &[(5, 1, "ab"), (5, 2, "cd")], "\x1b[2;6Hab\n\x08\x08cd");
    check(&[], &[(20, 1, "ab"), (2, 2, "cd")], "\x1b[2;21Hab\n\r  cd");
    check(&[(4, 1, "long text")], &[(4, 1, "long")], "\x1b[2;10H\x1b[K");
    check(&[(4, 1, "long text"), (20, 1, "!")], &[(20, 1, "!")], "\x1b[2;5H         ");
    check(&[], &[(4, 1, "漢a")], "\x1b[2;5H漢a");
    check(&[(5, 0, "b")], &[(0, 0, "漢"), (6, 0, "b")], "\x1b[H漢\x1b[;6H b");
}
