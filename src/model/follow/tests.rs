//! Texts as YAML unfolds them, followed back to the bytes that they came from.

use proptest::prelude::*;

use super::super::events::{Events, What};
use super::*;

/// A word, and how it is parted from the next.
type Part = (String, Gap);

#[derive(Clone, Copy, Debug)]
enum Gap {
    /// Blanks within a line.
    Spaces(usize),
    /// A new line; more than one makes empty lines between.
    Lines(usize),
    /// A backslash before the break, in double quotes.
    Escaped,
}

/// A document under construction: the text, and for each character of the value its byte in the text.
#[derive(Default)]
struct Writer {
    text: String,
    value: String,
    origins: Vec<usize>,
}

impl Writer {
    fn silent(&mut self, text: &str) {
        self.text.push_str(text);
    }

    fn made(&mut self, raw: &str, c: char) {
        self.origins.push(self.text.len());
        self.value.push(c);
        self.text.push_str(raw);
    }

    fn flow_gap(&mut self, gap: Gap, style: Style) {
        match gap {
            Gap::Spaces(count) => (0..count).for_each(|_| self.made(" ", ' ')),
            Gap::Lines(1) => {
                self.silent("  ");
                self.made("\n", ' ');
                self.silent("    ");
            }
            Gap::Lines(count) => {
                self.silent("\n");
                (1..count).for_each(|_| self.made("\n", '\n'));
                self.silent("   ");
            }
            Gap::Escaped if style == Style::DoubleQuoted => self.silent("\\\n     "),
            Gap::Escaped => self.made(" ", ' '),
        }
    }

    fn word(&mut self, word: &str, style: Style) {
        for c in word.chars() {
            match (style, c) {
                (Style::SingleQuoted, '\'') => self.made("''", c),
                (Style::DoubleQuoted, '"') => self.made("\\\"", c),
                (Style::DoubleQuoted, 'é') => self.made("\\u00e9", c),
                (Style::DoubleQuoted, 'α') => self.made("\\U000003b1", c),
                (Style::DoubleQuoted, 'x') => self.made("\\x78", c),
                _ => self.made(c.encode_utf8(&mut [0; 4]), c),
            }
        }
    }

    fn flow(&mut self, parts: &[Part], style: Style) {
        let quote = match style {
            Style::SingleQuoted => "'",
            Style::DoubleQuoted => "\"",
            _ => "",
        };
        self.silent("ключ: ");
        self.silent(quote);
        for (index, (word, gap)) in parts.iter().enumerate() {
            self.word(word, style);
            if index + 1 < parts.len() {
                self.flow_gap(*gap, style);
            }
        }
        self.silent(quote);
        self.silent("\nnext: 1\n");
    }

    /// One line a part: `Spaces` indents the next line deeper, `Lines` leaves empty lines before it.
    fn block(&mut self, parts: &[Part], style: Style, line_break: &str) {
        self.silent(if style == Style::Literal { "key: |\n" } else { "key: >-  # why\n" });
        let mut before = Gap::Lines(1);
        for (index, (word, gap)) in parts.iter().enumerate() {
            if index > 0 {
                self.block_break(before, *gap, style, line_break);
            }
            self.silent("   ");
            if let (Gap::Spaces(count), true) = (*gap, index > 0) {
                (0..count).for_each(|_| self.made(" ", ' '));
            }
            word.chars().for_each(|c| self.made(c.encode_utf8(&mut [0; 4]), c));
            before = if index == 0 { Gap::Lines(1) } else { *gap };
        }
        if style == Style::Literal {
            self.made(line_break, '\n');
        } else {
            self.silent(line_break);
        }
        self.silent("next: 1\n");
    }

    fn block_break(&mut self, before: Gap, here: Gap, style: Style, line_break: &str) {
        let empty = if let Gap::Lines(count) = here { count - 1 } else { 0 };
        let deeper = matches!(before, Gap::Spaces(_)) || matches!(here, Gap::Spaces(_));
        match (style, deeper, empty) {
            (Style::Literal, ..) | (_, true, _) => self.made(line_break, '\n'),
            (_, false, 0) => self.made(line_break, ' '),
            (_, false, _) => self.silent(line_break),
        }
        (0..empty).for_each(|_| self.made(line_break, '\n'));
    }
}

fn check(writer: &Writer, style: Style) {
    let scalar = Events::new(&writer.text)
        .into_iter()
        .flatten()
        .map_while(Result::ok)
        .filter_map(|event| match event.what {
            What::Scalar { value, style } => Some((value, style, event.span)),
            _ => None,
        })
        .nth(1)
        .expect("a value");
    let (value, parsed, span) = scalar;
    assert_eq!((value.as_str(), parsed), (writer.value.as_str(), style), "{}", writer.text);
    let followed = origin(&writer.text, span, style, &value);
    assert_eq!(followed.len(), value.len() + 1, "{:?}", writer.text);
    for ((byte, c), expected) in value.char_indices().zip(&writer.origins) {
        assert_eq!(followed[byte] as usize, *expected, "{c:?} in {:?}", writer.text);
    }
}

fn parts() -> impl Strategy<Value = Vec<Part>> {
    let gap = prop_oneof![(1_usize..3).prop_map(Gap::Spaces), (1_usize..4).prop_map(Gap::Lines), Just(Gap::Escaped),];
    proptest::collection::vec(("[a-zéα魚S][xéα魚S+*()'\"\u{1F41F}]{0,5}", gap), 1..6)
}

/// Blocks have no escapes; an escaped break is a plain one there.
fn lines_only(parts: Vec<Part>) -> Vec<Part> {
    let plain = |gap| if matches!(gap, Gap::Escaped) { Gap::Lines(1) } else { gap };
    parts.into_iter().map(|(word, gap)| (word, plain(gap))).collect()
}

proptest! {
    #[test]
    fn every_character_of_a_flow_scalar_is_found(parts in parts()) {
        for style in [Style::Plain, Style::SingleQuoted, Style::DoubleQuoted] {
            let mut writer = Writer::default();
            writer.flow(&parts, style);
            check(&writer, style);
        }
    }

    #[test]
    fn every_character_of_a_block_scalar_is_found(parts in parts().prop_map(lines_only), crlf in any::<bool>()) {
        for style in [Style::Literal, Style::Folded] {
            let mut writer = Writer::default();
            writer.block(&parts, style, if crlf { "\r\n" } else { "\n" });
            check(&writer, style);
        }
    }
}

#[test]
fn a_value_that_the_text_does_not_make_has_no_origin() {
    let source = "a: b + c\n";
    for value in ["b + d", "b", "b + c + d", ""] {
        assert_eq!(origin(source, Span::new(3, 8), Style::Plain, value), Vec::<u32>::new(), "{value}");
    }
    assert_eq!(origin(source, Span::new(3, 99), Style::Plain, "b + c"), Vec::<u32>::new());
}

#[test]
fn the_end_of_a_chomped_block_is_its_last_break() {
    let source = "a: >-\n  b\n\n\nc: 1\n";
    assert_eq!(origin(source, Span::new(3, 12), Style::Folded, "b"), [8, 9]);
}
