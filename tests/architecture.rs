//! The rules about structure: which module may use which, and what each may touch.
//!
//! Every rule is a function from one file to what is wrong with it; all run over every file of `src`, and each is shown to
//! catch what it is for. To let a module use another, add the edge to [`EDGES`]; to add a rule, its function to [`RULES`],
//! and a file that it objects to to [`CAUGHT`].

#![expect(clippy::expect_used, reason = "a test that cannot read the source has failed")]

mod source;

use std::fs;
use std::path::Path;

use source::File;

/// Every module from the bottom up, with those that it may use.
const EDGES: &[(&str, &[&str])] = &[
    ("diag", &[]),
    ("num", &[]),
    ("expr", &["diag", "num"]),
    ("model", &["diag", "num", "expr"]),
    ("analysis", &["diag", "num", "expr", "model"]),
    ("report", &["diag", "expr", "model", "num", "analysis"]),
    ("app", &["diag", "model", "analysis", "report"]),
    ("ui", &["diag", "model", "analysis", "report", "app"]),
    ("shell", &["diag", "model", "analysis", "report", "app", "ui"]),
    ("cli", &["diag", "model", "analysis", "report", "app", "shell"]),
];

/// A file longer than this is to be divided.
const LONGEST: usize = 400;

/// Files that are longer all the same, each with the reason.
const LONG: &[(&str, &str)] = &[];

/// Files with unsafe code; the head of each says why it is sound.
const UNSAFE: &[&str] = &["model/events.rs", "num/wide.rs"];

/// Modules of the library that name the outside world, and names in others.
const OUTSIDE: &[&str] = &["env", "fs", "net", "process", "thread"];
const OUTSIDE_NAMES: &[&str] = &["Instant", "SystemTime", "stderr", "stdin", "stdout"];
const PRINTING: &[&str] = &["dbg", "eprint", "eprintln", "print", "println"];

type Rule = fn(&File) -> Vec<String>;

const RULES: &[Rule] = &[edges, length, head, shared_state, terminal, outside, unsafe_code];

#[test]
fn every_file_keeps_the_rules() {
    let files = files();
    assert!(files.len() > 50, "{} files: is this the right folder?", files.len());
    let wrong: Vec<String> = files.iter().flat_map(|file| RULES.iter().flat_map(|rule| rule(file))).collect();
    assert!(wrong.is_empty(), "\n{}\n", wrong.join("\n"));
}

#[test]
fn modules_use_only_those_below_them() {
    for (place, (module, uses)) in EDGES.iter().enumerate() {
        for used in *uses {
            assert!(EDGES[..place].iter().any(|(below, _)| below == used), "{used} is not below {module}");
        }
    }
}

#[test]
fn no_exception_is_left_over() {
    let files = files();
    let find = |name: &str| files.iter().find(|file| file.name == name);
    for (name, reason) in LONG {
        assert!(find(name).is_some_and(|file| file.text.lines().count() > LONGEST), "{name} is not long ({reason})");
    }
    for name in UNSAFE {
        assert!(find(name).is_some_and(|file| has_unsafe(file).is_some()), "{name} has no unsafe code");
    }
}

