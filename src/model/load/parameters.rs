//! The sections `parameters` and `correlations`.

use super::desk::{Desk, Fields, is_null};
use super::keys::{CORRELATION, DRAWS, PARAMETER};
use super::names::Names;
use crate::diag::Location;
use crate::model::correlated::Correlated;
use crate::model::messages::{Message, digits};
use crate::model::tree::{Entry, Kind, Node};
use crate::model::{Correlation, Draw, DrawTable, Name, Parameter, ParameterId, Placed};

/// Pairs of correlated parameters that a message lists.
const PAIRS_SHOWN: usize = 12;

/// The parameters, their names declared. A value that could not be read is 0 here, and reported.
pub(super) fn read(desk: &mut Desk<'_>, fields: &Fields<'_>, names: &mut Names) -> Vec<Parameter> {
    let Some(node) = fields.get("parameters").filter(|node| !is_null(node)) else { return Vec::new() };
    let help = "write names and numbers, for example {r: 0.9}";
    let Some(entries) = desk.map(node, "\"parameters\"", "a map from names to numbers", help) else {
        names.incomplete = true;
        return Vec::new();
    };
    for (index, entry) in entries.iter().enumerate() {
        names.declare(desk, &entry.key, entry.key_at, Name::Parameter(ParameterId(index)));
    }
    entries.iter().map(|entry| one(desk, entry)).collect()
}

fn one(desk: &mut Desk<'_>, entry: &Entry) -> Parameter {
    let name = format!("\"{}\"", entry.key);
    let mut parameter = plain(entry);
    if matches!(entry.value.kind, Kind::Scalar(_)) {
        parameter.value = desk.number(&entry.value, &name).unwrap_or_default();
        return parameter;
    }
    let what = format!("the parameter {name}");
    let Some(fields) = desk.fields(&entry.value, &PARAMETER, &what, entry.key_at) else { return parameter };
    let value = fields.get("value").and_then(|node| desk.number(node, &format!("the value of {name}")));
    parameter.value = value.unwrap_or_default();
    parameter.value_at = fields.get("value").map_or(entry.key_at, |node| node.at);
    parameter.unit = fields.get("unit").and_then(|node| desk.line(node, "\"unit\"", "a unit such as 1/yr"));
    parameter.note = desk.note(&fields);
    parameter.control = fields.get("control").and_then(|node| desk.flag(node, "\"control\"")).unwrap_or(false);
    parameter.min = fields.get("min").and_then(|node| desk.number(node, "\"min\""));
    parameter.max = fields.get("max").and_then(|node| desk.number(node, "\"max\""));
    parameter.range = fields.get("range").and_then(|node| range(desk, node));
    let has_range = fields.entry("range").is_some();
    parameter.draw = fields.get("draw").and_then(|node| draw(desk, node, has_range, value, parameter.range.as_ref()));
    limits(desk, &fields, &parameter, value);
    if parameter.draw.is_none() && !parameter.control && fields.entry("draw").is_none() {
        parameter.draw = parameter.range.as_ref().map(|range| Placed { value: Draw::Uniform, at: range.at });
    }
    parameter
}

fn plain(entry: &Entry) -> Parameter {
    Parameter {
        name: entry.key.clone(),
        at: entry.key_at,
        value: 0.0,
        value_at: entry.value.at,
        unit: None,
        range: None,
        draw: None,
        min: None,
        max: None,
        note: None,
        control: false,
    }
}

fn range(desk: &mut Desk<'_>, node: &Node) -> Option<Placed<[f64; 2]>> {
    let [low, high] = desk.pair(node, "\"range\"")?;
    if low >= high {
        desk.say(Message::RangeReversed, node.at, &[&digits(low), &digits(high)]);
        return None;
    }
    Some(Placed { value: [low, high], at: node.at })
}

