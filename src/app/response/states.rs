//! The states at the rule: from the branches at once, from the search there as soon as it has answered.

use std::sync::Arc;

use super::{Pick, at_rule, known, rule};
use crate::analysis::linearise::Kind;
use crate::analysis::response::Response;
use crate::app::study::World;
use crate::app::task::Answer;
use crate::app::{App, Study};
use crate::report::response::plot::{Met, cut};
use crate::report::table::{Scene, Solved};

/// A state at the rule.
#[derive(Clone, Debug, PartialEq)]
pub struct State {
    /// Its name: that of the equilibrium at the present value that it is joined to, else of its branch; empty for neither.
    pub name: String,
    /// The state of all species.
    pub state: Vec<f64>,
    /// Its type; `None` where it has no linear part.
    pub kind: Option<Kind>,
    /// Its place in the list of what was found at the rule, once that is known.
    pub found: Option<usize>,
    /// Where it lies on the branches.
    pub met: Option<Met>,
}

/// What the search at the rule found, and in which world; at the present value what was found before.
pub fn there(app: &App, study: &Study) -> Option<(Arc<World>, Arc<Scene>)> {
    match at_rule(app, study) {
        None => rule(study).and(study.slot()?.found.clone()),
        Some(task) => match app.desk.known(&task)? {
            Answer::Cut(cut) => cut.clone(),
            _ => None,
        },
    }
}

/// The states at the rule, in the order of the search where it has answered, else branch by branch.
pub fn states(app: &App, study: &Study) -> Vec<State> {
    let at = rule(study);
    let response = known(app, study).map(|(response, _)| response);
    let met = response.zip(at).map_or_else(Vec::new, |(response, at)| cut(response, at));
    let joined = response.map_or_else(Vec::new, |response| cut(response, response.control.present));
    let names: Vec<String> = met.iter().map(|one| name(study, &joined, one)).collect();
    let found = there(app, study);
    let Some(solved) = found.as_ref().and_then(|(_, scene)| scene.outcome.as_ref().ok()) else {
        let state = |(met, name): (Met, String)| State {
            name,
            state: met.state.clone(),
            kind: met.kind,
            found: None,
            met: Some(met),
        };
        return met.into_iter().zip(names).map(state).collect();
    };
    let own_names = at_rule(app, study).is_none();
    let mut free: Vec<Option<(Met, String)>> = met.into_iter().zip(names).map(Some).collect();
    let one = |place: usize| {
        let equilibrium = &solved.equilibria.list[place];
        let linear = solved.assessment.equilibria.get(place).and_then(|one| one.linear.as_ref().ok());
        let nearest = nearest(&free, &equilibrium.state, &size(study));
        let (met, name) =
            nearest.and_then(|k| free[k].take()).map_or((None, None), |(met, name)| (Some(met), Some(name)));
        let own = study.names(study.current).get(place).filter(|_| own_names).cloned();
        State {
            name: own.or(name).unwrap_or_default(),
            state: equilibrium.state.clone(),
            kind: linear.map(|linear| linear.kind),
            found: Some(place),
            met,
        }
    };
    (0..solved.equilibria.list.len()).map(one).collect()
}

/// The state that is picked.
pub fn picked(app: &App, study: &Study) -> Option<State> {
    let mut all = states(app, study);
    let place = place(app, study, &all)?;
    Some(all.swap_remove(place))
}

/// The place of the state that is picked; where its branch has none, of the state nearest to where the branch ended.
pub fn place(app: &App, study: &Study, all: &[State]) -> Option<usize> {
    let last = all.len().checked_sub(1)?;
    let on = |branch: usize, stretch: Option<usize>| {
        let is_it = |met: &Met| met.branch == branch && stretch.is_none_or(|stretch| met.stretch == stretch);
        all.iter().position(|one| one.met.as_ref().is_some_and(is_it))
    };
    let found = match study.responding.pick {
        Pick::Selected => {
            let name = study.name_of_chosen();
            all.iter().position(|one| !one.name.is_empty() && Some(&one.name) == name.as_ref())
        }
        Pick::Branch(branch, stretch) => {
            let nearest = || nearest_to_end(study, known(app, study)?.0, branch, all);
            on(branch, Some(stretch)).or_else(|| on(branch, None)).or_else(nearest)
        }
        Pick::Place(place) => Some(place.min(last)),
    };
    found.or(Some(0))
}

/// The branch that the picked state lies on.
pub fn chosen_branch(app: &App, study: &Study) -> Option<usize> {
    picked(app, study)?.met.map(|met| met.branch)
}

/// How large each species' axis is: the side of its search box.
fn size(study: &Study) -> Vec<f64> {
    study.world.prepared.bounds.iter().map(|bound| bound.upper - bound.lower).collect()
}

/// What may lie between a state and where its branch was met, as a share of the search box: a branch is met between two points
/// of it.
const NEAR: f64 = 0.02;

/// How far apart two states are: the largest difference of an abundance, as a share of the search box.
fn apart(a: &[f64], b: &[f64], size: &[f64]) -> f64 {
    let one = |((a, b), size): ((&f64, &f64), &f64)| (a - b).abs() / size;
    a.iter().zip(b).zip(size).map(one).fold(0.0, f64::max)
}

/// The state nearest to the point of a branch that is nearest to the rule.
fn nearest_to_end(study: &Study, response: &Response, branch: usize, all: &[State]) -> Option<usize> {
    let at = rule(study)?;
    let points = response.branches.get(branch)?.points.iter().filter(|point| point.feasible);
    let end = points.min_by(|a, b| (a.at - at).abs().total_cmp(&(b.at - at).abs()))?;
    let size = size(study);
    let off = |place: &usize| apart(&all[*place].state, &end.state, &size);
    (0..all.len()).min_by(|a, b| off(a).total_cmp(&off(b)))
}

/// The nearest of those that are left, if it is near.
fn nearest(free: &[Option<(Met, String)>], state: &[f64], size: &[f64]) -> Option<usize> {
    let left = free.iter().enumerate().filter_map(|(k, one)| Some((k, apart(&one.as_ref()?.0.state, state, size))));
    left.filter(|(_, apart)| *apart <= NEAR).min_by(|a, b| a.1.total_cmp(&b.1)).map(|(k, _)| k)
}

/// The name of the equilibrium that a state is joined to by its part of the branch; else the branch's own, counted from 1.
fn name(study: &Study, joined: &[Met], met: &Met) -> String {
    let same = joined.iter().find(|other| other.branch == met.branch && other.stretch == met.stretch);
    let named = same.and_then(|same| equilibrium(study.solved()?, study, same));
    named.unwrap_or_else(|| format!("B{}", met.branch + 1))
}

fn equilibrium(solved: &Solved, study: &Study, met: &Met) -> Option<String> {
    let size = size(study);
    let list = &solved.equilibria.list;
    let apart = |place: usize| apart(&list[place].state, &met.state, &size);
    let near = (0..list.len()).map(|place| (place, apart(place))).filter(|(_, apart)| *apart <= NEAR);
    let (place, _) = near.min_by(|a, b| a.1.total_cmp(&b.1))?;
    study.names(study.current).get(place).cloned()
}
