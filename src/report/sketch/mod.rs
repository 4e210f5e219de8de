//! `restpoint sketch`: the direction field of a scenario in characters.
//!
//! [`View`] says what is looked at, [`Plot`] where in a given size its cells are, [`Picture`] holds the numbers for them,
//! [`draw`] chooses what stands in each cell, [`drawing()`] lays it between its axes as a grid, [`text()`] writes it all out
//! with a legend. A screen takes the grid, [`signs_used`] for a line below it, and draws [`Extras`] over the picture: what is
//! selected, a point that moves, the paths from and to it; [`ends`] and [`came_from`] say in a sentence where those lead. Each
//! is a pure function of what it is given. To draw something more: a [`Mark`] in `signs`, its place in `canvas`, its meaning
//! in `meanings`.

mod canvas;
mod drawing;
mod ending;
mod legend;
mod meanings;
mod plot;
mod signs;
mod text;
mod ticks;
mod trace;

pub use canvas::{Canvas, draw};
pub(super) use drawing::fitted;
pub use drawing::{drawing, place_in_drawing, point_in_drawing};
pub(super) use ending::entry;
pub use ending::{came_from, ends};
pub use legend::held;
pub use meanings::signs_used;
pub use plot::{LARGEST, Plot, SMALLEST, Size, legend_rows};
pub use signs::{Growth, Mark, flow, spacing};
pub use text::{closing, heading, text};
pub(super) use ticks::start;
pub use ticks::{Tick, across, round_numbers, upwards};
pub use trace::Trace;

pub use super::check::Style;

use super::kinds::{self, Look};
use super::table::Solved;
use crate::analysis::field::{
    Flow, Frame, LINEAR, Portrait, Profile, Scale, Slice, Window, above_zero, around, portrait, profile,
};
use crate::analysis::paths::Path;
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
    /// How abundances lie along its axes; of a single species only the first counts.
    pub scales: [Scale; 2],
}

/// What is drawn over a picture.
#[derive(Clone, Copy, Debug, Default)]
pub struct Extras<'e> {
    /// The selected equilibrium, by index: drawn over all others, its name in brackets.
    pub chosen: Option<usize>,
    /// The point that the user moves, along the axes; of a single species its second number is of no account.
    pub point: Option<[f64; 2]>,
    /// The path from it, states of all species.
    pub forwards: Option<&'e Path>,
    /// The path that leads to it.
    pub backwards: Option<&'e Path>,
    /// The most signs of directions, where not every place on their lattice is to have one: a larger sketch then has a wider
    /// lattice.
    pub most_arrows: Option<usize>,
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
            return Self::Line(profile(&flow, view.window.x, view.scales[0], plot.columns, plot.rows));
        }
        let frame = Frame::scaled(view.window, view.scales, plot.columns, plot.rows);
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

/// [`fit`] with linear axes.
pub fn window(model: &Model, bounds: &[Bound], scenes: &[&Solved], axes: [usize; 2]) -> Window {
    fit(model, bounds, scenes, axes, LINEAR)
}

/// The part of the plane that holds every equilibrium of some scenarios, and today's stocks, with a margin; within the
/// search box. One window for all, so that the sketches can be compared.
///
/// Along a species that is nowhere present it reaches to the level that the box was chosen by, else to the box's side. A
/// logarithmic axis begins as [`above_zero`] has it: a state without the species is outside.
pub fn fit(model: &Model, bounds: &[Bound], scenes: &[&Solved], [x, y]: [usize; 2], scales: [Scale; 2]) -> Window {
    let along = |species: usize, scale: Scale| {
        let states = scenes.iter().flat_map(|solved| &solved.equilibria.list).filter_map(|e| e.state.get(species));
        let now = model.now.iter().filter(|survey| survey.species.0 == species).map(|survey| &survey.value);
        let Some(bound) = bounds.get(species) else { return [0.0, 1.0] };
        let sides = [bound.lower, bound.upper];
        let mut seen: Vec<f64> = states.chain(now).copied().collect();
        if bound.chosen && seen.iter().all(|&x| x <= bound.lower) {
            seen.push(bound.upper / HEADROOM);
        }
        match scale {
            Scale::Linear => around(sides, seen.into_iter()),
            Scale::Logarithmic => above_zero(sides, seen.into_iter()),
        }
    };
    Window { x: along(x, scales[0]), y: along(y, scales[1]) }
}

/// The search box along two species: as far as a window may be zoomed and moved.
pub fn limit(bounds: &[Bound], axes: [usize; 2]) -> Window {
    let [x, y] = axes.map(|species| bounds.get(species).map_or([0.0, 1.0], |bound| [bound.lower, bound.upper]));
    Window { x, y }
}