/// That value and range agree with the hard limits.
fn limits(desk: &mut Desk<'_>, fields: &Fields<'_>, parameter: &Parameter, value: Option<f64>) {
    if parameter.min.is_none() && parameter.max.is_none() {
        return;
    }
    let min = parameter.min.unwrap_or(f64::NEG_INFINITY);
    let max = parameter.max.unwrap_or(f64::INFINITY);
    if min > max {
        let at = fields.get("min").map_or(parameter.at, |node| node.at);
        desk.say(Message::LimitsReversed, at, &[&digits(min), &digits(max)]);
        return;
    }
    if let Some(value) = value.filter(|value| !(min..=max).contains(value)) {
        desk.say(Message::ValueOutsideLimits, parameter.value_at, &[&digits(value), &limits_in_words(min, max)]);
    }
    if let Some(Placed { value: [low, high], at }) = parameter.range
        && (high < min || low > max)
    {
        desk.say(Message::RangeOutsideLimits, at, &[&digits(low), &digits(high), &limits_in_words(min, max)]);
    }
}

/// Two limits in words, where one of them may be infinite.
pub(super) fn limits_in_words(min: f64, max: f64) -> String {
    match (min.is_finite(), max.is_finite()) {
        (true, true) => format!("{} to {}", digits(min), digits(max)),
        (true, false) => format!("at least {}", digits(min)),
        _ => format!("at most {}", digits(max)),
    }
}

fn draw(
    desk: &mut Desk<'_>,
    node: &Node,
    has_range: bool,
    value: Option<f64>,
    range: Option<&Placed<[f64; 2]>>,
) -> Option<Placed<Draw>> {
    let names: Vec<&str> = DRAWS.iter().map(|(name, _)| *name).collect();
    if let Kind::Scalar(scalar) = &node.kind {
        let name = names.iter().find(|&&name| name == scalar.value).map_or("lognormal", |name| name);
        desk.say(Message::DrawWord, node.at, &[&name]);
        return None;
    }
    let entries = desk.map(node, "\"draw\"", "a map", "write for example draw: {lognormal: {cv: 0.2}}")?;
    let [entry] = entries else {
        desk.say(Message::DrawNotOne, node.at, &[&names.join(", ")]);
        return None;
    };
    let Some((name, table)) = DRAWS.iter().find(|(name, _)| *name == entry.key) else {
        desk.say(Message::NotAWord, entry.key_at, &[&"\"draw\"", &entry.key, &names.join(", ")]);
        return None;
    };
    let fields = desk.fields(&entry.value, table, table.name, entry.key_at)?;
    let draw = distribution(desk, name, &fields)?;
    suits(desk, entry, draw, has_range, value, range);
    Some(Placed { value: draw, at: entry.key_at })
}

fn distribution(desk: &mut Desk<'_>, name: &str, fields: &Fields<'_>) -> Option<Draw> {
    let mut positive = |key: &str| desk.positive(fields.get(key)?, &format!("\"{key}\""));
    Some(match name {
        "normal" => Draw::Normal { sd: positive("sd")? },
        "lognormal" => Draw::Lognormal { cv: positive("cv")? },
        "triangular" => Draw::Triangular,
        "beta" => {
            let (a, b) = (positive("a"), positive("b"));
            Draw::Beta { a: a?, b: b? }
        }
        _ => Draw::Uniform,
    })
}

/// That a distribution has what it needs: a range, a positive value, a mode within the range.
fn suits(
    desk: &mut Desk<'_>,
    entry: &Entry,
    draw: Draw,
    has_range: bool,
    value: Option<f64>,
    range: Option<&Placed<[f64; 2]>>,
) {
    match draw {
        Draw::Lognormal { .. } => {
            if let Some(value) = value.filter(|&value| value <= 0.0) {
                desk.say(Message::LognormalValue, entry.key_at, &[&digits(value)]);
            }
        }
        Draw::Uniform | Draw::Triangular | Draw::Beta { .. } if !has_range => {
            desk.say(Message::DrawNeedsRange, entry.key_at, &[&entry.key]);
        }
        Draw::Triangular => {
            if let (Some(value), Some([low, high])) = (value, range.map(|range| range.value))
                && !(low..=high).contains(&value)
            {
                desk.say(Message::ModeOutsideRange, entry.key_at, &[&digits(value), &digits(low), &digits(high)]);
            }
        }
        Draw::Normal { .. } | Draw::Uniform | Draw::Beta { .. } => {}
    }
}

