//! Several threads, for tests that how work is shared changes nothing.

use std::sync::atomic::{AtomicUsize, Ordering};

use restpoint::analysis::equilibria::Workers;

/// Two threads, in whatever order they come.
pub struct Two;

impl Workers for Two {
    fn count(&self) -> usize {
        2
    }

    fn run(&self, jobs: usize, job: &(dyn Fn(usize) + Sync)) {
        let next = AtomicUsize::new(0);
        let work = || {
            while let Some(k) = Some(next.fetch_add(1, Ordering::Relaxed)).filter(|&k| k < jobs) {
                job(k);
            }
        };
        std::thread::scope(|scope| {
            scope.spawn(work);
            work();
        });
    }
}
