//! Every equilibrium of a scenario over the range of one control: the way in.
//!
//! The branches through the present states are followed first, then those that cross them; the certified search at stations
//! along the range finds what lies on none of them. What is not proved to be whole is said to be a gap.

use std::collections::VecDeque;

use super::equations::Equations;
use super::locate::describe::Describer;
use super::picture::{Picture, Start};
use super::{Control, Gap, GapReason, Response, stations};
use crate::analysis::equilibria::{Budget, Equilibrium};
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
    let describer = Describer::new(subject, &[control.parameter]);
    let stop: &dyn Fn() -> bool = &|| (budget.stop)();
    let mut picture = Picture::new(&mut equations, control, describer, stop);
    if control.from.partial_cmp(&control.to) != Some(std::cmp::Ordering::Less) {
        return picture.response(&[]);
    }
    let symbols: Vec<String> = subject.model.species.iter().map(|species| species.symbol.clone()).collect();
    let undefined = super::undefined::parts(picture.equations, control, &symbols);
    let is_inside = (control.from..=control.to).contains(&control.present);
    let nearer = control.present.clamp(control.from, control.to);
    let states: Vec<Vec<f64>> = list.iter().map(|equilibrium| equilibrium.state.clone()).collect();
    let present: &[Vec<f64>] = if is_inside { &states } else { &[] };
    picture.starts = if is_inside {
        starts(list, nearer)
    } else {
        stations::search(subject, control.parameter.0, nearer, budget)
            .map_or_else(VecDeque::new, |f| starts(&f.0, nearer))
    };
    let so_far = |picture: &mut Picture<'_>| Response {
        undefined: undefined.clone(),
        gaps: vec![Gap { from: control.from, to: control.to, reason: GapReason::Budget }],
        ..picture.response(present)
    };
    if subject.species() > stations::LARGE {
        // What crosses these may take long.
        picture.follow_first(picture.starts.len());
        told(&so_far(&mut picture));
    }
    picture.follow_all();
    told(&so_far(&mut picture));
    let mut gaps = super::cover::cover(&mut picture, budget.boxes);
    let stations = stations::visit(&mut picture, subject, budget, &mut gaps);
    Response { stations, gaps, undefined, ..picture.response(present) }
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
