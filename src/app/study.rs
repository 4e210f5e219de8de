//! A model that is open: its scenarios, what is known of each, and what was tried.

use std::sync::Arc;

use super::Source;
use super::beside::Beside;
use super::interactions::Interacting;
use super::knock::Knock;
use super::memory::Session;
use super::response::Responding;
use super::sketch::Sketch;
use crate::analysis::assess::Assessed;
use crate::analysis::equilibria::Equilibrium;
use crate::analysis::prepare::Prepared;
use crate::model::{Model, Original, ParameterId};
use crate::report::sketch::Style;
use crate::report::table::{Case, Names, Scene, Solved};

/// A model ready to be searched. Two of them are the same where their editions are.
#[derive(Clone, Debug)]
pub struct World {
    /// Another number for every reading and every tried value.
    pub edition: u64,
    /// The model, the tried scenario last where there is one.
    pub original: Original,
    /// Its equations and search box.
    pub prepared: Prepared,
    /// Parameters set for the whole session, over file and scenario.
    pub set: Vec<(ParameterId, f64)>,
}

impl PartialEq for World {
    fn eq(&self, other: &Self) -> bool {
        self.edition == other.edition
    }
}

/// What is known of one scenario.
#[derive(Clone, Debug)]
pub struct Slot {
    /// What it is to be searched in.
    pub world: Arc<World>,
    /// Its index among the scenarios of that model.
    pub scenario: usize,
    /// What was found last, in which world; it is shown until there is something newer.
    pub found: Option<(Arc<World>, Arc<Scene>)>,
}

impl Slot {
    /// Not searched yet.
    pub fn new(world: Arc<World>, scenario: usize) -> Self {
        Self { world, scenario, found: None }
    }

    /// Whether what is shown is of the world that it is to be searched in.
    pub fn is_fresh(&self) -> bool {
        self.found.as_ref().is_some_and(|(world, _)| *world == self.world)
    }

    /// What was found, if it could be searched at all.
    pub fn solved(&self) -> Option<&Solved> {
        self.found.as_ref().and_then(|(_, scene)| scene.outcome.as_ref().ok())
    }

    /// The scenario's name.
    pub fn name(&self) -> &str {
        self.world.original.model.scenarios.get(self.scenario).map_or("", |scenario| &scenario.name)
    }
}

/// Values over one scenario of the file.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct TriedSet {
    /// Index of the scenario that they are set over.
    pub base: usize,
    /// The values, one a parameter at most, in the order of parameters.
    pub values: Vec<(ParameterId, f64)>,
}

/// Values that were tried, and the way back.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Tried {
    /// What is tried now; nothing where it has no values.
    pub now: TriedSet,
    /// What it was before, the last at the end.
    pub undo: Vec<TriedSet>,
    /// What was taken back, the last at the end.
    pub redo: Vec<TriedSet>,
    /// The edition of the world that it is to be searched in.
    pub edition: u64,
    /// The edition that is kept outside, or written to a file.
    pub kept: u64,
    /// The edition that was written to a file.
    pub recorded: u64,
    /// Whether it is to be looked at as soon as it is ready.
    pub follow: bool,
}

/// A model that is open.
#[derive(Clone, Debug)]
pub struct Study {
    /// Where it comes from.
    pub source: Source,
    /// The model as the file has it.
    pub world: Arc<World>,
    /// One a scenario of the file, in its order; then, where values are tried, one for those.
    pub slots: Vec<Slot>,
    /// Names of the equilibria found, slot by slot.
    pub names: Vec<Vec<String>>,
    /// The slot that is looked at.
    pub current: usize,
    /// The equilibrium that is selected, among those of the slot.
    pub chosen: usize,
    /// The name of the equilibrium that is to be selected once there are names.
    pub wanted: Option<String>,
    /// The first equilibrium of the list that is shown.
    pub from: usize,
    /// The first number of the selected equilibrium that is shown.
    pub facts_from: usize,
    /// What is selected where scenarios stand side by side.
    pub beside: Beside,
    /// What the sketch shows.
    pub sketch: Sketch,
    /// How the interactions are looked at.
    pub interacting: Interacting,
    /// The knock.
    pub knock: Knock,
    /// How the response to a control is looked at.
    pub responding: Responding,
    /// Values that were tried.
    pub tried: Tried,
    /// What was tried when the program ran last and is in no file, until something is tried now.
    pub offer: Option<Session>,
    /// The parameter that is selected where values are tried, by its place in [`Study::parameters`].
    pub parameter: usize,
    /// The first parameter that is shown.
    pub parameters_from: usize,
}

impl Study {
    /// A model of which nothing is known yet, with the scenarios of these indices.
    pub fn new(source: Source, world: Arc<World>, scenarios: impl IntoIterator<Item = usize>) -> Self {
        let slots = scenarios.into_iter().map(|scenario| Slot::new(Arc::clone(&world), scenario)).collect();
        Self {
            source,
            world,
            slots,
            names: Vec::new(),
            current: 0,
            chosen: 0,
            wanted: None,
            from: 0,
            facts_from: 0,
            beside: Beside::default(),
            sketch: Sketch::default(),
            interacting: Interacting::default(),
            knock: Knock::default(),
            responding: Responding::default(),
            tried: Tried::default(),
            offer: None,
            parameter: 0,
            parameters_from: 0,
        }
    }

