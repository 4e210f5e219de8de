//! The response of one scenario in a few sentences: how far today's state holds, how it is lost, what it yields.

use crate::analysis::response::{
    Advice, Band, BestYield, Branch, Edge, OpenAccess, Point, Removal, Response, Threshold,
};

use super::super::table::provenance::plain;
use super::super::table::words::proof;
use super::meaning::{Setting, meaning};
use super::words::{community, kind, name, setting, share, taking, taking_unit, unit, with_unit};

/// Shares of the control below which a yield that is lost so near is warned of: what an assessment is commonly off by.
const NEAR: f64 = 0.1;

/// The sentences, in one text.
///
/// `focus` is the state that it is about, by its place in the list, `band` where that persists and is stable.
pub fn summary(at: &Setting<'_>, advice: &Advice, focus: Option<usize>, band: Option<&Band>) -> String {
    let mut all = match (focus, band) {
        (Some(place), Some(band)) => held(at, place, band),
        (Some(place), None) => vec![format!("The state at the present value is {}.", state(at, place))],
        (None, _) => vec![format!("No stable state was found at the present {}.", present(at))],
    };
    if is_flat(at.response) {
        let name = name(at.model, at.response.control.parameter);
        return format!("{} No state depends on {name} here. ({})", all.join(" "), proof(false));
    }
    all.extend(advised(at, advice));
    format!("{} ({})", all.join(" "), proof(false))
}

/// Whether every branch stays where it is all along the range, and with it all that is taken.
fn is_flat(response: &Response) -> bool {
    let stays = |branch: &Branch| {
        let first = branch.points.first();
        let is_same =
            |point: &Point| first.is_some_and(|first| point.state == first.state && point.takings == first.takings);
        branch.points.iter().all(is_same)
    };
    !response.branches.is_empty() && response.thresholds.is_empty() && response.branches.iter().all(stays)
}

/// What is said of catches over the whole range, each a sentence.
pub fn advised(at: &Setting<'_>, advice: &Advice) -> Vec<String> {
    let mut all: Vec<String> = spoken_of(at.response, advice).map(|best| best_yield(at, best)).collect();
    all.extend(advice.removals.iter().map(|removal| removed(at, removal)));
    all.extend(advice.open_access.iter().map(|open| open_access(at, open)));
    all
}

/// Yields that are spoken of: the total, or that of the only one taken, and values.
pub fn spoken_of<'a>(response: &'a Response, advice: &'a Advice) -> impl Iterator<Item = &'a BestYield> {
    let is_amount = |place: usize| response.takings.get(place).is_some_and(|taking| taking.species.is_some());
    let amounts = (0..response.takings.len()).filter(|&place| is_amount(place)).count();
    advice.best.iter().filter(move |best| best.taking.is_none_or(|place| amounts == 1 || !is_amount(place)))
}

fn present(at: &Setting<'_>) -> String {
    format!("{} = {}", name(at.model, at.response.control.parameter), plain(at.response.control.present))
}

/// An equilibrium by its name, and who is there.
fn state(at: &Setting<'_>, place: usize) -> String {
    let id = at.ids.get(place).map_or("", String::as_str);
    let mut branches = at.response.branches.iter().filter(|branch| branch.equilibria.contains(&place));
    match branches.next() {
        Some(branch) => format!("{id} ({})", community(at.model, &branch.present)),
        None => id.to_owned(),
    }
}

/// The band of the control itself, and the nearest end of it.
fn held(at: &Setting<'_>, place: usize, band: &Band) -> Vec<String> {
    let parameter = at.response.control.parameter;
    let [from, to] = band.ends.map(|end| with_unit(end, ""));
    let unit = unit(at.model, parameter);
    let range = format!("{} = {from} to {}", name(at.model, parameter), with_unit_after(&to, unit));
    let mut all = vec![format!("{} persists and is stable from {range}.", state(at, place))];
    let nearest = band.margin().and_then(|(amount, end)| Some((amount, end, band.thresholds[end].as_ref()?)));
    match nearest {
        Some((amount, end, threshold)) => all.push(lost(at, band, threshold, amount, end)),
        None if band.edges.contains(&Edge::NotFollowed) => {
            all.push("It could not be followed further, so nothing is said of how it is lost.".to_owned());
        }
        None => all.push("It is not lost within the range.".to_owned()),
    }
    all
}

fn with_unit_after(number: &str, unit: &str) -> String {
    if unit.is_empty() { number.to_owned() } else { format!("{number} {unit}") }
}

fn lost(at: &Setting<'_>, band: &Band, threshold: &Threshold, amount: f64, end: usize) -> String {
    let side = ["below", "above"][end.min(1)];
    let distance = if amount >= band.present.abs() {
        format!("{} {side} the present {}", with_unit(amount, unit(at.model, band.parameter)), plain(band.present))
    } else {
        format!("{} {side} the present {}", share(amount / band.present), plain(band.present))
    };
    format!("Nearest loss, {distance}: {} ({}).", meaning(at, threshold), kind(threshold.kind))
}

fn best_yield(at: &Setting<'_>, best: &BestYield) -> String {
    let taking_of = best.taking.and_then(|place| at.response.takings.get(place));
    let (what, unit) = match taking_of {
        Some(one) if one.species.is_none() => (format!("The largest {}", taking(at.model, one)), String::new()),
        Some(one) => (format!("The largest yield of {}", taking(at.model, one)), taking_unit(at.model, one.species)),
        None => ("The largest yield of all harvests together".to_owned(), String::new()),
    };
    let amount = with_unit(best.amount, &unit);
    let here = setting(at.model, at.response.control.parameter, best.at);
    let edge = best.edge.and_then(|place| at.response.thresholds.get(place));
    match (best.attained, edge) {
        (false, Some(edge)) => format!(
            "{what}, {amount}, is only approached: at {here} the state is lost ({}), so don't steer to it.",
            kind(edge.kind)
        ),
        (false, None) => format!("{what}, {amount}, is at the end of the range, {here}."),
        (true, _) => format!("{what}, {amount}, is at {here}{}.", nearest(at, best)),
    }
}

/// Where the yield stands relative to the nearest edge.
fn nearest(at: &Setting<'_>, best: &BestYield) -> String {
    let Some((place, distance)) = best.nearest else { return String::new() };
    let Some(edge) = at.response.thresholds.get(place) else { return String::new() };
    let side = if edge.at > best.at { "below" } else { "above" };
    let warning = if distance.abs() < NEAR { ": don't steer to it" } else { "" };
    format!(
        ", {} {side} the nearest loss ({} at {}){warning}",
        share(distance),
        kind(edge.kind),
        with_unit(edge.at, "")
    )
}

fn removed(at: &Setting<'_>, removal: &Removal) -> String {
    let species = at.model.species.get(removal.species.0).map_or("", |species| &species.name);
    match removal.at {
        Some(x) => {
            let here = setting(at.model, at.response.control.parameter, x);
            let open = if removal.settles_without { "" } else { "; in cycles it may live on" };
            format!("No stable state has {species} from {here} on{open}.")
        }
        None => format!("At no value in the range are all stable states without {species}."),
    }
}

fn open_access(at: &Setting<'_>, open: &OpenAccess) -> String {
    let here = setting(at.model, at.response.control.parameter, open.at);
    format!("Open access to {} settles at {here}, where its value is 0.", open.harvest)
}
