//! The clock: when work has taken as long as it may.

use std::time::{Duration, Instant};

/// A moment after which work is to end.
#[derive(Clone, Copy, Debug)]
pub struct Deadline(Option<Instant>);

impl Deadline {
    /// So many seconds from now; never, where that is further away than the clock can tell.
    pub fn after(seconds: f64) -> Self {
        Self(Duration::try_from_secs_f64(seconds).ok().and_then(|budget| Instant::now().checked_add(budget)))
    }

    /// Whether it is over.
    pub fn is_past(self) -> bool {
        self.0.is_some_and(|end| Instant::now() >= end)
    }
}
