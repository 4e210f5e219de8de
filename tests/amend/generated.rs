//! Files made at random from every way of writing scenarios.

use proptest::collection::vec;
use proptest::prelude::*;
use restpoint::model::amend::{Refusal, with_scenario};
use restpoint::model::load::NoFiles;

use crate::support::{addition, check};

const EXAMPLE: &str = include_str!("../files/contract_example.yaml");

/// Pieces that mean something to a reader of YAML, most of them harmless between tokens.
const PIECES: &[&str] = &[
    "",
    " ",
    "\n",
    "\n\n",
    "\n  ",
    " # x\n",
    "# x",
    ",",
    "&a ",
    "*a",
    "{}",
    "{",
    "}",
    "|\n",
    ">-\n",
    "? ",
    ": ",
    "null",
    "~",
    "'",
    "\"",
    "é",
    "\r\n",
    "...\n",
    "---\n",
    "scenarios",
    "values: ",
    "- ",
    "\t",
];

const NAMES: &[&str] = &["first", "'second plan'", "\"third: #\"", "4", "&k fifth", "? sixth", "yes"];
const PLAIN: &[&str] = &["first", "second plan", "third: #", "4", "fifth", "sixth", "yes"];

/// What a scenario may say, in brackets.
const OVERLAYS: &[&str] = &[
    "{}",
    "{values: {E: 0.5*E}}",
    "&o {values: {r: 3, 'E': \"min(E, 2)\"}}",
    "{without: [trawl, \"growth\"]}",
    "{harvest: {quota: {takes: {S: E}, cost: 'r'}}, values: {E: 60}}",
    "{processes: {growth: {rate: \"max(r, S)\", effect: {S: 1}}}}",
    "{values: ~, without: null}",
];

/// The same over several lines, below a key; each line without its indentation.
const BLOCKS: &[&[&str]] = &[
    &["values:", "  r: 2", "  E: |", "    0.5*E", ""],
    &["without:", "- trawl # not any more", "# values: {}"],
    &["harvest:", "  quota:", "    takes:", "      S: min(S, E) - r", "    cost: >-", "      r", "      + E"],
    &["values: {", "r: 2 }"],
];

const COMMENTS: &[&str] = &["", " # why", "\t# tab", " # {a: b}"];
const BETWEEN: &[&str] = &["", "\n", "# at the margin\n", "\n      # far in\n", "  \n"];
const ENDS: &[&str] = &["", "\n", "sketch: {x: S, y: C}\n", "# vi: set\n", "...\n", "now:\n  S: 1", "note: |\n  x\n\n"];

#[derive(Clone, Debug)]
struct Written {
    names: Vec<usize>,
    bodies: Vec<(usize, bool)>,
    comments: Vec<usize>,
    indent: usize,
    flow: usize,
    between: usize,
    end: usize,
    crlf: bool,
    mark: bool,
    cut: bool,
}

impl Written {
    fn text(&self) -> String {
        let mut text = String::from(
            "# Head\ntitle: T\ntime: yr # unit\nspecies: {s: {symbol: S, upper: 9}, c: {symbol: C, upper: 9}}\n\
             parameters:\n  r: 1\n  E: {value: 2, note: 'it''s'}\nprocesses:\n  growth: {rate: r*S, effect: {S: 1, C: -C}}\n\
             harvest: {trawl: {takes: {S: E*S}}}\n",
        );
        match self.flow {
            _ if self.names.is_empty() => {}
            0 => text.push_str(&self.block()),
            kind => text.push_str(&self.brackets(kind)),
        }
        text.push_str(BETWEEN[self.between]);
        text.push_str(ENDS[self.end]);
        if self.cut {
            text.truncate(text.trim_end_matches('\n').len());
        }
        if self.crlf {
            text = text.replace('\n', "\r\n");
        }
        if self.mark { format!("\u{feff}{text}") } else { text }
    }

