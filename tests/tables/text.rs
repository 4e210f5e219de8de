//! The table as text: what is shown, at every width, in every style.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use crate::cli_support::{fast, run, run_on};
use crate::table_support::{HOSTILE, SHA256, hostile_model, model, model_text, with_table, with_table_of};
use restpoint::diag::cleanse::is_hostile;
use restpoint::report::table::{Page, Style, text};
use unicode_width::UnicodeWidthStr;

fn shown(width: usize, style: Style) -> String {
    with_table(|table| text(table, Page { width, style, color: false }))
}

#[test]
fn everything_that_can_be_said_reads_as_expected() {
    assert_eq!(shown(80, Style::Unicode), include_str!("../files/table/everything.txt"));
    assert_eq!(shown(44, Style::Ascii), include_str!("../files/table/narrow.txt"));
}

/// Bounds of errors hang on the last bits of the arithmetic; here only that one is there counts.
fn without_bounds(text: &str) -> String {
    const PROVED: &str = "proved, ";
    let mut parts = text.split(PROVED);
    let mut all = parts.next().unwrap_or("").to_owned();
    for part in parts {
        let word = part.split_whitespace().next().unwrap_or("");
        let is_bound = word == "exact" || word.split_once("e-").is_some_and(|(digit, _)| digit.len() == 1);
        all += PROVED;
        all += &if is_bound { part.replacen(word, "(bound)", 1) } else { part.to_owned() };
    }
    all
}

#[test]
fn shipped_scenarios_read_as_expected() {
    let check = |arguments: &[&str], expected: &str| {
        let ran = run(&[&["table"], arguments].concat());
        assert_eq!(ran.code, Some(0), "{}", ran.err);
        assert_eq!(without_bounds(&ran.out), without_bounds(expected));
    };
    let forest =
        ["scenarios/kelmarrow-forest.yaml", "--scenario", "present spraying", "--scenario", "spraying stopped"];
    check(&forest, include_str!("../files/table/kelmarrow-forest.txt"));
    check(&["scenarios/hallowick-bays.yaml"], include_str!("../files/table/hallowick-bays.txt"));
}

#[test]
fn lines_keep_to_the_width() {
    for width in 0..200 {
        for style in [Style::Unicode, Style::Ascii] {
            let text = shown(width, style);
            assert_eq!(text, shown(width, style));
            for line in text.lines() {
                // A hash is one word of 64 letters, and in ASCII a Greek letter has seven.
                let is_one_word = line.contains(SHA256) || line.contains("\\u{");
                assert!(line.width() <= width.max(30) || is_one_word, "{width}: {line}");
                assert_eq!(line.trim_end(), line, "{width}");
            }
        }
    }
    for name in fast() {
        let shown = run(&["table", &name]).out;
        assert!(shown.lines().all(|line| line.width() <= 80), "{shown}");
    }
}

#[test]
fn every_column_can_be_shown_at_every_width() {
    let everything = |width| {
        with_table_of(&model(), Some("all"), |table| text(table, Page { width, style: Style::Unicode, color: false }))
    };
    for width in 40..200 {
        for line in everything(width).lines() {
            assert!(line.width() <= width || line.contains(SHA256), "{width}: {line}");
            assert_eq!(line.trim_end(), line, "{width}");
        }
    }
    // Net effects of which few digits hold say so.
    let net = with_table_of(&model(), Some("net_effects,net_effects_condition"), |table| {
        text(table, Page { width: 80, style: Style::Unicode, color: false })
    });
    assert!(net.contains("few digits hold") && net.contains("S<-κ"), "{net}");
}

#[test]
fn names_cannot_make_lines_of_their_own_or_leave_them() {
    let lines = |name: &str| {
        let page = Page { width: 100, style: Style::Unicode, color: false };
        with_table_of(&hostile_model(name), None, |table| text(table, page))
    };
    for name in HOSTILE {
        let text = lines(name);
        assert!(!text.chars().any(|c| c != '\n' && is_hostile(c)), "{name:?}: {text:?}");
        assert_eq!(text.matches("\nScenario: ").count(), 3, "{name:?}");
        assert!(text.lines().all(|line| line.trim_end() == line), "{name:?}: {text}");
    }
}

#[test]
fn ascii_output_is_ascii() {
    assert!(shown(80, Style::Ascii).is_ascii());
    for format in ["text", "json"] {
        let with = |more: &[&str]| run_on(model_text(), &[&["table", "-", "--format", format], more].concat());
        let (ascii, plain) = (with(&["--ascii"]), with(&[]));
        assert_eq!((ascii.code, plain.code), (Some(0), Some(0)), "{}", ascii.err);
        assert!(ascii.out.is_ascii() && !plain.out.is_ascii());
        if format == "json" {
            let read = |text: &str| serde_json::from_str::<serde_json::Value>(text).unwrap();
            assert_eq!(read(&ascii.out), read(&plain.out));
        }
    }
    for name in fast() {
        assert!(run(&["table", &name, "--ascii"]).out.is_ascii(), "{name}");
    }
}

#[test]
fn colour_says_nothing_that_words_do_not() {
    let page = |color| Page { width: 80, style: Style::Unicode, color };
    let coloured = with_table(|table| text(table, page(true)));
    let mut plain = String::new();
    for (place, part) in coloured.split('\u{1b}').enumerate() {
        plain.push_str(if place == 0 { part } else { part.split_once('m').unwrap().1 });
    }
    assert_eq!(plain, shown(80, Style::Unicode));
    assert_eq!(coloured.matches("\u{1b}[3").count(), coloured.matches("\u{1b}[0m").count());
    assert!(coloured.contains("\u{1b}[33mnumerical\u{1b}[0m"));
}
