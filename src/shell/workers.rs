//! Threads that do jobs side by side.

use std::sync::atomic::{AtomicUsize, Ordering};
use std::thread;

use crate::analysis::equilibria::Workers;

/// So many threads, the calling one among them. They live as long as one run: jobs are faces, which take far longer than
/// a thread takes to start.
#[derive(Clone, Copy, Debug)]
pub struct Threads(usize);

impl Threads {
    /// At least one.
    pub fn new(count: usize) -> Self {
        Self(count.max(1))
    }

    /// As many as the machine has processors for us.
    pub fn available() -> Self {
        Self::new(thread::available_parallelism().map_or(1, Into::into))
    }
}

impl Workers for Threads {
    fn count(&self) -> usize {
        self.0
    }

    fn run(&self, jobs: usize, job: &(dyn Fn(usize) + Sync)) {
        let next = AtomicUsize::new(0);
        let work = || {
            loop {
                let mine = next.fetch_add(1, Ordering::Relaxed);
                if mine >= jobs {
                    return;
                }
                job(mine);
            }
        };
        thread::scope(|scope| {
            for _ in 1..self.0.min(jobs) {
                // Where the system refuses another thread, those that there are do its share.
                if thread::Builder::new().spawn_scoped(scope, work).is_err() {
                    break;
                }
            }
            work();
        });
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_job_is_done_once() {
        for (threads, jobs) in [(0, 0), (0, 3), (1, 5), (2, 1), (3, 100), (16, 5)] {
            let done: Vec<AtomicUsize> = (0..jobs).map(|_| AtomicUsize::new(0)).collect();
            Threads::new(threads).run(jobs, &|job| {
                done[job].fetch_add(1, Ordering::Relaxed);
            });
            let done: Vec<usize> = done.into_iter().map(AtomicUsize::into_inner).collect();
            assert_eq!(done, vec![1; jobs], "{threads} threads");
        }
    }
}
