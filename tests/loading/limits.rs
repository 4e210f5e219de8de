//! Hostile files: each refused with a place and a reason, without a crash, and without work that grows out of hand.
//!
//! How long each takes is measured by `tests/benches/loading.rs`, what memory by `tests/load_memory.rs`.

use std::time::{Duration, Instant};

use crate::load_support::{BASE, Hostile, faulty_files, hostile_files, huge_file};
use restpoint::diag::render::{position, render};
use restpoint::model::load::{Files, NoFiles, load};

/// Fifty times what a file should take: passed by work that grows as the square of a file's size, and by no busy machine.
const FAR_TOO_LONG: Duration = Duration::from_secs(5);

fn check(hostile: &Hostile) {
    let name = hostile.name;
    let start = Instant::now();
    let (model, sources, found) = load("m.yaml", &hostile.text, &NoFiles);
    let shown: usize = found.iter().map(|diagnostic| render(diagnostic, &sources, false).len()).sum();
    let taken = start.elapsed();
    assert!(model.is_none() && shown > 0, "{name}");
    assert!(found[0].message.starts_with(hostile.message), "{name}: {}", found[0].message);
    let (_, line, column) = position(&sources, found[0].at);
    assert_eq!((line, column), hostile.place, "{name}");
    assert!(taken < FAR_TOO_LONG, "{name} took {taken:?}");
}

#[test]
fn every_hostile_file_is_refused() {
    hostile_files().iter().chain(&faulty_files()).for_each(check);
    check(&huge_file());
}

/// A table of blanks, one byte too long.
struct TooLong;

impl Files for TooLong {
    fn read(&self, _path: &str, limit: usize) -> Result<Vec<u8>, String> {
        assert_eq!(limit, 16 << 20);
        Ok(vec![b' '; limit + 1])
    }
}

#[test]
fn a_table_beyond_the_limit_is_refused_where_it_is_named() {
    for (line, column) in [("draws: d.csv", 8), ("lotka_volterra: {growth: g.csv, matrix: {N: {N: -1}}}", 26)] {
        let (model, sources, found) = load("m.yaml", format!("{BASE}{line}\n").as_bytes(), &TooLong);
        assert!(model.is_none(), "{line}");
        assert_eq!(found[0].message, "the file is 16777217 bytes long; at most 16777216 are read");
        let (_, line, found) = position(&sources, found[0].at);
        assert_eq!((line, found), (5, column));
    }
}