    /// The model as the file has it.
    pub fn model(&self) -> &Model {
        &self.world.original.model
    }

    /// The slot that is looked at.
    pub fn slot(&self) -> Option<&Slot> {
        self.slots.get(self.current)
    }

    /// What was found in it.
    pub fn solved(&self) -> Option<&Solved> {
        self.slot().and_then(Slot::solved)
    }

    /// The equilibrium that is selected, with what is known of it.
    pub fn selected(&self) -> Option<Selected<'_>> {
        let (world, scene) = self.slot()?.found.as_ref()?;
        let solved = scene.outcome.as_ref().ok()?;
        let place = self.chosen;
        let equilibrium = solved.equilibria.list.get(place)?;
        let assessed = solved.assessment.equilibria.get(place)?;
        Some(Selected { world, scene, solved, place, equilibrium, assessed })
    }

    /// Names of the equilibria of a slot.
    pub fn names(&self, slot: usize) -> &[String] {
        self.names.get(slot).map_or(&[], Vec::as_slice)
    }

    /// How many equilibria the slot that is looked at has.
    pub fn count(&self) -> usize {
        self.solved().map_or(0, |solved| solved.equilibria.list.len())
    }

    /// How many slots are those of the file's scenarios.
    pub fn of_file(&self) -> usize {
        self.slots.iter().filter(|slot| slot.world == self.world).count()
    }

    /// Whether a slot holds tried values.
    pub fn is_tried(&self, slot: usize) -> bool {
        slot >= self.of_file()
    }

    /// Takes what was found in a world's scenario; nothing where nobody asks for it any more.
    pub fn take(&mut self, world: &Arc<World>, scene: Scene) {
        let scenario = scene.scenario;
        let is_it = |slot: &Slot| slot.world == *world && slot.scenario == scenario;
        let Some(place) = self.slots.iter().position(is_it) else { return };
        if place == self.current {
            self.wanted = self.name_of_chosen().or(self.wanted.take());
        }
        self.slots[place].found = Some((Arc::clone(world), Arc::new(scene)));
        // Until they are named anew: a name must not be that of another.
        if let Some(names) = self.names.get_mut(place) {
            names.clear();
        }
    }

    /// Takes the names of what was found in these slots.
    pub fn name(&mut self, slots: impl IntoIterator<Item = usize>, names: &Names) {
        self.names.resize(self.slots.len(), Vec::new());
        for (k, slot) in slots.into_iter().enumerate() {
            if let Some(place) = self.names.get_mut(slot) {
                *place = names.of(k).to_vec();
            }
        }
        if let Some(wanted) = self.wanted.take() {
            self.choose_named(Some(&wanted));
        }
    }

    /// The slots whose equilibria can be named together: all that are searched in the world that they belong to.
    pub fn nameable(&self) -> Vec<usize> {
        (0..self.slots.len()).filter(|&k| self.is_of_now(&self.slots[k])).collect()
    }

    /// The name of the equilibrium that is selected.
    pub fn name_of_chosen(&self) -> Option<String> {
        self.names(self.current).get(self.chosen).cloned()
    }

    /// Selects the equilibrium of that name in the slot that is looked at, as soon as it has names; where none is called so
    /// the place in the list stays.
    pub fn choose_named(&mut self, name: Option<&str>) {
        if self.names(self.current).is_empty() {
            self.wanted = name.map(str::to_owned);
            return;
        }
        if let Some(place) = self.names(self.current).iter().position(|other| Some(other.as_str()) == name) {
            self.chosen = place;
        }
        self.chosen = self.chosen.min(self.count().saturating_sub(1));
    }
}

/// The equilibrium that is selected.
#[derive(Clone, Copy, Debug)]
pub struct Selected<'s> {
    /// What it was found in.
    pub world: &'s Arc<World>,
    /// The search that found it.
    pub scene: &'s Arc<Scene>,
    /// What was found with it.
    pub solved: &'s Solved,
    /// Its place in the list.
    pub place: usize,
    /// What it is.
    pub equilibrium: &'s Equilibrium,
    /// What is said of it.
    pub assessed: &'s Assessed,
}

impl<'s> Selected<'s> {
    /// The model, with its scenarios.
    pub fn model(&self) -> &'s Model {
        &self.world.original.model
    }

    /// Its name; empty where it has none yet.
    pub fn id(self, study: &Study) -> &str {
        study.names(study.current).get(self.place).map_or("", String::as_str)
    }

    /// Its sign, name and type, and how sure they are.
    pub fn label(&self, study: &Study, style: Style) -> String {
        self.case(study).label(self.place, style == Style::Ascii)
    }

    /// Its name and type, and how sure they are.
    pub fn in_words(&self, study: &Study) -> String {
        self.case(study).in_words(self.place)
    }

    fn case<'a>(&'a self, study: &'a Study) -> Case<'a> {
        let ids = study.names(study.current);
        Case { model: self.model(), bounds: &self.world.prepared.bounds, scene: self.scene, solved: self.solved, ids }
    }
}
