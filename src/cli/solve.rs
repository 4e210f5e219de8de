//! A model's scenarios searched as a command does: with a deadline, a line of progress, until it is interrupted.

use crate::analysis::equilibria::Budget;
use crate::analysis::passage::Ways;
use crate::analysis::prepare::Prepared;
use crate::diag::Diagnostic;
use crate::model::Model;
use crate::report::table::{Limits, Names, Scene, Solved};
use crate::shell::clock::Deadline;
use crate::shell::progress::Meter;
use crate::shell::signal::Interrupt;
use crate::shell::solver::{names, scene};
use crate::shell::workers::Threads;

use super::Exit;

/// All that the search of a scenario needs.
pub(super) struct Solver<'s> {
    pub(super) model: &'s Model,
    pub(super) prepared: &'s Prepared,
    pub(super) limits: Limits,
    pub(super) threads: Threads,
    pub(super) interrupt: &'s Interrupt,
}

impl Solver<'_> {
    pub(super) fn scene(&self, scenario: usize) -> Scene {
        self.within(|budget| scene(self.model, self.prepared, scenario, budget))
    }

    /// Does something within the time of one scenario, with a line of progress.
    pub(super) fn within<T>(&self, work: impl FnOnce(&Budget<'_>) -> T) -> T {
        let deadline = Deadline::after(self.limits.seconds);
        let meter = Meter::start();
        work(&Budget {
            boxes: self.limits.boxes,
            stop: &|| self.interrupt.is_raised() || deadline.is_past(),
            workers: &self.threads,
            observer: Some(&|done| meter.add(done)),
        })
    }

    /// Names for all that was found, within the time of one scenario.
    pub(super) fn names(&self, scenes: &[Scene]) -> Names {
        if let [Scene { outcome: Ok(alone), .. }] = scenes {
            return Names::alone(alone.equilibria.list.len());
        }
        self.with_ways(|ways, stop| names(ways, scenes, stop))
    }

    /// Does something with the ways between scenarios, until it is to stop.
    pub(super) fn with_ways<T>(&self, use_them: impl FnOnce(&mut Ways, &dyn Fn() -> bool) -> T) -> T {
        let deadline = Deadline::after(self.limits.seconds);
        let mut ways = Ways::new(self.model, self.prepared);
        use_them(&mut ways, &|| self.interrupt.is_raised() || deadline.is_past())
    }
}

/// What was wrong with scenarios, and how a run that shows them has ended.
pub(super) fn ended(scenes: &[Scene], interrupted: bool, strict: bool) -> (Vec<Diagnostic>, Exit) {
    let problems = scenes.iter().filter_map(|scene| scene.outcome.as_ref().err());
    let failed: Vec<Diagnostic> = problems.flatten().cloned().collect();
    let is_proved = |scene: &Scene| scene.outcome.as_ref().is_ok_and(Solved::is_proved);
    let exit = if interrupted {
        Exit::Interrupted
    } else if !failed.is_empty() {
        Exit::Fault
    } else if strict && !scenes.iter().all(is_proved) {
        Exit::Unproved
    } else {
        Exit::Done
    };
    (failed, exit)
}
