//! `restpoint sketch`: the direction field of a scenario in characters.
//!
//! [`View`] says what is looked at, [`Plot`] where in a given size its cells are, [`Picture`] holds the numbers for them,
//! [`draw`] chooses what stands in each cell, [`text()`] writes it all out. Each is a pure function of what it is given, so
//! that a screen can use them as well. To draw something more: a [`Mark`] in `signs`, its place in `canvas`, its meaning in
//! `legend`.

mod canvas;
mod legend;
mod plot;
mod signs;
mod text;
mod ticks;

pub use canvas::{Canvas, draw};
pub use plot::{LARGEST, Plot, SMALLEST, Size, legend_rows};
pub use signs::{Growth, Mark, flow, spacing};
pub use text::{closing, heading, text};
pub use ticks::{Tick, across, round_numbers, upwards};

pub use super::check::Style;

use super::kinds::{self, Look};
use super::table::Solved;
use crate::analysis::field::{Flow, Frame, Portrait, Profile, Slice, Window, around, portrait, profile};
use crate::analysis::subject::Subject;
use crate::model::Model;
use crate::model::system::bounds::{Bound, HEADROOM};

/// What is looked at: one scenario's equilibria from in front of a slice.
#[derive(Clone, Copy, Debug)]
pub struct View<'v> {
    /// The model.
    pub model: &'v Model,
    /// Index among the model's scenarios.
    pub scenario: usize,
    /// Its equilibria, and what is said of them.
    pub solved: &'v Solved,
    /// Their names.
    pub ids: &'v [String],
    /// The plane, or line.
    pub slice: &'v Slice,
    /// What part of it; of a single species only the horizontal sides count.
    pub window: Window,
}

/// The numbers that are drawn.
#[derive(Clone, Debug, PartialEq)]
pub enum Picture {
    /// Two species.
    Plane(Portrait),
    /// The rate of a single species.
    Line(Profile),
}

impl Picture {
    /// Computes what a plot of a view shows.
    pub fn new(subject: &mut Subject<'_>, view: &View<'_>, plot: &Plot) -> Self {
        let flow = Flow::new(subject, view.slice.clone());
        if view.slice.y.is_none() {
            return Self::Line(profile(&flow, view.window.x, plot.columns, plot.rows));
        }
        let frame = Frame::new(view.window, plot.columns, plot.rows);
        let Solved { equilibria, assessment, .. } = view.solved;
        Self::Plane(portrait(subject, &flow, frame, equilibria, assessment))
    }

    /// The cells, and the part of the plane that they show.
    pub fn frame(&self) -> &Frame {
        match self {
            Self::Plane(portrait) => &portrait.frame,
            Self::Line(profile) => &profile.frame,
        }
    }
}

impl View<'_> {
    /// The equilibria that lie in the slice, by index.
    pub fn in_slice(&self) -> impl Iterator<Item = usize> + '_ {
        let list = self.solved.equilibria.list.iter().enumerate();
        list.filter(|(_, equilibrium)| self.slice.has(&equilibrium.state)).map(|(index, _)| index)
    }

    /// Where an equilibrium lies along the axes.
    fn place(&self, index: usize) -> Option<[f64; 2]> {
        self.solved.equilibria.list.get(index).map(|equilibrium| self.slice.project(&equilibrium.state))
    }

    /// How an equilibrium is written; as an unknown one where nothing was said of its linear part.
    fn look(&self, index: usize) -> Look {
        let linear = self.solved.assessment.equilibria.get(index).and_then(|one| one.linear.as_ref().ok());
        linear.map_or(kinds::UNKNOWN, |linear| kinds::of(linear.kind))
    }

    fn is_stable(&self, index: usize) -> bool {
        let linear = self.solved.assessment.equilibria.get(index).and_then(|one| one.linear.as_ref().ok());
        linear.is_some_and(|linear| linear.stable == Some(true))
    }

    /// Today's stocks along the axes, where they are known; the others may be elsewhere than they are held.
    fn now(&self) -> Option<[f64; 2]> {
        let of = |species: usize| self.model.now.iter().find(|one| one.species.0 == species).map(|one| one.value);
        Some([of(self.slice.x)?, self.slice.y.map_or(Some(0.0), of)?])
    }
}

/// The part of the plane that holds every equilibrium of some scenarios, and today's stocks, with a margin; within the
/// search box. One window for all, so that the sketches can be compared.
///
/// Along a species that is nowhere present it reaches to the level that the box was chosen by, else to the box's side.
pub fn window(model: &Model, bounds: &[Bound], scenes: &[&Solved], [x, y]: [usize; 2]) -> Window {
    let along = |species: usize| {
        let states = scenes.iter().flat_map(|solved| &solved.equilibria.list).filter_map(|e| e.state.get(species));
        let now = model.now.iter().filter(|survey| survey.species.0 == species).map(|survey| &survey.value);
        let Some(bound) = bounds.get(species) else { return [0.0, 1.0] };
        let sides = [bound.lower, bound.upper];
        let mut seen: Vec<f64> = states.chain(now).copied().collect();
        if bound.chosen && seen.iter().all(|&x| x <= bound.lower) {
            seen.push(bound.upper / HEADROOM);
        }
        around(sides, seen.into_iter())
    };
    Window { x: along(x), y: along(y) }
}
