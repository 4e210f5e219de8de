//! Hostile files cost little memory. A file of its own, because the kernel counts for the whole process.

#![cfg(target_os = "linux")]
#![expect(clippy::expect_used, reason = "a test that cannot read the kernel's account has failed")]

mod load_support;

use load_support::{faulty_files, hostile_files};
use restpoint::diag::render::{position, render};
use restpoint::model::load::{NoFiles, load};

/// Memory that may be added, in KiB.
const LIMIT: u64 = 64 << 10;

#[test]
fn no_hostile_file_takes_more_than_64_mebibytes() {
    for hostile in hostile_files().iter().chain(&faulty_files()) {
        let before = account("VmRSS:");
        let (_, sources, found) = load("m.yaml", &hostile.text, &NoFiles);
        let shown: String = found.iter().map(|diagnostic| render(diagnostic, &sources, false)).collect();
        let (_, line, column) = position(&sources, found[0].at);
        assert_eq!((line, column), hostile.place, "{}", found[0].message);
        // The peak never falls, so this bounds it for each file and for all before it.
        let taken = account("VmHWM:").saturating_sub(before);
        assert!(taken <= LIMIT && shown.contains(hostile.message), "{}: {taken} KiB", hostile.name);
    }
}

/// One line of the kernel's account of this process, in KiB.
fn account(line: &str) -> u64 {
    let status = std::fs::read_to_string("/proc/self/status").expect("the kernel's account");
    let line = status.lines().find(|found| found.starts_with(line)).expect("a line of it");
    line.split_whitespace().nth(1).and_then(|number| number.parse().ok()).expect("a number")
}
