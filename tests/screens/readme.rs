//! The screens in `README.md` are those of the program: each block of text below a mark of its size and keys. With
//! `RENEW_SCREENS=1` they are written anew.

use std::fs;
use std::path::Path;

use crate::bench::Bench;

#[test]
fn screens_in_the_readme_are_current() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md");
    let readme = fs::read_to_string(&path).unwrap();
    let (renewed, count) = renewed(&readme);
    if std::env::var_os("RENEW_SCREENS").is_some() {
        fs::write(&path, &renewed).unwrap();
    }
    assert!(count >= 4, "{count} screens");
    assert!(fs::read_to_string(&path).unwrap() == renewed, "README.md has other screens than\n{renewed}");
}

const MARK: &str = "<!-- screen ";

/// The text with every screen as it is now, and how many there are.
fn renewed(readme: &str) -> (String, usize) {
    let model = readme.split("```yaml\n").nth(1).and_then(|rest| rest.split("```").next()).unwrap();
    let mut parts = readme.split(MARK);
    let mut text = parts.next().unwrap().to_owned();
    let mut count = 0;
    for part in parts {
        let (mark, rest) = part.split_once(" -->\n```text\n").unwrap();
        let (_, after) = rest.split_once("```\n").unwrap();
        let (size, keys) = mark.split_once(": ").unwrap();
        let (columns, rows) = size.split_once('x').unwrap();
        let mut bench = Bench::of(model).at([columns.parse().unwrap(), rows.parse().unwrap()]);
        bench.press(keys);
        text = format!("{text}{MARK}{mark} -->\n```text\n{}```\n{after}", bench.text());
        count += 1;
    }
    (text, count)
}
