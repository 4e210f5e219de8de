//! Charts as JSON: the contract's keys, then our own; see the [module's head](super).

use serde_json::{Value, json};

use super::{Charts, One, front};
use crate::analysis::response::{ChartCurve, ChartPoint, Region};
use crate::report::kinds;
use crate::report::response::meaning::of_point;
use crate::report::response::words::{kind, name};
use crate::report::table::columns::by_symbol;
use crate::report::table::{self, Table, exact, scene};

/// The charts as a JSON object.
pub fn json(charts: &Charts<'_>) -> Value {
    let table = charts.table;
    let scenarios = charts.each().map(|(scene, one)| match (one, &scene.outcome) {
        (Some(one), _) => scenario(&one),
        (None, Err(problems)) => table::failed_as_data(table, scene, problems),
        (None, Ok(_)) => json!({"name": scene::name(table.model, scene)}),
    });
    let of = json!(charts.controls.map(|control| name(table.model, control)));
    let range = json!(charts.ranges.map(|range| range.map(exact)));
    table::framed(table, &[("of", of), ("range", range)], scenarios.collect())
}

fn scenario(one: &One<'_>) -> Value {
    let chart = one.chart;
    json!({
        "name": scene::name(one.table.model, one.scene),
        "of": chart.controls.map(|control| name(one.table.model, control.parameter)),
        "curves": chart.curves.iter().map(|curve| self::curve(one, curve)).collect::<Vec<_>>(),
        "points": chart.points.iter().map(|point| self::point(one, point)).collect::<Vec<_>>(),
        "regions": chart.regions.iter().map(|region| self::region(one, region)).collect::<Vec<_>>(),
        "range": chart.controls.map(|control| [exact(control.from), exact(control.to)]),
        "present": chart.controls.map(|control| exact(control.present)),
        "complete": super::is_complete(chart),
        "grid": chart.grid,
        "cells": chart.cells,
        "front": front::data(one),
    })
}

fn state(table: &Table<'_>, state: &[f64]) -> Value {
    by_symbol(table, state.iter().map(|&x| Some(x)).enumerate())
}

fn curve(one: &One<'_>, curve: &ChartCurve) -> Value {
    json!({
        "kind": kind(curve.kind),
        "points": curve.points.iter().map(|at| at.map(exact)).collect::<Vec<_>>(),
        "states": curve.states.iter().map(|x| state(one.table, x)).collect::<Vec<_>>(),
        "bounds_stable": curve.bounds_stable,
        "closed": curve.closed,
    })
}

fn point(one: &One<'_>, point: &ChartPoint) -> Value {
    json!({
        "kind": kind(point.kind),
        "at": point.at.map(exact),
        "state": state(one.table, &point.state),
        "meaning": of_point(point.kind),
        "error": exact(point.error),
    })
}

fn region(one: &One<'_>, region: &Region) -> Value {
    let symbols = |present: &[bool]| {
        let there = present.iter().enumerate().filter(|(_, is_there)| **is_there);
        there.filter_map(|(i, _)| one.table.symbol(i)).collect::<Vec<_>>()
    };
    let equilibria = region.equilibria.iter();
    let equilibria = equilibria
        .map(|state| json!({"present": symbols(&state.present), "type": state.kind.map(|kind| kinds::of(kind).word)}));
    json!({
        "inside": region.inside.map(exact),
        "equilibria": equilibria.collect::<Vec<_>>(),
        "complete": region.complete,
    })
}