    fn block(&self) -> String {
        let margin = " ".repeat(self.indent);
        let entries = self.names.iter().enumerate().map(|(place, &name)| {
            let (body, below) = self.bodies[place];
            let comment = COMMENTS[self.comments[place]];
            // What follows a question mark has its colon on the next line.
            let asked = NAMES[name].starts_with('?');
            let head = if asked { format!("{}\n{margin}", NAMES[name]) } else { NAMES[name].to_owned() };
            if !below || asked {
                return format!("{margin}{head}: {}{comment}\n", self.overlay(place));
            }
            let lines: Vec<String> =
                BLOCKS[body % BLOCKS.len()].iter().map(|line| format!("{margin}   {line}\n")).collect();
            format!("{margin}{head}:{comment}\n{}", lines.concat())
        });
        format!("scenarios:{}\n{}", COMMENTS[self.comments[0]], entries.collect::<Vec<_>>().concat())
    }

    /// An anchor may stand but once.
    fn overlay(&self, place: usize) -> String {
        OVERLAYS[self.bodies[place].0 % OVERLAYS.len()].replace("&o", &format!("&o{place}"))
    }

    fn brackets(&self, kind: usize) -> String {
        let named = |place: usize| format!("{}: {}", NAMES[self.names[place]], self.overlay(place));
        let entries: Vec<String> = (0..self.names.len()).map(named).collect();
        match kind {
            1 => format!("scenarios: {{{}}}\n", entries.join(", ")),
            2 => format!("scenarios: {{ {} , }}{}\n", entries.join(" ,"), COMMENTS[self.comments[0]]),
            _ => {
                let lines: Vec<String> = (0..entries.len())
                    .map(|place| {
                        let comma = if place + 1 < entries.len() || self.cut { "," } else { "" };
                        format!("  {}{comma}{}\n", entries[place], COMMENTS[self.comments[place]])
                    })
                    .collect();
                format!("scenarios: {{\n{}  }}\n", lines.concat())
            }
        }
    }
}

fn written() -> impl Strategy<Value = Written> {
    let names = Just((0..NAMES.len()).collect::<Vec<_>>()).prop_shuffle();
    let layout = (1_usize..9, 0_usize..4, 0..BETWEEN.len(), 0..ENDS.len());
    let bodies = vec((0_usize..8, any::<bool>()), NAMES.len());
    let flags = (any::<bool>(), any::<bool>(), any::<bool>(), 0..=NAMES.len());
    (names, bodies, vec(0..COMMENTS.len(), NAMES.len()), layout, flags).prop_map(
        |(mut names, bodies, comments, (indent, flow, between, end), (crlf, mark, cut, count))| {
            names.truncate(count);
            Written { names, bodies, comments, indent, flow, between, end, crlf, mark, cut }
        },
    )
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 600, failure_persistence: None, ..ProptestConfig::default() })]
    #[test]
    fn only_bytes_are_added_and_the_file_means_what_was_meant(
        written in written(),
        base in 0..NAMES.len(),
        name in "[^\\p{C}\\p{Z}]([^\\p{C}\\p{Zl}\\p{Zp}]{0,12}[^\\p{C}\\p{Z}])?",
        value in any::<f64>().prop_filter("finite", |value| value.is_finite()),
    ) {
        let text = written.text();
        let base = written.names.get(base).map(|&at| PLAIN[at]);
        prop_assume!(!PLAIN.contains(&name.as_str()) && name != "base");
        check(&text, &addition(&name, base, &[("E", value)]), &NoFiles);
    }

    /// Whatever is done to a model: no panic, and either a good text or none.
    #[test]
    fn whatever_is_changed_the_answer_is_a_good_text_or_none(
        changes in vec((any::<prop::sample::Index>(), 0_usize..4, 0..PIECES.len()), 0..3),
        from_scenarios in any::<bool>(),
    ) {
        let mut text: Vec<char> = EXAMPLE.chars().collect();
        for (at, cut, piece) in changes {
            // Half of the changes are to the section that matters.
            let first = if from_scenarios { text.len().saturating_sub(260) } else { 0 };
            let at = first + at.index(text.len() - first + 1);
            text.splice(at..(at + cut).min(text.len()), PIECES[piece].chars());
        }
        let text: String = text.into_iter().collect();
        let tried = addition("tried", None, &[("r", 2.0)]);
        match with_scenario(&text, &tried, &NoFiles) {
            Ok(_) => _ = check(&text, &tried, &NoFiles),
            Err(Refusal::Unsound | Refusal::NoPlace(_) | Refusal::Taken(_) | Refusal::NoParameter(_)) => {}
            // The text after the change is one that no rule for a place foresees; it must stay rare.
            Err(refusal) => prop_assert!(false, "{}: {}", refusal, text),
        }
    }
}
