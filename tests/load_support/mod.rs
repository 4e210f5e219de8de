//! Files that mean harm, for the tests of limits and of memory and for the benchmark of loading.
#![allow(dead_code, reason = "each file uses its own part")]

use std::fmt::Write as _;

/// A model that is sound, to put the harm behind.
pub(crate) const BASE: &str = "title: T\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: 1}\n";

/// A file, what the program should say of it first, and at which line and column.
pub(crate) struct Hostile {
    pub(crate) name: &'static str,
    pub(crate) text: Vec<u8>,
    pub(crate) message: &'static str,
    pub(crate) place: (usize, usize),
}

fn hostile(name: &'static str, text: impl Into<Vec<u8>>, message: &'static str, place: (usize, usize)) -> Hostile {
    Hostile { name, text: text.into(), message, place }
}

/// Files that pass a limit.
pub(crate) fn hostile_files() -> Vec<Hostile> {
    let deep = "the file is nested more than 64 levels deep";
    let large = "with its aliases written out, the file is too large";
    let indented: Vec<String> = (0..900).map(|level| format!("{}a:\n", " ".repeat(level))).collect();
    let quadratic = format!("{BASE}a: &a [{}]\nb: [{}]\n", vec!["1"; 6000].join(","), vec!["*a"; 6000].join(","));
    let wide = format!("{BASE}a: &a \"{}\"\nb: [{}]\n", "x".repeat(900_000), vec!["*a"; 9000].join(","));
    vec![
        hostile("maps in maps", "{a: ".repeat(12_500), deep, (1, 257)),
        hostile("lists in lists", "[".repeat(1 << 20), deep, (1, 65)),
        hostile("lists on lines", "- ".repeat(400_000), deep, (1, 129)),
        hostile("keys in keys", "? ".repeat(400_000), deep, (1, 129)),
        hostile("maps on lines", indented.concat(), deep, (65, 65)),
        hostile("nine to the fortieth", laughs(), large, (10, 15)),
        hostile("six thousand squared", quadratic, large, (6, 53)),
        hostile("one long text, many times", wide, large, (6, 17)),
        hostile("many nodes", format!("{BASE}a: [{}]\n", "1,".repeat(500_000)), large, (5, 200_003)),
        hostile("zeros", vec![0; 1 << 20], "the invisible character U+0000", (1, 1)),
        hostile("binary", vec![0x80; 1 << 20], "the text is not valid UTF-8", (1, 1)),
    ]
}

/// Files with more errors than can be shown.
pub(crate) fn faulty_files() -> Vec<Hostile> {
    let unknown: Vec<String> = (0..30_000).map(|index| format!("{index}: {index}\n")).collect();
    let head = "title: T\ntime: yr\nspecies: {N: {upper: 9}}\n";
    let long = "n".repeat(500_000);
    let lists = |item: &dyn Fn(usize) -> String| (0..10_000).map(item).collect::<Vec<_>>().join(", ");
    let names = lists(&|index| format!("name{index}: 1"));
    let uses = lists(&|index| format!("nome{index}: 1"));
    let scenario = format!("{BASE}parameters: {{{names}}}\nscenarios: {{a: {{values: {{{uses}}}}}}}\n");
    vec![
        hostile(
            "one key, many times",
            format!("{BASE}{}", "k: 1\n".repeat(40_000)),
            "the key \"k\" stands twice",
            (6, 1),
        ),
        hostile("many unknown keys", format!("{BASE}{}", unknown.concat()), "a model has no key \"0\"", (5, 1)),
        hostile(
            "many slips",
            format!("{head}change: {{N: \"{}\"}}\n", "*".repeat(500_000)),
            "an operand is missing",
            (4, 14),
        ),
        hostile("a long name", format!("{head}change: {{N: {long}}}\n"), "nothing is called \"nnn", (4, 13)),
        hostile(
            "a long sum",
            format!("{head}change: {{N: {}1}}\n", "1+".repeat(250_000)),
            "the formula has more",
            (4, 13),
        ),
        hostile("many unknown names", scenario, "no parameter is called \"nome0\"", (6, 26)),
        hostile(
            "two long names",
            format!("{head}parameters:\n  ? {long}\n  : 1\nchange: {{N: m{long}}}\n"),
            "nothing is called",
            (7, 13),
        ),
    ]
}

/// A file far beyond the limit, which takes memory of its own before it is read.
pub(crate) fn huge_file() -> Hostile {
    let text = format!("{BASE}note: {}", "x".repeat(64 << 20));
    hostile("64 MiB of a note", text, "the file is 67108928 bytes long; at most 1048576 are read", (1, 1))
}

fn laughs() -> String {
    let mut text = format!("{BASE}a0: &a0 [x, x, x, x, x, x, x, x, x]\n");
    for level in 1..40 {
        let _ = writeln!(text, "a{level}: &a{level} [{}]", vec![format!("*a{}", level - 1); 9].join(", "));
    }
    text
}
