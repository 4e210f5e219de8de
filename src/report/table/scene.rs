//! What is said of a scenario beside its equilibria, in words that every format shares.

use crate::analysis::equilibria::Unresolved;
use crate::analysis::linearise::Linearisation;
use crate::diag::Diagnostic;
use crate::diag::render::position;
use crate::model::Model;

use super::number::{human, human_above, human_below};
use super::{Row, Scene, Solved, Table, paths, words};

/// Undecided parts that are listed for people; the search may have left thousands.
pub(in crate::report) const MOST_LISTED: usize = 12;

/// The scenario's name.
pub(in crate::report) fn name<'m>(model: &'m Model, scene: &Scene) -> &'m str {
    model.scenarios.get(scene.scenario).map_or("", |scenario| &scenario.name)
}

/// What the scenario changes, with numbers written as told.
pub(in crate::report) fn changes(
    table: &Table<'_>,
    scene: &Scene,
    solved: &Solved,
    number: fn(f64) -> String,
) -> String {
    let Some(scenario) = table.model.scenarios.get(scene.scenario) else { return String::new() };
    let without = scenario.without.iter().map(|name| format!("without {}", name.value));
    let values = scenario
        .values
        .iter()
        .filter_map(|(id, _)| Some(format!("{} = {}", table.parameter(*id), number(*solved.values.get(id.0)?))));
    let harvests = scenario.harvest.iter().map(|harvest| format!("harvest {}", harvest.name));
    let processes = scenario.processes.iter().map(|process| format!("process {}", process.name));
    let all: Vec<String> = without.chain(values).chain(harvests).chain(processes).collect();
    if all.is_empty() { "as the file has it".to_owned() } else { all.join("; ") }
}

/// An undecided part of the box, without a full stop.
pub(in crate::report) fn undecided(table: &Table<'_>, one: &Unresolved) -> String {
    let sides = table.model.species.iter().zip(&one.region).map(|(species, side)| {
        if side.is_point() {
            format!("{} = {}", species.symbol, human(side.lo()))
        } else {
            format!("{} from {} to {}", species.symbol, human_below(side.lo()), human_above(side.hi()))
        }
    });
    let whole = table.bounds.iter().map(|bound| [bound.lower, bound.upper]);
    let is_whole = one.region.iter().map(|side| [side.lo(), side.hi()]).eq(whole);
    let place = if is_whole { "the whole search box".to_owned() } else { sides.collect::<Vec<_>>().join(", ") };
    let more = words::known(one, &table.model.species);
    format!("{}: {place}{more}", words::probably_in_words(one.probably))
}

/// The undecided parts that are listed, and one more entry for those that are not.
pub(in crate::report) fn all_undecided(table: &Table<'_>, solved: &Solved) -> Vec<String> {
    let open = &solved.equilibria.unresolved;
    let mut listed: Vec<String> = open.iter().take(MOST_LISTED).map(|one| undecided(table, one)).collect();
    if open.len() > MOST_LISTED {
        listed.push(format!("and {} more, all of them in --format json", open.len() - MOST_LISTED));
    }
    listed
}

/// Why a scenario failed: each problem with its place.
pub(in crate::report) fn problems(model: &Model, problems: &[Diagnostic]) -> Vec<String> {
    let one = |problem: &Diagnostic| {
        let (file, line, column) = position(&model.sources, problem.at);
        format!("{file}:{line}:{column}: {}.", problem.message)
    };
    problems.iter().map(one).collect()
}

/// Sentences on where paths go: from today's stocks, then from each unstable state of coexistence; and on names.
pub(in crate::report) fn sentences(
    table: &Table<'_>,
    scene: &Scene,
    solved: &Solved,
    rows: &[Row<'_>],
    ids: &[String],
) -> Vec<String> {
    let place = paths::Place { table, scenario: scene.scenario, ids };
    let from_now = solved.assessment.from_now.iter().map(|from| paths::from_now_in_words(place, from));
    let settles = rows.iter().filter_map(|row| {
        let to = row.assessed()?.settles.as_ref()?;
        let winds = |linear: &Linearisation| {
            linear.alternating || linear.spectrum.values.first().is_some_and(|value| value.im != 0.0)
        };
        let is_winding = row.linear().is_some_and(winds);
        let leaving = if is_winding { paths::Leaving::Winding } else { paths::Leaving::Sideways };
        Some(paths::settles_in_words(place, row.id(), leaving, to))
    });
    from_now.chain(settles).chain(table.unfollowed(scene)).collect()
}
