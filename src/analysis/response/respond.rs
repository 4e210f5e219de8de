//! Every equilibrium of a scenario over the range of one control: the way in.
//!
//! The branches through the present states are followed first, then those that cross them; the certified search at stations
//! along the range finds what lies on none of them. What is not proved to be whole is said to be a gap.

use std::collections::VecDeque;

use super::equations::Equations;
use super::locate::describe::Describer;
use super::picture::{Picture, Start};
use super::{Control, Response};
use crate::analysis::equilibria::{Budget, Equilibrium, Problem, all};
use crate::analysis::subject::Subject;

/// The picture over the range of a control, of which `list` is the scenario's at the control's present value.
///
/// Abundances and the control are in their units. `told` gets the picture as far as it is known, at least once after the
/// branches through the present states were followed. Branches by pseudo-arclength (Keller 1977); numerical, but for the
/// count of equilibria outside the gaps. An empty picture where the range is empty.
pub fn respond(
    subject: &mut Subject<'_>,
    control: &Control,
    list: &[Equilibrium],
    budget: &Budget<'_>,
    told: &mut dyn FnMut(&Response),
) -> Response {
    let mut equations = Equations::new(subject, &[control.parameter]);
    let stop: &dyn Fn() -> bool = &|| (budget.stop)();
    let describer = Describer::new(subject, &[control.parameter]);
    let mut picture = Picture::new(&mut equations, control, describer, stop);
    if !(control.from < control.to) {
        return picture.response(&[]);
    }
    let is_inside = (control.from..=control.to).contains(&control.present);
    let states: Vec<Vec<f64>> = list.iter().map(|equilibrium| equilibrium.state.clone()).collect();
    if is_inside {
        picture.starts = starts(list, control.present);
    } else {
        let nearer = if control.present < control.from { control.from } else { control.to };
        picture.starts = starts(&at(subject, control, nearer, budget), nearer);
    }
    picture.follow_all();
    let present = if is_inside { &states[..] } else { &[] };
    told(&picture.response(present));
    let gaps = super::cover::cover(&mut picture, budget.boxes);
    Response { gaps, ..picture.response(present) }
}

fn starts(list: &[Equilibrium], control: f64) -> VecDeque<Start> {
    let start = |equilibrium: &Equilibrium| Start {
        present: (0..equilibrium.state.len()).map(|i| equilibrium.has(i)).collect(),
        state: equilibrium.state.clone(),
        control,
        across: None,
    };
    list.iter().map(start).collect()
}

/// The equilibria at another value of the control.
fn at(subject: &mut Subject<'_>, control: &Control, value: f64, budget: &Budget<'_>) -> Vec<Equilibrium> {
    let mut values = subject.plan.values.clone();
    values[control.parameter.0] = value;
    let problem = Problem { rows: &subject.balance, values: &values, sides: &subject.sides };
    all(&mut subject.graph, &problem, budget).list
}
