//! What came of a knock, in sentences.

use super::{Course, TENTH};
use crate::analysis::paths::Ended;
use crate::model::Model;
use crate::report::sketch::Style;
use crate::report::table::{clean, human};

/// Species that are named one by one.
const MOST_NAMED: usize = 6;

/// What came of a knock to the equilibrium called `id`, whose return time is as its measures have it; each a sentence.
pub fn sentences(course: &Course, model: &Model, id: &str, return_time: Option<f64>, style: Style) -> Vec<String> {
    let unit = &model.time_unit.value;
    let mut said = Vec::new();
    said.extend(course.lost.iter().take(MOST_NAMED).map(|(species, when)| {
        format!("{} is lost after {} {unit} (numerical).", symbol(model, species.0), human(*when))
    }));
    said.push(returned(course, id, unit));
    said.extend(linear(course, unit, return_time));
    said.extend(lowest(course, model, unit));
    said.iter().map(|sentence| clean(sentence, style)).collect()
}

fn symbol(model: &Model, species: usize) -> &str {
    model.species.get(species).map_or("", |species| &species.symbol)
}

fn returned(course: &Course, id: &str, unit: &str) -> String {
    let until = human(course.times.last().copied().unwrap_or(0.0));
    let left = percent(course.deviation[1]);
    match (course.returned, course.ended) {
        (Some(0.0), _) => format!("Within 10 % of {id} from the start; {left} off at the end (numerical)."),
        (Some(time), _) => format!("Within 10 % of {id} after {} {unit} (numerical).", human(time)),
        (None, Ended::InTime) => format!("After {until} {unit} still {left} off {id} (numerical)."),
        (None, Ended::Stopped(_)) => {
            format!("Followed for {until} {unit}, where the rates have no value or change too fast; {left} off {id}.")
        }
        (None, _) => format!("Followed for {until} {unit} only; {left} off {id} (numerical)."),
    }
}

/// How good the linear picture is.
fn linear(course: &Course, unit: &str, return_time: Option<f64>) -> Vec<String> {
    if course.predicted.is_empty() {
        return vec!["There is no linear picture to compare it with.".to_owned()];
    }
    let mut said = Vec::new();
    said.push(match course.good_until {
        None => "The linear picture holds within 10 % all the way.".to_owned(),
        Some(0.0) => "The linear picture is off by more than 10 % at once.".to_owned(),
        Some(time) => format!("The linear picture holds within 10 % for {} {unit}.", human(time)),
    });
    let return_time = return_time.map_or(String::new(), |time| format!(" (return time {} {unit})", human(time)));
    said.push(match course.return_predicted {
        Some(time) if time > 0.0 => format!("By it, within 10 % after {} {unit}{return_time}.", human(time)),
        Some(_) => format!("By it, within 10 % from the start{return_time}."),
        None => "By it, not within 10 % in this time.".to_owned(),
    });
    said
}

/// The lowest abundances, where a species falls below where it started and where it belongs.
fn lowest(course: &Course, model: &Model, unit: &str) -> Option<String> {
    let falls = |&i: &usize| {
        let (low, _) = course.lowest[i];
        let start = course.states.first().map_or(0.0, |state| state[i]);
        low < (1.0 - TENTH) * start.min(course.equilibrium[i])
    };
    let all: Vec<usize> = (0..course.lowest.len().min(course.equilibrium.len())).filter(falls).collect();
    let one = |&i: &usize| {
        let (low, when) = course.lowest[i];
        let own = model.species.get(i).and_then(|species| species.unit.as_ref());
        let own = own.map_or(String::new(), |own| format!(" {}", own.value));
        format!("{} {}{own} after {} {unit}", symbol(model, i), human(low), human(when))
    };
    let named: Vec<String> = all.iter().take(MOST_NAMED).map(one).collect();
    let more = all.len().saturating_sub(MOST_NAMED);
    let more = if more > 0 { format!(", and {more} more") } else { String::new() };
    (!named.is_empty()).then(|| format!("Lowest on the way: {}{more} (numerical).", named.join(", ")))
}

fn percent(share: f64) -> String {
    match share {
        x if x.is_nan() => "an unknown share".to_owned(),
        x if x < 0.01 => "less than 1 %".to_owned(),
        x if x > 100.0 => "more than a hundredfold".to_owned(),
        x => format!("{:.0} %", 100.0 * x),
    }
}
