//! Every model that comes with the program is sound, says what it is for, and survives being written again from the
//! canonical text of its formulas.
//!
//! That `README.md` lists exactly these models is for `readme.rs`.

#![expect(clippy::expect_used, reason = "without the shipped files a test can only fail")]

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

use restpoint::analysis::equilibria::{Budget, OneByOne, Problem, all, balance};
use restpoint::diag::render::render;
use restpoint::diag::{Location, SourceId, Span};
use restpoint::expr::ast::{Expr, ExprKind};
use restpoint::expr::graph::{NodeId, Operation};
use restpoint::expr::parse::parse;
use restpoint::expr::tape::number::Domain;
use restpoint::model::load::{Files, load};
use restpoint::model::system::{HarvestNodes, Origin, Plan, System};
use restpoint::model::units::check_units;
use restpoint::model::{Entry, Formula, Harvest, Model, Process, Term};

/// A model's file and its tables, by the names that the model uses.
#[derive(Clone)]
struct Shipped {
    name: String,
    text: String,
    tables: BTreeMap<String, String>,
}

impl Files for Shipped {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        let table = self.tables.get(path).ok_or("there is no such file")?;
        Ok(table.clone().into_bytes())
    }
}

impl Shipped {
    fn model(&self) -> Model {
        let (model, sources, found) = load(&self.name, self.text.as_bytes(), self);
        let said: String = found.iter().map(|found| render(found, &sources, false)).collect();
        assert_eq!(said, "");
        model.expect("a model where nothing is wrong")
    }
}

/// Every model in `scenarios`, each with all tables of the folder.
fn shipped() -> Vec<Shipped> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let read = |path: &Path| fs::read_to_string(path).expect("a readable file");
    let name = |path: &Path| path.file_name().expect("a name").to_string_lossy().into_owned();
    let files = fs::read_dir(folder).expect("the folder").map(|entry| entry.expect("a file").path());
    let (models, tables): (Vec<_>, Vec<_>) = files.partition(|path| path.extension() == Some("yaml".as_ref()));
    let tables: BTreeMap<String, String> = tables.iter().map(|path| (name(path), read(path))).collect();
    models.iter().map(|path| Shipped { name: name(path), text: read(path), tables: tables.clone() }).collect()
}

/// Every formula of a model.
fn formulas(model: &Model) -> Vec<&Formula> {
    fn of_terms(terms: &[Term]) -> impl Iterator<Item = &Formula> {
        terms.iter().map(|term| &term.formula)
    }
    fn of_process(process: &Process) -> impl Iterator<Item = &Formula> {
        of_terms(&process.effect).chain([&process.rate])
    }
    fn of_harvest(harvest: &Harvest) -> impl Iterator<Item = &Formula> {
        of_terms(&harvest.amounts).chain(of_terms(&harvest.price)).chain(&harvest.cost)
    }
    let mut all: Vec<&Formula> = model.shorthand.iter().map(|shorthand| &shorthand.formula).collect();
    all.extend(model.processes.iter().flat_map(of_process));
    all.extend(of_terms(&model.change).chain(of_terms(&model.next)));
    all.extend(model.harvest.iter().flat_map(of_harvest));
    for scenario in &model.scenarios {
        all.extend(scenario.values.iter().map(|(_, formula)| formula));
        all.extend(scenario.processes.iter().flat_map(of_process));
        all.extend(scenario.harvest.iter().flat_map(of_harvest));
    }
    let entries = model.block.iter().flat_map(|block| block.growth.iter().chain(&block.matrix));
    all.extend(entries.filter_map(|entry| match entry {
        Entry::Formula(formula) => Some(&**formula),
        Entry::Number(_) => None,
    }));
    all
}

/// A tree with no places in it.
fn bare(expr: &Expr) -> Expr {
    let inner = |expr: &Expr| Box::new(bare(expr));
    let kind = match &expr.kind {
        ExprKind::Neg(a) => ExprKind::Neg(inner(a)),
        ExprKind::Binary(operator, a, b) => ExprKind::Binary(*operator, inner(a), inner(b)),
        ExprKind::Call(function, arguments) => ExprKind::Call(*function, arguments.iter().map(bare).collect()),
        leaf => leaf.clone(),
    };
    Expr { kind, span: Span::default() }
}

/// The files with every formula replaced, where it stands, by its canonical text in quotes.
fn rewritten(shipped: &Shipped, model: &Model) -> Shipped {
    let mut places: BTreeMap<Location, String> = BTreeMap::new();
    for formula in formulas(model) {
        places.insert(formula.at, format!("\"{}\"", formula.expr));
    }
    let mut written = shipped.clone();
    // From the last to the first, so that what is still to be replaced stays where it is.
    for (at, text) in places.iter().rev() {
        let file = &model.sources.get(at.source).expect("a source").name;
        let whole = if at.source == SourceId(0) { Some(&mut written.text) } else { written.tables.get_mut(file) };
        whole.expect("a file of the model").replace_range(at.span.start..at.span.end, text);
    }
    written
}

