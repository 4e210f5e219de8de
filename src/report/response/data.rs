//! Responses as JSON: the contract's keys in the contract's order, then our own; see the [module's head](super).

use nalgebra::Complex;
use serde_json::{Map, Value, json};

use crate::analysis::response::{
    Advice, Arm, Band, BestYield, Branch, ClosestEdge, Ending, Gap, Margins, Point, Response, Threshold,
};
use crate::model::SpeciesId;

use super::super::kinds;
use super::super::table::columns::by_symbol;
use super::super::table::{self, Table, exact, optional};
use super::sheets::{branch_id, passes};
use super::thin::Scales;
use super::words::{criticality, ending, gap, kind, name};
use super::{One, Responses, is_complete, meaning, summary};

/// The responses as a JSON object.
pub fn json(responses: &Responses<'_>) -> Value {
    let table = responses.table;
    let scenarios = responses.each().map(|(scene, one)| match (one, &scene.outcome) {
        (Some(one), _) => scenario(&one),
        (None, Err(problems)) => table::failed_as_data(table, scene, problems),
        (None, Ok(_)) => json!({"name": table::scene::name(table.model, scene)}),
    });
    let of = json!(name(table.model, responses.control));
    let range = json!(responses.range.map(exact));
    table::framed(table, &[("of", of), ("range", range)], scenarios.collect())
}

fn scenario(one: &One<'_>) -> Value {
    let along = one.along;
    let Response { control, branches, thresholds, .. } = &along.response;
    let scales = Scales::of(&along.response);
    let mut all = json!({
        "name": table::scene::name(one.table.model, one.scene),
        "of": name(one.table.model, control.parameter),
        "range": [exact(control.from), exact(control.to)],
        "complete": is_complete(&along.response),
        "thresholds": thresholds.iter().map(|threshold| self::threshold(one, threshold)).collect::<Vec<_>>(),
        "branches": branches.iter().enumerate().map(|(place, b)| branch(one, place, b, &scales)).collect::<Vec<_>>(),
        "best_yield": along.advice.best.iter().map(|best| best_yield(one, best)).collect::<Vec<_>>(),
        "present": exact(control.present),
        "focus": along.focus.and_then(|place| one.ids.get(place)),
        "summary": summary(&one.setting(), &along.advice, along.focus, along.band.as_ref()),
    });
    if let Value::Object(keys) = &mut all {
        keys.extend(coverage(&along.response));
        keys.extend(margins(one, &along.margins));
        keys.extend(advice(one, &along.advice));
    }
    all
}

/// Where the picture is proved, and where it is not.
fn coverage(response: &Response) -> Map<String, Value> {
    let part = |gap: &Gap| json!({"from": exact(gap.from), "to": exact(gap.to), "why": self::gap(gap.reason)});
    let undefined = response.undefined.iter();
    let undefined = undefined.map(|(from, to, why)| json!({"from": exact(*from), "to": exact(*to), "why": why}));
    let stations = response.stations.iter();
    let stations = stations.map(|s| json!({"at": exact(s.at), "found": s.found, "complete": s.complete}));
    Map::from_iter([
        ("gaps".to_owned(), response.gaps.iter().map(part).collect()),
        ("undefined".to_owned(), undefined.collect()),
        ("stations".to_owned(), stations.collect()),
    ])
}

fn state(table: &Table<'_>, state: &[f64]) -> Value {
    by_symbol(table, state.iter().map(|&x| Some(x)).enumerate())
}

fn complex(value: &Complex<f64>) -> Value {
    json!({"re": exact(value.re), "im": exact(value.im)})
}

fn spectrum(values: &[Complex<f64>]) -> Value {
    values.iter().map(complex).collect()
}

fn symbol(one: &One<'_>, species: Option<SpeciesId>) -> Value {
    json!(species.and_then(|id| one.table.symbol(id.0)))
}

fn symbols(one: &One<'_>, present: &[bool]) -> Value {
    let there = present.iter().enumerate().filter(|(_, is_there)| **is_there);
    json!(there.filter_map(|(i, _)| one.table.symbol(i)).collect::<Vec<_>>())
}

fn threshold(one: &One<'_>, threshold: &Threshold) -> Value {
    json!({
        "kind": kind(threshold.kind),
        "at": exact(threshold.at),
        "state": state(one.table, &threshold.state),
        "eigenvalues": spectrum(&threshold.eigenvalues),
        "criticality": threshold.criticality.map(criticality),
        "meaning": meaning(&one.setting(), threshold),
        "proven": false,
        "species": symbol(one, threshold.species),
        "arms": threshold.arms.iter().map(|arm| self::arm(one, arm)).collect::<Vec<_>>(),
        "kink": threshold.kink,
        "other_side": threshold.other_side.as_deref().map(spectrum),
        "error": exact(threshold.error),
    })
}

fn arm(one: &One<'_>, arm: &Arm) -> Value {
    json!({
        "branch": arm.branch.map(branch_id),
        "side": if arm.above { "above" } else { "below" },
        "type": arm.kind.map(|kind| kinds::of(kind).word),
        "stable": arm.stable,
        "feasible": arm.feasible,
        "present": symbols(one, &arm.present),
    })
}

