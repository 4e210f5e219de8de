//! Hostile files: each refused within 100 ms, with a place and a reason, and never by a crash.

#![expect(clippy::panic, reason = "a helper of tests")]

mod load_support;

use std::sync::OnceLock;
use std::time::{Duration, Instant};

use load_support::{BASE, Hostile, faulty_files, hostile_files};
use restpoint::diag::render::{position, render};
use restpoint::model::load::{NoFiles, load};

/// Time that one file may take, its messages made into text; the best of a few runs counts, because other programs share
/// the machine's caches.
const TIME: Duration = Duration::from_millis(100);

/// Time that this thread has been running; elsewhere than on Linux, time that has passed.
fn spent() -> Duration {
    static BEGIN: OnceLock<Instant> = OnceLock::new();
    let account = std::fs::read_to_string("/proc/thread-self/schedstat").ok();
    let running = account.and_then(|text| text.split_whitespace().next()?.parse().ok());
    running.map_or_else(|| BEGIN.get_or_init(Instant::now).elapsed(), Duration::from_nanos)
}

fn check(hostile: &Hostile) {
    let name = hostile.name;
    let mut best = Duration::MAX;
    for _ in 0..40 {
        let start = spent();
        let (model, sources, found) = load("m.yaml", &hostile.text, &NoFiles);
        let shown: usize = found.iter().map(|diagnostic| render(diagnostic, &sources, false).len()).sum();
        best = best.min(spent().saturating_sub(start));
        assert!(model.is_none() && shown > 0, "{name}");
        assert!(found[0].message.starts_with(hostile.message), "{name}: {}", found[0].message);
        let (_, line, column) = position(&sources, found[0].at);
        assert_eq!((line, column), hostile.place, "{name}");
        if best < TIME {
            return;
        }
    }
    panic!("{name} took {best:?}");
}

// One test, so that the files are not timed against each other.
#[test]
fn every_hostile_file_is_refused_in_time() {
    hostile_files().iter().chain(&faulty_files()).for_each(check);
    check(&Hostile {
        name: "huge",
        text: format!("{BASE}note: {}", "x".repeat(64 << 20)).into_bytes(),
        message: "the file is 67108928 bytes long; at most 1048576 are read",
        place: (1, 1),
    });
}