/// All of a plan but the places in the file.
type Equations<'p> = (
    &'p str,
    &'p [NodeId],
    Vec<Vec<(&'p Origin, NodeId)>>,
    &'p [HarvestNodes],
    &'p [f64],
    Vec<(NodeId, Operation<NodeId>)>,
);

fn equations<'p>(system: &System, plan: &'p Plan) -> Equations<'p> {
    let parts = plan.parts.iter().map(|row| row.iter().map(|part| (&part.origin, part.node)).collect());
    let mut outputs = plan.rows.clone();
    for harvest in &plan.harvests {
        outputs.extend(harvest.amounts.iter().chain(&harvest.price).map(|(_, node)| *node).chain(harvest.cost));
    }
    let nodes = system.graph.reachable(&outputs);
    let nodes = nodes.into_iter().map(|node| (node, system.graph.operation(node))).collect();
    (&plan.name, &plan.rows, parts.collect(), &plan.harvests, &plan.values, nodes)
}

#[test]
fn each_is_sound_and_consistent_in_its_units() {
    for shipped in shipped() {
        let model = shipped.model();
        let units = check_units(&model);
        let said: String = units.warnings.iter().map(|warning| render(warning, &model.sources, false)).collect();
        assert_eq!(said, "");
    }
}

#[test]
fn each_opens_with_its_question_and_owns_up_to_its_figures() {
    for shipped in shipped() {
        let name = &shipped.name;
        let comment: Vec<&str> = shipped.text.lines().take_while(|line| line.starts_with('#')).collect();
        assert!(comment.iter().any(|line| line.contains('?')), "{name} opens with no question");
        let note = shipped.model().note.unwrap_or_default().to_lowercase();
        assert!(note.contains("invented") && note.contains("figures"), "{name}: {note}");
    }
}

#[test]
fn each_formula_is_printed_as_what_it_is() {
    for shipped in shipped() {
        for formula in formulas(&shipped.model()) {
            let text = formula.expr.to_string();
            let (again, slips) = parse(&text);
            assert_eq!((bare(&again), slips), (bare(&formula.expr), Vec::new()), "{}: {text}", shipped.name);
        }
    }
}

#[test]
fn each_is_the_same_model_when_written_from_its_canonical_formulas() {
    for shipped in shipped() {
        let model = shipped.model();
        let written = rewritten(&shipped, &model);
        assert_ne!(written.text, shipped.text, "{}", shipped.name);
        let again = written.model();
        let system = |model| System::new(model, &[]).expect("a sound model");
        let (first, second) = (system(&model), system(&again));
        assert_eq!(first.graph.matrices(), second.graph.matrices(), "{}", shipped.name);
        assert_eq!(first.plans.len(), second.plans.len());
        for (one, other) in first.plans.iter().zip(&second.plans) {
            assert_eq!(equations(&first, one), equations(&second, other), "{}", shipped.name);
        }
    }
}

#[test]
fn each_has_equations_that_are_defined_where_its_stocks_stand_today() {
    for shipped in shipped() {
        let model = shipped.model();
        let mut today = vec![f64::NAN; model.species.len()];
        model.now.iter().for_each(|survey| today[survey.species.0] = survey.value);
        let system = System::new(&model, &[]).expect("a sound model");
        for plan in &system.plans {
            let tape = plan.tape(&system.graph);
            let mut run = tape.start(&plan.values);
            let Domain { defined, .. } = run.at(&today);
            let rows: Vec<f64> = run.outputs().copied().collect();
            let finite = rows.iter().all(|row| row.is_finite());
            assert!(defined && finite, "{}, {}: {today:?} gives {rows:?}", shipped.name, plan.name);
        }
    }
}

/// Thirty plants can be absent in 2^30 ways.
const TOO_MANY_FACES: [&str; 1] = ["ferrow-meadow.yaml"];

#[test]
fn each_is_answered_completely_under_every_plan() {
    for shipped in shipped() {
        let model = shipped.model();
        let mut system = System::new(&model, &[]).expect("a sound model");
        let bounds = system.bounds(&model).expect("bounds");
        let sides: Vec<[f64; 2]> = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
        for plan in system.plans.clone() {
            let rows = balance(&mut system.graph, &plan.rows, &model.time);
            let problem = Problem { rows: &rows, values: &plan.values, sides: &sides };
            let budget = Budget { boxes: 5_000, stop: &|| false, workers: &OneByOne, observer: None };
            let found = all(&mut system.graph, &problem, &budget);
            let expected = !TOO_MANY_FACES.contains(&shipped.name.as_str());
            assert_eq!(found.complete, expected, "{}, {}: {:?}", shipped.name, plan.name, found.unresolved);
            assert!(found.list.iter().all(|equilibrium| equilibrium.proven), "{}, {}", shipped.name, plan.name);
        }
    }
}