fn branch(one: &One<'_>, place: usize, branch: &Branch, scales: &Scales) -> Value {
    let passes = passes(one, branch);
    json!({
        "id": branch_id(place),
        "equilibrium": passes.first(),
        "points": scales.written(branch).into_iter().map(|point| self::point(one, point)).collect::<Vec<_>>(),
        "present": symbols(one, &branch.present),
        "passes": passes,
        "ends": branch.ends.map(|end| self::end(one, end)),
    })
}

fn end(one: &One<'_>, end: Ending) -> Value {
    let threshold = match end {
        Ending::Threshold(place) => one.along.response.thresholds.get(place).map(|threshold| kind(threshold.kind)),
        _ => None,
    };
    json!({"what": ending(end), "kind": threshold})
}

fn point(one: &One<'_>, point: &Point) -> Value {
    let takings = || one.along.response.takings.iter().zip(&point.takings);
    let mut yields: Map<String, Value> = Map::new();
    for (taking, amount) in takings() {
        if let Some(Value::String(symbol)) = taking.species.map(|id| symbol(one, Some(id))) {
            let of = yields.entry(taking.harvest.clone()).or_insert_with(|| json!({}));
            of[symbol] = optional(*amount);
        }
    }
    let values = takings().filter(|(taking, _)| taking.species.is_none());
    let values = values.map(|(taking, amount)| (taking.harvest.clone(), optional(*amount)));
    json!({
        "at": exact(point.at),
        "state": state(one.table, &point.state),
        "type": point.kind.map(|kind| kinds::of(kind).word),
        "yield": yields,
        "value": values.collect::<Map<_, _>>(),
        "stable": point.stable,
        "feasible": point.feasible,
        "leading": point.leading.as_ref().map(complex),
        "threshold": point.threshold,
    })
}

fn best_yield(one: &One<'_>, best: &BestYield) -> Value {
    let response = &one.along.response;
    let taking = best.taking.and_then(|place| response.takings.get(place));
    let threshold = |place: usize| response.thresholds.get(place);
    let nearest = best.nearest.and_then(|(place, share)| {
        let edge = threshold(place)?;
        Some(json!({"threshold": place, "kind": kind(edge.kind), "at": exact(edge.at), "share": exact(share)}))
    });
    json!({
        "harvest": taking.map(|taking| &taking.harvest),
        "species": symbol(one, taking.and_then(|taking| taking.species)),
        "yield": exact(best.amount),
        "at": exact(best.at),
        "state": state(one.table, &best.state),
        "attained": best.attained,
        "edge": best.edge.and_then(threshold).map(|edge| kind(edge.kind)),
        "of": match taking {
            None => "total",
            Some(taking) if taking.species.is_none() => "value",
            Some(_) => "yield",
        },
        "branch": branch_id(best.branch),
        "nearest": nearest,
    })
}

fn margins(one: &One<'_>, margins: &Margins) -> Map<String, Value> {
    let closest = margins.closest.as_ref().map(|(edge, starts)| closest(one, edge, *starts));
    Map::from_iter([
        ("bands".to_owned(), margins.bands.iter().map(|band| self::band(one, band)).collect()),
        ("closest_edge".to_owned(), json!(closest)),
    ])
}

fn band(one: &One<'_>, band: &Band) -> Value {
    let edge = |end: usize| {
        use crate::analysis::response::Edge;
        let what = match band.edges[end] {
            Edge::Threshold(_) => "threshold",
            Edge::Range => "range",
            Edge::NotFollowed => "not followed",
        };
        json!({"what": what, "kind": band.thresholds[end].as_ref().map(|threshold| kind(threshold.kind))})
    };
    let margin = band.margin().map(|(amount, end)| {
        let share = Some(amount / band.present.abs()).filter(|share| share.is_finite());
        json!({"amount": exact(amount), "share": optional(share), "side": (["below", "above"][end.min(1)])})
    });
    json!({
        "parameter": name(one.table.model, band.parameter),
        "present": exact(band.present),
        "from": exact(band.ends[0]),
        "to": exact(band.ends[1]),
        "edges": [edge(0), edge(1)],
        "margin": margin,
    })
}

fn closest(one: &One<'_>, edge: &ClosestEdge, starts: usize) -> Value {
    let values = edge.values.iter().map(|&(id, x)| (name(one.table.model, id).to_owned(), exact(x)));
    json!({
        "kind": kind(edge.kind),
        "values": values.collect::<Map<_, _>>(),
        "distance": exact(edge.distance),
        "state": state(one.table, &edge.state),
        "residual": exact(edge.residual),
        "within_ranges": edge.within_ranges,
        "starts": starts,
    })
}

fn advice(one: &One<'_>, advice: &Advice) -> Map<String, Value> {
    let open = advice.open_access.iter().map(|open| {
        json!({
            "harvest": open.harvest,
            "at": exact(open.at),
            "state": state(one.table, &open.state),
            "branch": branch_id(open.branch),
        })
    });
    let removal = advice.removals.iter().map(|removal| {
        let threshold = removal.threshold.and_then(|place| one.along.response.thresholds.get(place));
        json!({
            "species": symbol(one, Some(removal.species)),
            "at": optional(removal.at),
            "kind": threshold.map(|threshold| kind(threshold.kind)),
            "settles_without": removal.settles_without,
        })
    });
    Map::from_iter([("open_access".to_owned(), open.collect()), ("removal".to_owned(), removal.collect())])
}
