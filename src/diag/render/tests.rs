//! Rendered messages, word for word: excerpt, caret, and places at the edges of a text.

use proptest::prelude::*;

use super::*;
use crate::diag::SourceId;

fn check(text: &str, span: (usize, usize), expected: &str) {
    let mut sources = Sources::default();
    let source = sources.add("m.yaml", text);
    let at = Location { source, span: Span::new(span.0, span.1) };
    let diagnostic = Diagnostic::error(at, "nothing is called \"foo\"").expected("a name").help("declare \"foo\"");
    assert_eq!(render(&diagnostic, &sources, false), expected);
}

#[test]
fn the_line_is_shown_with_a_caret() {
    check(
        "title: x\nrate: foo*N\n",
        (15, 18),
        "\
error: nothing is called \"foo\"
 --> m.yaml:2:7
  |
2 | rate: foo*N
  |       ^^^ expected a name
  |
  = help: declare \"foo\"
",
    );
}

#[test]
fn columns_count_characters_and_a_carriage_return_is_not_shown() {
    check(
        "title: x\r\nαβ: foo\r\n",
        (16, 19),
        "\
error: nothing is called \"foo\"
 --> m.yaml:2:5
  |
2 | αβ: foo
  |     ^^^ expected a name
  |
  = help: declare \"foo\"
",
    );
}

#[test]
fn a_place_past_the_end_is_shown_at_the_end() {
    check(
        "ab",
        (70, 90),
        "\
error: nothing is called \"foo\"
 --> m.yaml:1:3
  |
1 | ab
  |   ^ expected a name
  |
  = help: declare \"foo\"
",
    );
}

#[test]
fn related_places_follow() {
    let mut sources = Sources::default();
    let source = sources.add("m.yaml", "a: 1\nb: 2\na: 3\n");
    let at = |start, end| Location { source, span: Span::new(start, end) };
    let diagnostic = Diagnostic::warning(at(10, 11), "the key \"a\" stands twice").related(at(0, 1), "first here");
    assert_eq!(
        render(&diagnostic, &sources, false),
        "\
warning: the key \"a\" stands twice
 --> m.yaml:3:1
  |
3 | a: 3
  | ^
  |
 ::: m.yaml:1:1
  |
1 | a: 1
  | - first here
"
    );
}

#[test]
fn long_lines_are_clipped_around_the_place_but_the_column_is_the_files() {
    let text = format!("{}foo{}", "é".repeat(5000), "x".repeat(5000));
    let mut sources = Sources::default();
    let source = sources.add("m.yaml", text);
    let at = Location { source, span: Span::new(10_000, 10_003) };
    let shown = render(&Diagnostic::error(at, "here"), &sources, false);
    assert!(shown.contains("m.yaml:1:5001"), "{shown}");
    assert!(shown.contains("^^^"), "{shown}");
    assert!(shown.len() < 1200, "{shown}");
    assert_eq!(position(&sources, at), ("m.yaml".to_owned(), 1, 5001));
}

#[test]
fn a_name_or_message_cannot_reach_the_terminal_raw() {
    let mut sources = Sources::default();
    let source = sources.add("m\u{1b}[2J.yaml", "a: \u{1b}[31m\u{202e}");
    let at = Location { source, span: Span::new(3, 4) };
    let diagnostic = Diagnostic::error(at, "bad \u{1b}[31m").expected("\u{9b}").help("\u{7}").related(at, "\u{202e}");
    let shown = render(&diagnostic, &sources, false);
    assert!(shown.chars().all(|c| c == '\n' || !is_hostile(c)), "{shown:?}");
}

proptest! {
    /// The renderer below panics on reversed, overlong and mid-character spans; none may reach it.
    #[test]
    fn no_span_is_too_odd(text in "[aé\u{1F41F}\t\r\n\u{1b}]{0,40}", start in 0_usize..200, end in 0_usize..200, id in 0_usize..2) {
        let mut sources = Sources::default();
        sources.add("m.yaml", text);
        let at = Location { source: SourceId(id), span: Span { start, end } };
        let diagnostic = Diagnostic::error(at, "m").expected("e").related(at, "r").help("h");
        prop_assert!(render(&diagnostic, &sources, true).contains('m'));
        prop_assert!(position(&sources, at).1 >= 1);
    }
}
