//! What takes time: a task carries all that it needs, an answer all that came of it.

use std::sync::Arc;

use super::study::{TriedSet, World};
use super::{Read, Source};
use crate::analysis::field::{Scale, Slice, Window};
use crate::analysis::passage::Passage;
use crate::analysis::paths::Path;
use crate::analysis::response::Control;
use crate::model::ParameterId;
use crate::report::course::Course;
use crate::report::response::Along;
use crate::report::sketch::{Picture, Plot};
use crate::report::table::{Names, Scene, Solved};

/// What takes time. Two tasks that are equal have the same answer.
#[derive(Clone, Debug, PartialEq)]
pub enum Task {
    /// Reads a model and makes it ready, with parameters set by name; the number tells one reading from another.
    Read(Source, Vec<(String, f64)>, u64),
    /// Makes a model with a tried scenario at its end ready; the number is the edition that it gets.
    Prepare(Arc<World>, TriedSet, u64),
    /// Searches a scenario.
    Solve {
        /// The model.
        world: Arc<World>,
        /// Which scenario.
        scenario: usize,
        /// Seconds that it may take.
        budget: f64,
    },
    /// Names what was found in several scenarios by following it from one to the next.
    Name {
        /// A model with all those scenarios.
        world: Arc<World>,
        /// What was found, in the order of the scenarios.
        scenes: Vec<Found>,
        /// Where the last of them is of tried values: the place of the scenario that they are set over.
        over: Option<usize>,
        /// Seconds that it may take.
        budget: f64,
    },
    /// Follows the equilibria of the first of several scenarios to each of the others.
    Compare {
        /// A model with all those scenarios.
        world: Arc<World>,
        /// What was found, in the order of the columns.
        scenes: Vec<Found>,
        /// Names of what was found, in the same order.
        names: Vec<Vec<String>>,
        /// Seconds that it may take.
        budget: f64,
    },
    /// Computes what a sketch shows.
    Paint(Painting),
    /// Follows the path from a state.
    Follow {
        /// The model.
        world: Arc<World>,
        /// Which scenario.
        scenario: usize,
        /// The state of all species.
        start: Vec<f64>,
        /// For how long, in time units; backwards where negative.
        until: f64,
    },
    /// Follows every equilibrium of a scenario over the range of a control.
    Respond {
        /// The model.
        world: Arc<World>,
        /// What was found at the present value.
        scene: Found,
        /// The control.
        control: Control,
        /// Seconds that it may take.
        budget: f64,
    },
    /// Searches a scenario with one parameter at another value.
    Cut {
        /// The model.
        world: Arc<World>,
        /// Which scenario.
        scenario: usize,
        /// The parameter.
        parameter: ParameterId,
        /// Its value.
        at: f64,
        /// Seconds that it may take.
        budget: f64,
    },
    /// Follows the path after a knock, and compares it with what the linear part predicts.
    Run(Release),
}

/// A path from beside an equilibrium.
#[derive(Clone, Debug, PartialEq)]
pub struct Release {
    /// The model.
    pub world: Arc<World>,
    /// What was found.
    pub scene: Found,
    /// The place of the equilibrium in the list of those found.
    pub equilibrium: usize,
    /// The state of all species at the start.
    pub start: Vec<f64>,
    /// For how long, in time units.
    pub until: f64,
}

/// A sketch to be computed.
#[derive(Clone, Debug, PartialEq)]
pub struct Painting {
    /// The model.
    pub world: Arc<World>,
    /// What was found.
    pub scene: Found,
    /// The plane.
    pub slice: Slice,
    /// The part of the plane.
    pub window: Window,
    /// How abundances lie along its axes.
    pub scales: [Scale; 2],
    /// The cells.
    pub plot: Plot,
}

/// What was found in a scenario, the same where it is the same search.
#[derive(Clone, Debug)]
pub struct Found(pub Arc<Scene>);

impl PartialEq for Found {
    fn eq(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.0, &other.0)
    }
}

impl Found {
    /// What was found, where it could be searched.
    pub fn solved(&self) -> Option<&Solved> {
        self.0.outcome.as_ref().ok()
    }
}

/// Scenarios side by side: all that a comparison is made of.
#[derive(Clone, Debug)]
pub struct Compared {
    /// The model.
    pub world: Arc<World>,
    /// What was found, column by column.
    pub scenes: Vec<Scene>,
    /// Names of what was found.
    pub names: Names,
    /// The names that they have where only these are looked at: what the command that makes the table again gives them.
    pub own_names: Names,
    /// From the first column to each of the others.
    pub passages: Vec<Option<Passage>>,
    /// Every name, in the order of first appearance.
    pub ids: Vec<String>,
}

/// What came of a task.
#[derive(Clone, Debug)]
pub enum Answer {
    /// Of reading.
    Read(Read),
    /// Of making ready: the world, or what is wrong with the tried values.
    Prepared(Result<Arc<World>, String>),
    /// Of searching.
    Solved(Box<Scene>),
    /// Of naming, scenario by scenario.
    Named(Arc<Names>),
    /// Of comparing.
    Compared(Arc<Compared>),
    /// Of painting; nothing where the scenario has no equations.
    Painted(Option<Arc<Picture>>),
    /// Of following.
    Followed(Option<Arc<Path>>),
    /// Of following after a knock; nothing where the scenario has no equations.
    Ran(Option<Arc<Course>>),
    /// Of following over the range of a control; nothing where the scenario has no equations.
    Responded(Option<Arc<Along>>),
    /// Of searching at another value, with the world that has it; nothing where the scenario has no equations.
    Cut(Option<(Arc<World>, Arc<Scene>)>),
}
