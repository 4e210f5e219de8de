//! What is known, what is under way, and what has to be asked for.
//!
//! An answer is kept under its task. Searches go one after another, the first wanted first: one that is wanted sooner
//! overtakes one that is under way. A job that nobody wants any more is forgotten and told to stop; its answer is dropped.

use super::Effect;
use super::task::{Answer, Painting, Task};
use crate::analysis::equilibria::Progress;

/// Number of a job; later jobs have higher ones.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct JobId(pub u64);

/// Answers that are kept though nobody wants them just now: stepping back to them takes no time.
const MOST_KEPT: usize = 48;

/// A job that is under way.
#[derive(Clone, Debug)]
pub struct Job {
    /// Its number.
    pub id: JobId,
    /// What it does.
    pub task: Task,
    /// How far a search has come.
    pub progress: Progress,
    /// What it has found so far, where it says so.
    pub partly: Option<Answer>,
}

/// What is known and under way.
#[derive(Clone, Debug, Default)]
pub struct Desk {
    last: u64,
    jobs: Vec<Job>,
    /// Those used last at the end.
    known: Vec<(Task, Answer)>,
}

impl Desk {
    /// Asks for what is wanted and neither known nor under way, and stops what is no longer wanted.
    pub fn demand(&mut self, wanted: &[Task]) -> Vec<Effect> {
        let is_search = |task: &Task| matches!(task, Task::Solve { .. });
        let first_search = wanted.iter().find(|task| is_search(task) && self.known(task).is_none());
        let is_due = |task: &Task| !is_search(task) || Some(task) == first_search;
        let mut effects = Vec::new();
        self.jobs.retain(|job| {
            let keeps = wanted.contains(&job.task) && is_due(&job.task);
            if !keeps {
                effects.push(Effect::Stop(job.id));
            }
            keeps
        });
        let missing: Vec<Task> = wanted
            .iter()
            .filter(|task| {
                is_due(task) && self.known(task).is_none() && !self.jobs.iter().any(|job| job.task == **task)
            })
            .cloned()
            .collect();
        for task in missing {
            if self.jobs.iter().any(|job| job.task == task) {
                continue;
            }
            self.last += 1;
            let id = JobId(self.last);
            self.jobs.push(Job { id, task: task.clone(), progress: Progress::default(), partly: None });
            effects.push(Effect::Ask(id, task));
        }
        self.forget(wanted);
        effects
    }

    /// Takes an answer; `None` where nobody waits for it.
    pub fn take(&mut self, id: JobId, answer: Answer) -> Option<Task> {
        let place = self.jobs.iter().position(|job| job.id == id)?;
        let task = self.jobs.swap_remove(place).task;
        self.known.push((task.clone(), answer));
        Some(task)
    }

    /// How far a search has come.
    pub fn advance(&mut self, id: JobId, progress: Progress) {
        if let Some(job) = self.jobs.iter_mut().find(|job| job.id == id) {
            job.progress = progress;
        }
    }

    /// A job has found something, and goes on.
    pub fn take_part(&mut self, id: JobId, answer: Answer) {
        if let Some(job) = self.jobs.iter_mut().find(|job| job.id == id) {
            job.partly = Some(answer);
        }
    }

    /// What a task under way has found so far.
    pub fn partly(&self, task: &Task) -> Option<&Answer> {
        self.jobs.iter().find(|job| job.task == *task)?.partly.as_ref()
    }

    /// The answer to a task.
    pub fn known(&self, task: &Task) -> Option<&Answer> {
        self.known.iter().rev().find(|(known, _)| known == task).map(|(_, answer)| answer)
    }

    /// The latest sketch of the same states in the same cells that is known, whatever else has changed: what can be shown until
    /// the one that is wanted is there.
    pub fn before(&self, wanted: &Painting) -> Option<&Painting> {
        self.known.iter().rev().find_map(|(task, answer)| match (task, answer) {
            (Task::Paint(painting), Answer::Painted(Some(_)))
                if painting.scene == wanted.scene && painting.plot == wanted.plot =>
            {
                Some(painting)
            }
            _ => None,
        })
    }

    /// What is under way.
    pub fn jobs(&self) -> &[Job] {
        &self.jobs
    }

    /// The latest sketch in the same cells that is known, of whatever states: for a sketch whose states move.
    pub fn before_moving(&self, wanted: &Painting) -> Option<&Painting> {
        self.known.iter().rev().find_map(|(task, answer)| match (task, answer) {
            (Task::Paint(painting), Answer::Painted(Some(_)))
                if painting.plot == wanted.plot && painting.window == wanted.window =>
            {
                Some(painting)
            }
            _ => None,
        })
    }

    /// The following of branches that is under way.
    pub fn following(&self) -> Option<&Job> {
        self.jobs.iter().find(|job| matches!(job.task, Task::Respond { .. }))
    }

    /// The search that is under way.
    pub fn search(&self) -> Option<&Job> {
        self.jobs.iter().find(|job| matches!(job.task, Task::Solve { .. }))
    }

    fn forget(&mut self, wanted: &[Task]) {
        while self.known.len() > MOST_KEPT + wanted.len() {
            let Some(place) = self.known.iter().position(|(task, _)| !wanted.contains(task)) else { return };
            self.known.remove(place);
        }
    }
}
