//! Scenarios side by side: which of them, where their sketches stand, and which equilibrium is selected.

use super::geometry::{Area, Size, frame, scrolled};
use super::study::{Slot, Study};
use super::task::{Answer, Compared, Found, Task};
use super::{App, Desk};
use std::sync::Arc;

/// Scenarios side by side at most.
pub const MOST: usize = 4;
/// Columns of the terminal that each needs at least.
const WIDTH: u16 = 26;

/// What is selected.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Beside {
    /// How many scenarios the user wants to see.
    pub wanted: usize,
    /// The equilibrium, among all names in the order of first appearance.
    pub row: usize,
    /// The first that is listed.
    pub from: usize,
}

impl Default for Beside {
    fn default() -> Self {
        Self { wanted: MOST, row: 0, from: 0 }
    }
}

impl Beside {
    /// Another number of scenarios, from two on and round.
    pub fn turn(&mut self) {
        self.wanted = if self.wanted >= MOST { 2 } else { self.wanted + 1 };
    }
}

/// The slots that are shown: the first, which all others are compared with, and those around the one that is looked at.
pub fn shown(study: &Study, size: Size) -> Vec<usize> {
    let fitting = usize::from(size.columns / WIDTH).max(2);
    let count = study.beside.wanted.min(fitting).min(study.slots.len());
    let others = count.saturating_sub(1);
    let first = scrolled(0, study.current.saturating_sub(1), study.slots.len().saturating_sub(1), others) + 1;
    let others = (0..others).map(|k| first + k);
    (0..study.slots.len().min(1)).chain(others.filter(|&slot| slot < study.slots.len())).collect()
}

/// Where things stand.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Parts {
    /// What has become of the selected equilibrium, in words.
    pub sentence: Area,
    /// One for each scenario: its name, and its sketch below.
    pub columns: Vec<[Area; 2]>,
    /// Where the equilibria are listed, one a row.
    pub list: Area,
    /// Where the selected one is compared, one quantity a row.
    pub numbers: Area,
}

/// Columns for names and quantities at the left of the lists, on a narrow terminal and on a wide one.
const LABELS: [u16; 2] = [16, 26];
/// From how many columns on a terminal is wide.
const WIDE: u16 = 120;

/// The parts of the screen, with so many scenarios and equilibria.
pub fn parts(size: Size, scenarios: usize, count: usize) -> Parts {
    let (sentence, rest) = frame(size).body.top(2);
    let (titles, rest) = rest.top(1);
    let (sketches, rest) = rest.top((rest.rows / 2).max(8));
    let wanted = u16::try_from(count).unwrap_or(u16::MAX).saturating_add(1);
    let (list, numbers) = rest.top(wanted.min(rest.rows / 2 + 1));
    let number = u16::try_from(scenarios.max(1)).unwrap_or(1);
    let width = size.columns / number;
    let column = |k: u16| {
        // A blank column between two sketches.
        let columns = width.saturating_sub(u16::from(k + 1 < number));
        [titles, sketches].map(|area| Area { x: k * width, columns, ..area })
    };
    Parts { sentence, columns: (0..number).map(column).collect(), list, numbers }
}

impl Parts {
    /// Columns for names and quantities at the left of the lists.
    pub fn labels(&self) -> u16 {
        LABELS[usize::from(self.list.columns >= WIDE)]
    }

    /// Where a scenario's cells of the lists begin, and how wide they are.
    pub fn cell(&self, column: usize) -> [u16; 2] {
        let count = u16::try_from(self.columns.len().max(1)).unwrap_or(1);
        let width = self.list.columns.saturating_sub(self.labels()) / count;
        [self.labels() + width * u16::try_from(column).unwrap_or(0), width.saturating_sub(1)]
    }
}

/// The comparison of the scenarios that are shown; `None` before all are searched and named.
pub fn task(app: &App, study: &Study) -> Option<Task> {
    comparing(app, study, &shown(study, app.size))
}

/// The comparison of the tried values with the scenario that they are set over.
pub fn tried(app: &App, study: &Study) -> Option<Task> {
    comparing(app, study, &[study.base_slot()?, study.tried_slot()?])
}

fn comparing(app: &App, study: &Study, slots: &[usize]) -> Option<Task> {
    let nameable = study.nameable();
    let is_ready = |slot: &usize| nameable.contains(slot) && is_named(study, *slot);
    if slots.len() < 2 || !slots.iter().all(is_ready) {
        return None;
    }
    let found = |slot: &Slot| slot.found.as_ref().map(|(_, scene)| Found(Arc::clone(scene)));
    let scenes: Vec<Found> = slots.iter().filter_map(|&k| found(&study.slots[k])).collect();
    let names = slots.iter().map(|&k| study.names(k).to_vec()).collect();
    // The world of the tried values has the scenarios of the file as well.
    let world = slots.last().map_or(&study.world, |&k| &study.slots[k].world);
    Some(Task::Compare { world: Arc::clone(world), scenes, names, budget: app.budget })
}

fn is_named(study: &Study, slot: usize) -> bool {
    let count = study.slots[slot].solved().map_or(0, |solved| solved.equilibria.list.len());
    study.names(slot).len() == count
}

/// What came of it, where that is known.
pub fn compared<'d>(desk: &'d Desk, task: &Task) -> Option<&'d Compared> {
    match desk.known(task)? {
        Answer::Compared(compared) => Some(compared),
        _ => None,
    }
}

/// Every name on the screen, in the order of first appearance.
pub fn ids(study: &Study, size: Size) -> Vec<&str> {
    let mut ids: Vec<&str> = Vec::new();
    for slot in shown(study, size) {
        let names = study.names(slot).iter().map(String::as_str);
        ids.extend(names.filter(|id| !ids.contains(id)).collect::<Vec<_>>());
    }
    ids
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn parts_fit_and_have_room() {
        for columns in [0, 30, 60, 80, 120, 200, 400] {
            for rows in [0, 5, 20, 24, 50] {
                for (scenarios, count) in [(0, 0), (2, 4), (3, 1), (4, 500)] {
                    let size = Size { columns, rows };
                    let parts = parts(size, scenarios, count);
                    let areas = parts.columns.iter().flatten().chain([&parts.sentence, &parts.list, &parts.numbers]);
                    for area in areas {
                        let fits = area.x + area.columns <= columns && area.y + area.rows <= rows;
                        assert!(fits, "{size:?}: {area:?}");
                    }
                    let fitting = scenarios <= usize::from(columns / WIDTH).max(2);
                    if !size.is_too_small() && fitting {
                        assert!(parts.columns.iter().all(|[_, sketch]| sketch.columns >= 20 && sketch.rows >= 7));
                        assert!((count == 0 || parts.list.rows >= 2) && parts.numbers.rows >= 1, "{parts:?}");
                    }
                }
            }
        }
    }
}