/// The section `correlations`.
pub(super) fn correlations(
    desk: &mut Desk<'_>,
    fields: &Fields<'_>,
    names: &Names,
    parameters: &[Parameter],
    draws: Option<&DrawTable>,
) -> Vec<Correlation> {
    let Some(node) = fields.get("correlations").filter(|node| !is_null(node)) else { return Vec::new() };
    let what = "a list of maps such as {between: [r, K], rank: -0.4}";
    let nodes = desk.list(node, "\"correlations\"", what).unwrap_or_default();
    let mut found: Vec<Correlation> = Vec::new();
    for node in nodes {
        let Some(correlation) = correlation(desk, node, names) else { continue };
        let [a, b] = correlation.between.map(|id| parameters[id.0].name.as_str());
        let same = |other: &&Correlation| {
            other.between == correlation.between || other.between == [correlation.between[1], correlation.between[0]]
        };
        if let Some(first) = found.iter().find(same) {
            desk.say_both(Message::PairTwice, correlation.at, &[&a, &b], (first.at, "first here"));
        }
        for id in correlation.between {
            let column = draws.is_some_and(|draws| draws.columns.contains(&id));
            if parameters[id.0].draw.is_none() || column {
                desk.say(Message::NotDrawn, correlation.at, &[&parameters[id.0].name]);
            }
        }
        found.push(correlation);
    }
    if desk.is_clean() {
        possible(desk, &found, parameters, node.at);
    }
    found
}

/// That the correlations can hold together.
fn possible(desk: &mut Desk<'_>, found: &[Correlation], parameters: &[Parameter], at: Location) {
    let Err(impossible) = Correlated::of(found) else { return };
    let name = |id: ParameterId| parameters[id.0].name.as_str();
    let pair =
        |(one, rank): (&Correlation, &f64)| format!("{} and {} {rank}", name(one.between[0]), name(one.between[1]));
    let mut pairs: Vec<String> = found.iter().zip(&impossible.possible).take(PAIRS_SHOWN).map(pair).collect();
    if found.len() > PAIRS_SHOWN {
        pairs.push(format!("and so on for {} more", found.len() - PAIRS_SHOWN));
    }
    let how = if impossible.nearest { "the nearest that are" } else { "made smaller in one proportion they are" };
    desk.say(Message::Impossible, at, &[&how, &pairs.join(", ")]);
}

fn correlation(desk: &mut Desk<'_>, node: &Node, names: &Names) -> Option<Correlation> {
    let fields = desk.fields(node, &CORRELATION, "a correlation", node.at)?;
    let rank = fields.get("rank").and_then(|node| rank(desk, node));
    let pair = fields.get("between").and_then(|node| between(desk, node, names));
    let (between, at) = pair?;
    Some(Correlation { between, rank: rank?, at })
}

fn rank(desk: &mut Desk<'_>, node: &Node) -> Option<f64> {
    let rank = desk.number(node, "\"rank\"")?;
    if (-1.0..=1.0).contains(&rank) {
        return Some(rank);
    }
    desk.say(Message::RankRange, node.at, &[&digits(rank)]);
    None
}

fn between(desk: &mut Desk<'_>, node: &Node, names: &Names) -> Option<([ParameterId; 2], Location)> {
    let what = "the names of two parameters";
    let [a, b] = desk.list(node, "\"between\"", what)? else {
        desk.say(Message::NotAPair, node.at, &[&"\"between\"", &what, &"two names in brackets: [r, K]"]);
        return None;
    };
    let mut one = |node: &Node| {
        let name = desk.line(node, "\"between\"", what)?;
        names.parameter(desk, &name.value, name.at)
    };
    let (a, b) = (one(a), one(b));
    let (a, b) = (a?, b?);
    if a == b {
        let name = match &node.kind {
            Kind::Sequence(nodes) => nodes.first().map_or(String::new(), |node| text_of(node)),
            _ => String::new(),
        };
        desk.say(Message::SamePair, node.at, &[&name]);
        return None;
    }
    Some(([a, b], node.at))
}

fn text_of(node: &Node) -> String {
    if let Kind::Scalar(scalar) = &node.kind { scalar.value.clone() } else { String::new() }
}
