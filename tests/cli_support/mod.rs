//! Running the program itself, as a user does.
#![allow(clippy::unwrap_used, reason = "a test fails by panicking")]
#![allow(dead_code, unreachable_pub, missing_docs, reason = "each file uses its own part")]

use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

/// How a run ended.
pub struct Ran {
    pub code: Option<i32>,
    pub out: String,
    pub err: String,
}

impl From<Output> for Ran {
    fn from(output: Output) -> Self {
        let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
        Self { code: output.status.code(), out: text(output.stdout), err: text(output.stderr) }
    }
}

/// The program, to be started in the folder of the project, with no terminal and no wish about colour.
pub fn restpoint() -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_restpoint"));
    command.current_dir(env!("CARGO_MANIFEST_DIR")).env_remove("NO_COLOR").stdin(Stdio::null());
    command
}

/// Runs the program to its end.
pub fn run(arguments: &[&str]) -> Ran {
    restpoint().args(arguments).output().unwrap().into()
}

/// Runs the program to its end on some standard input.
pub fn run_on(input: &str, arguments: &[&str]) -> Ran {
    let mut command = restpoint();
    command.args(arguments).stdin(Stdio::piped()).stdout(Stdio::piped()).stderr(Stdio::piped());
    let mut child = command.spawn().unwrap();
    // A run that is asked for something else may end without having read it.
    match child.stdin.take().unwrap().write_all(input.as_bytes()) {
        Err(error) if error.kind() == std::io::ErrorKind::BrokenPipe => {}
        other => other.unwrap(),
    }
    child.wait_with_output().unwrap().into()
}

/// Every shipped model, in the order of names.
pub fn shipped() -> Vec<String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let files = folder.read_dir().unwrap().map(|entry| entry.unwrap().path());
    let mut names: Vec<String> = files
        .filter(|path| path.extension().is_some_and(|extension| extension == "yaml"))
        .map(|path| format!("scenarios/{}", path.file_name().unwrap().to_str().unwrap()))
        .collect();
    names.sort();
    assert!(names.len() >= 10, "{names:?}");
    names
}

/// The shipped models that are searched in a moment: all but the meadow of thirty species.
pub fn fast() -> Vec<String> {
    shipped().into_iter().filter(|name| !name.contains("ferrow-meadow")).collect()
}

/// A file of that name and text in a folder.
pub fn file(folder: &Path, name: &str, text: &str) -> PathBuf {
    let path = folder.join(name);
    std::fs::write(&path, text).unwrap();
    path
}

/// A path as an argument.
pub fn word(path: &Path) -> &str {
    path.to_str().unwrap()
}

/// One species that grows to 1, and one scenario with a double root, where nothing can be proved.
pub const FOLD: &str = "\
title: Fold
time: yr
species: {x: {upper: 10}}
parameters: {a: {value: 1, min: 0}}
change: {x: x*(a - x)}
scenarios:
  plain: {}
  twice: {processes: {more: {rate: \"x*(x^2 - x + 0.25) - x*(a - x)\", effect: {x: 1}}}}
";
