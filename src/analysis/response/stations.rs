//! The certified search at values of the control along the range: what it finds on no branch is followed as well.
//!
//! Where the whole range is proved already, a few stations check it; else they stand at its ends, between thresholds and
//! in the longest stretches without one. Each is a search of the scenario at that value, so they end early where searches
//! are long.

use super::picture::{Picture, Start};
use super::{Gap, GapReason, Station};
use crate::analysis::equilibria::{Budget, Equilibrium, Problem, all};
use crate::analysis::subject::Subject;
use crate::model::ParameterId;
use crate::model::system::System;

/// Stations where everything is proved already, and where it is not.
const FEW: usize = 3;
const MANY: usize = 17;
/// Boxes after which no further station is begun.
const MOST_BOXES: usize = 30_000;
/// Species beyond which one search takes long, and stations are few.
pub(super) const LARGE: usize = 8;

/// The equilibria of the scenario at a value of the control, whether it is proved that there are no others in the box, and
/// the boxes that it took. `None` where there are no equations for that value.
pub(super) fn search(
    subject: &mut Subject<'_>,
    parameter: usize,
    value: f64,
    budget: &Budget<'_>,
) -> Option<(Vec<Equilibrium>, bool, usize)> {
    let mut values = subject.plan.values.clone();
    values[parameter] = value;
    let found = if subject.graph.parameters().get(parameter)?.contains(value) {
        let problem = Problem { rows: &subject.balance, values: &values, sides: &subject.sides };
        all(&mut subject.graph, &problem, budget)
    } else {
        // The rows were simplified for other values than this.
        let set: Vec<_> = values.iter().enumerate().map(|(i, &value)| (ParameterId(i), value)).collect();
        let system = System::new(subject.model, &set).ok()?;
        let plan = system.plans.iter().find(|plan| plan.name == subject.plan.name)?;
        let mut anew = Subject::new(subject.model, &system.graph, plan, subject.sides.clone());
        let (graph, problem) = anew.problem();
        all(graph, &problem, budget)
    };
    Some((found.list, found.complete, found.boxes))
}

/// Searches at stations, follows what is new, and adds what could not be joined to the gaps.
pub(super) fn visit(
    picture: &mut Picture<'_>,
    subject: &mut Subject<'_>,
    budget: &Budget<'_>,
    gaps: &mut Vec<Gap>,
) -> Vec<Station> {
    let count = if gaps.is_empty() || subject.species() > LARGE { FEW } else { MANY };
    let mut stations: Vec<Station> = Vec::new();
    let mut boxes = 0;
    for at in places(picture, count) {
        if boxes >= MOST_BOXES.min(budget.boxes) || (budget.stop)() {
            break;
        }
        let Some((list, complete, taken)) = search(subject, picture.control.parameter.0, at, budget) else { continue };
        boxes += taken;
        stations.push(Station { at, found: list.len(), complete });
        for equilibrium in &list {
            if !join(picture, equilibrium, at) {
                gaps.push(Gap { from: at, to: at, reason: GapReason::Unjoined });
            }
        }
    }
    stations.sort_by(|a, b| a.at.total_cmp(&b.at));
    gaps.sort_by(|a, b| a.from.total_cmp(&b.from));
    gaps.dedup();
    stations
}

/// Whether a state is on a branch, perhaps one that is followed now.
fn join(picture: &mut Picture<'_>, equilibrium: &Equilibrium, control: f64) -> bool {
    let state = &equilibrium.state;
    if picture.branch_through(state, control).is_some() {
        return true;
    }
    let present = (0..state.len()).map(|i| equilibrium.has(i)).collect();
    let is_followed = picture.follow(&Start { present, state: state.clone(), control, across: None });
    picture.follow_all();
    is_followed
}

/// The ends, then the middles between thresholds, the longest stretch first, then middles of what is left.
fn places(picture: &Picture<'_>, count: usize) -> Vec<f64> {
    let [from, to] = [picture.control.from, picture.control.to];
    let mut marks: Vec<f64> = picture.thresholds.iter().map(|threshold| threshold.at).collect();
    marks.extend([from, to]);
    marks.sort_by(f64::total_cmp);
    let mut places = vec![from, to];
    for _ in 2..count {
        let longest = marks.windows(2).max_by(|a, b| (a[1] - a[0]).total_cmp(&(b[1] - b[0])));
        let Some(middle) = longest.map(|pair| pair[0] + (pair[1] - pair[0]) / 2.0) else { break };
        places.push(middle);
        let place = marks.partition_point(|&mark| mark < middle);
        marks.insert(place, middle);
    }
    places
}
