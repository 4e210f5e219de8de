//! Interruption from the keyboard, as a flag that long work looks at.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use signal_hook::consts::SIGINT;
use signal_hook::flag;

/// What a shell reports for a process that SIGINT ended.
const INTERRUPTED: i32 = 130;

/// Whether someone has asked for an end.
#[derive(Clone, Debug)]
pub struct Interrupt(Arc<AtomicBool>);

impl Interrupt {
    /// From now on the first SIGINT raises the flag, and a second one ends the process at once.
    ///
    /// Where the system refuses, SIGINT ends the process as it did before.
    pub fn listen() -> Self {
        let raised = Arc::new(AtomicBool::new(false));
        // The conditional end comes first, so that it sees the flag as the signal before has left it.
        if flag::register_conditional_shutdown(SIGINT, INTERRUPTED, Arc::clone(&raised)).is_ok() {
            let _ = flag::register(SIGINT, Arc::clone(&raised));
        }
        Self(raised)
    }

    /// Whether SIGINT came.
    pub fn is_raised(&self) -> bool {
        self.0.load(Ordering::Relaxed)
    }
}