/// A file's name, its text, and a part of what is to be said about it.
const CAUGHT: &[[&str; 3]] = &[
    ["num/a.rs", "//! A.\nuse crate::model::Model;", "num/a.rs:2: num may not use model"],
    ["num/a.rs", "//! A.\nfn f() -> crate::expr::Tape {}", "num may not use expr"],
    [
        "diag/mod.rs",
        "//! A.\nuse crate::{\n    num::{round, interval::{self}},\n};",
        "diag/mod.rs:3: diag may not use num",
    ],
    ["expr/a/b.rs", "//! A.\nuse super::super::super::model;", "expr may not use model"],
    ["expr/a.rs", "//! A.\nmod tests {\n    use super::super::super::cli::Exit;\n}", "expr may not use cli"],
    ["expr/a.rs", "//! A.\npub use super::super::*;", "the whole crate"],
    ["expr/a.rs", "//! A.\nuse crate as c;\nfn f() { c::cli::main() }", "the whole crate"],
    ["report/a.rs", "//! A.\nuse restpoint::cli;", "as if from outside"],
    ["extra/a.rs", "//! A.", "extra is not in the table"],
    ["num/a.rs", "use std::ops::Add;", "no //! at its head"],
    ["app/a.rs", "//! A.\nstruct App { n: std::cell::RefCell<u8> }", "RefCell"],
    ["ui/a.rs", "//! A.\nuse std::cell::{Cell, RefCell};", "RefCell"],
    ["app/a.rs", "//! A.\nuse crossterm::event::KeyCode;", "crossterm"],
    ["report/a.rs", "//! A.\nuse ratatui::{buffer::Buffer};", "ratatui"],
    ["model/a.rs", "//! A.\nuse std::fs;", "fs touches"],
    ["model/a.rs", "//! A.\nuse std::{collections::HashMap, fs::File};", "fs"],
    ["model/a.rs", "//! A.\nfn f() { ::std::fs::read(x) }", "fs"],
    ["num/a.rs", "//! A.\nuse std::time::{Duration, Instant};", "Instant"],
    ["num/a.rs", "//! A.\nuse std::time;\nfn f() { time::SystemTime::now() }", "SystemTime"],
    ["num/a.rs", "//! A.\nfn f() { std::thread::spawn(g) }", "thread"],
    ["report/a.rs", "//! A.\nuse std::io;\nfn f() { io::stdout() }", "stdout"],
    ["report/a.rs", "//! A.\nfn f() { std::env::var(\"X\") }", "env"],
    ["report/a.rs", "//! A.\nfn f() { println!(\"x\") }", "println!"],
    ["expr/a.rs", "//! A.\nfn f() { unsafe { g() } }", "expr/a.rs:2: unsafe code"],
    ["model/events.rs", "//! A.\nunsafe fn f() {}", "does not say why"],
];

#[test]
fn each_rule_catches_what_it_is_for() {
    for [name, text, expected] in CAUGHT {
        let said: Vec<String> = RULES.iter().flat_map(|rule| rule(&File::new(name, text))).collect();
        assert!(matches!(&said[..], [one, ..] if one.contains(expected)), "{text}\nsaid {said:?}, not {expected}");
    }
    let long = format!("//! A.\n{}", "\n".repeat(LONGEST));
    assert_eq!(length(&File::new("num/a.rs", &long)), ["num/a.rs: 401 lines, more than 400"]);
}

#[test]
fn no_rule_minds_what_is_allowed() {
    let check = |name: &str, text: &str| {
        let said: Vec<String> = RULES.iter().flat_map(|rule| rule(&File::new(name, text))).collect();
        assert_eq!(said, [""; 0], "{text}");
    };
    check("model/a.rs", "//! A.\nuse crate::{diag::{Span}, model::load};\nmod tests { use super::super::tree::Node; }");
    check("num/a.rs", "//! A.\n// crate::model\n/* unsafe /* nested */ */ const A: &str = \"crate::cli \\\" unsafe\";");
    check("num/a.rs", "//! A.\nfn f<'a>(c: &'a char) -> bool { *c == '\"' || r#\"unsafe \"\"# == A }");
    check("model/load/tests.rs", "//! A.\nuse std::fs;");
    check("num/a.rs", "//! A.\n#[cfg(test)]\nmod tests {\n    fn f() { std::fs::read(x) }\n}");
    check(
        "report/a.rs",
        "//! A.\nuse std::io::Write;\nuse std::time::Duration;\nconst A: &str = env!(\"CARGO_PKG_NAME\");",
    );
    check("shell/a.rs", "//! A.\nuse std::fs::File;\nfn f() { println!() }");
}

fn files() -> Vec<File> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let (mut folders, mut found) = (vec![root.clone()], Vec::new());
    while let Some(folder) = folders.pop() {
        for entry in fs::read_dir(&folder).expect("a folder of the source").map_while(Result::ok) {
            let path = entry.path();
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|extension| extension == "rs") {
                let name = path.strip_prefix(&root).expect("below src").to_string_lossy().replace('\\', "/");
                found.push(File::new(&name, &fs::read_to_string(&path).expect("a readable file")));
            }
        }
    }
    found
}

