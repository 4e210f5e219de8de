//! Words in lines: the one place where a text is broken.
//!
//! Widths are those of a terminal (UAX #11), not bytes or characters. A word is never broken here; one that is longer than
//! a line has a line of its own. What lines up in columns is the business of those who use it.

use unicode_width::UnicodeWidthStr;

/// Words with a space between, from column `start` on, to the column `width`; further lines are indented by `indent`.
pub(super) fn wrapped<'w>(
    words: impl IntoIterator<Item = &'w str>,
    start: usize,
    indent: usize,
    width: usize,
) -> String {
    let mut text = String::new();
    let mut column = start;
    for (place, word) in words.into_iter().enumerate() {
        if place > 0 && column + 1 + word.width() > width {
            text.push('\n');
            text.push_str(&" ".repeat(indent));
            column = indent;
        } else if place > 0 {
            text.push(' ');
            column += 1;
        }
        text.push_str(word);
        column += word.width();
    }
    text
}

/// Words of a text in lines that begin in column `indent`, the first of them after `first`, which must be shorter.
pub(super) fn paragraph(first: &str, text: &str, indent: usize, width: usize) -> String {
    let body = wrapped(text.split_whitespace(), indent, indent, width);
    format!("{}\n", format!("{first:indent$}{body}").trim_end())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_break_between_words() {
        let long = "x".repeat(50);
        assert_eq!(wrapped([long.as_str(), long.as_str()], 4, 2, 80), format!("{long}\n  {long}"));
        assert_eq!(wrapped(["a", "b"], 77, 2, 80), "a b");
        assert_eq!(wrapped(["a", "b"], 78, 2, 80), "a\n  b");
    }

    #[test]
    fn paragraphs_hang_behind_their_first_word() {
        assert_eq!(paragraph("a", "bb cc dd", 3, 8), "a  bb cc\n   dd\n");
        assert_eq!(paragraph("", "bbbbbbbbbb c", 2, 8), "  bbbbbbbbbb\n  c\n");
        assert_eq!(paragraph("  a", "", 6, 8), "  a\n");
    }
}