fn edges(file: &File) -> Vec<String> {
    let top = file.top();
    if top.is_empty() {
        return Vec::new();
    }
    let Some((_, allowed)) = EDGES.iter().find(|(module, _)| *module == top) else {
        return vec![format!("{}: {top} is not in the table of modules", file.name)];
    };
    let mut wrong = Vec::new();
    for mention in &file.mentions {
        let place = format!("{}:{}", file.name, mention.line);
        match mention.segments.first().map(String::as_str) {
            Some("restpoint") if !mention.own => wrong.push(format!("{place}: uses the crate as if from outside")),
            Some("crate") if !mention.own => wrong.push(format!("{place}: takes the whole crate")),
            None | Some("*") => wrong.push(format!("{place}: takes the whole crate")),
            Some(used) if mention.own && used != top && !allowed.contains(&used) => {
                wrong.push(format!("{place}: {top} may not use {used}"));
            }
            _ => {}
        }
    }
    wrong
}

fn length(file: &File) -> Vec<String> {
    let lines = file.text.lines().count();
    let excused = LONG.iter().any(|(name, _)| *name == file.name);
    if lines <= LONGEST || excused {
        return Vec::new();
    }
    vec![format!("{}: {lines} lines, more than {LONGEST}", file.name)]
}

fn head(file: &File) -> Vec<String> {
    if file.text.starts_with("//! ") { Vec::new() } else { vec![format!("{}: no //! at its head", file.name)] }
}

/// The interface's state changes in one place, so nothing may hide a change behind a shared reference.
fn shared_state(file: &File) -> Vec<String> {
    if matches!(file.top(), "app" | "ui") { words(file, &["RefCell"]) } else { Vec::new() }
}

fn terminal(file: &File) -> Vec<String> {
    if matches!(file.top(), "ui" | "shell") { Vec::new() } else { words(file, &["ratatui", "crossterm"]) }
}

fn words(file: &File, forbidden: &[&str]) -> Vec<String> {
    let found = file.words.iter().filter(|(word, ..)| forbidden.contains(&word.as_str()));
    found.map(|(word, line, _)| format!("{}:{line}: {word} does not belong here", file.name)).collect()
}

/// Files, clock, threads, environment, standard streams and printing.
fn outside(file: &File) -> Vec<String> {
    if matches!(file.top(), "shell" | "cli" | "") {
        return Vec::new();
    }
    let touches = |segments: &[String]| {
        let segments = if segments[0] == "std" { &segments[1..] } else { segments };
        segments.first().is_some_and(|first| OUTSIDE.contains(&first.as_str()))
            || segments.iter().any(|segment| OUTSIDE_NAMES.contains(&segment.as_str()))
    };
    let paths = file.mentions.iter().filter(|mention| !mention.own && !mention.test && touches(&mention.segments));
    let paths = paths.map(|m| format!("{}:{}: {} touches the outside", file.name, m.line, m.segments.join("::")));
    let printed = file.words.iter().filter(|(word, _, called)| *called && PRINTING.contains(&word.as_str()));
    paths.chain(printed.map(|(word, line, _)| format!("{}:{line}: {word}! prints", file.name))).collect()
}

fn unsafe_code(file: &File) -> Vec<String> {
    let Some(line) = has_unsafe(file) else { return Vec::new() };
    if !UNSAFE.contains(&file.name.as_str()) {
        return vec![format!("{}:{line}: unsafe code", file.name)];
    }
    let explained = file.head().to_lowercase().contains("unsafe code");
    if explained {
        Vec::new()
    } else {
        vec![format!("{}: its head does not say why its unsafe code is sound", file.name)]
    }
}

fn has_unsafe(file: &File) -> Option<usize> {
    file.words.iter().find(|(word, ..)| word == "unsafe").map(|&(_, line, _)| line)
}
