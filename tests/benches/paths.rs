//! 64 paths at once against one after another and against a right-hand side written by hand; and where today's stocks
//! lead in the shipped scenarios.

#![allow(clippy::print_stdout, clippy::panic, clippy::expect_used, reason = "a benchmark prints its table")]

#[path = "../common/mod.rs"]
#[allow(unused_imports, reason = "shared with the tests")]
mod common;
#[path = "common/mod.rs"]
mod timing;

use std::hint::black_box;
use std::path::Path;
use std::time::Instant;

use common::text::ModelText;
use restpoint::analysis::equilibria::{Budget, OneByOne, all};
use restpoint::analysis::paths::{from_now, settles};
use restpoint::analysis::subject::Subject;
use restpoint::expr::tape::Tape;
use restpoint::expr::tape::lanes::Lanes;
use restpoint::expr::tape::run::Run;
use restpoint::model::load::load;
use restpoint::model::system::System;
use restpoint::num::ode::lanes::{Batch, LaneFlow, LaneStepper, WIDTH};
use restpoint::num::ode::stepper::Stepper;
use restpoint::num::ode::{Flow, Tolerance};
use restpoint::shell::files::read_model;
use timing::{Contender, best, table};

const UNTIL: f64 = 100.0;
const STEP: Tolerance = Tolerance { absolute: 1e-8, relative: 1e-6 };

fn main() {
    sixty_four();
    scenarios();
}

fn start(lane: usize) -> [f64; 2] {
    [0.3 + 0.04 * lane as f64, 1.5 - 0.02 * lane as f64]
}

struct ByHand;

fn by_hand([n, p]: [f64; 2]) -> [f64; 2] {
    let eaten = n * p / (1.0 + n);
    [n * (1.0 - n / 4.0) - eaten, eaten - 0.3 * p]
}

impl Flow for ByHand {
    fn rates(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        out.copy_from_slice(&by_hand([y[0], y[1]]));
        true
    }

    fn slopes(&mut self, _: &[f64], _: &mut [f64]) -> bool {
        false
    }
}

impl LaneFlow for ByHand {
    fn rates(&mut self, y: &[Batch], out: &mut [Batch]) {
        for l in 0..WIDTH {
            [out[0][l], out[1][l]] = by_hand([y[0][l], y[1][l]]);
        }
    }
}

struct OnTape<'t>(Run<'t, f64>);

impl Flow for OnTape<'_> {
    fn rates(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        let defined = self.0.at(y).defined;
        out.iter_mut().zip(self.0.outputs()).for_each(|(out, rate)| *out = *rate);
        defined
    }

    fn slopes(&mut self, _: &[f64], _: &mut [f64]) -> bool {
        false
    }
}

struct OnLanes(Lanes);

impl LaneFlow for OnLanes {
    fn rates(&mut self, y: &[Batch], out: &mut [Batch]) {
        let [first, second] = out else { return };
        self.0.run(&[&y[0], &y[1]], &mut [first, second]);
    }
}

/// All lanes until every one is past the time; the sum of their states.
fn lanes(flow: &mut dyn LaneFlow) -> f64 {
    let mut stepper = LaneStepper::new(&[STEP; 2]);
    (0..WIDTH).for_each(|lane| stepper.set(lane, &start(lane), 0.01));
    while stepper.times().iter().any(|t| *t < UNTIL) {
        stepper.step(flow);
    }
    stepper.states()[0].iter().sum()
}

fn one_by_one(flow: &mut dyn Flow) -> f64 {
    let one = |lane| {
        let mut stepper = Stepper::new(flow, &start(lane), &[STEP; 2], 1.0).expect("a start");
        while stepper.time() < UNTIL {
            stepper.step(flow).expect("a step");
        }
        stepper.state()[0]
    };
    (0..WIDTH).map(one).sum()
}

fn sixty_four() {
    let text = ModelText::new("a", "100", &[("N", "N*(1 - N/4) - N*P/(1 + N)"), ("P", "N*P/(1 + N) - 0.3*P")]);
    let read = text.read();
    let tape: Tape = read.system.plans[0].tape(&read.system.graph);
    let mut contenders = [
        Contender::new("64 lanes, tape", WIDTH, || lanes(&mut OnLanes(tape.lanes_of_points(&[])))),
        Contender::new("64 lanes, by hand", WIDTH, || lanes(&mut ByHand)),
        Contender::new("one by one, tape", WIDTH, || one_by_one(&mut OnTape(tape.start(&[])))),
        Contender::new("one by one, by hand", WIDTH, || one_by_one(&mut ByHand)),
    ];
    let times = best(&mut contenders, 7, 100);
    let goals = ["62500 (4 ms for all)", "", "", ""];
    table("64 paths of prey and predator over 100 years, relative error 1e-6, a path", &contenders, &times, &goals);
}

/// From now, and from beside the state with most species, in every shipped scenario of up to five species.
fn scenarios() {
    println!("\nshipped scenarios: from now with its cloud; beside the last equilibrium; ms");
    let mut files: Vec<_> = std::fs::read_dir(Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios"))
        .expect("scenarios")
        .filter_map(|entry| entry.ok().map(|entry| entry.path()))
        .filter(|path| path.extension().is_some_and(|extension| extension == "yaml"))
        .collect();
    files.sort();
    for path in files {
        let file = read_model(&path).expect("a file");
        let (model, ..) = load(&file.name, &file.bytes, &file.tables);
        let model = model.expect("a sound model");
        let mut system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{found:?}"));
        let sides: Vec<[f64; 2]> = system.bounds(&model).expect("bounds").iter().map(|b| [b.lower, b.upper]).collect();
        for plan in &system.plans {
            let mut subject = Subject::new(&model, &system.graph, plan, sides.clone());
            let budget = Budget { boxes: 20_000, stop: &|| false, workers: &OneByOne, observer: None };
            let (graph, problem) = subject.problem();
            let list = all(graph, &problem, &budget).list;
            let linear = vec![None; list.len()];
            let fresh = subject.clone();
            let (mut leads, mut beside) = ((f64::INFINITY, None), (f64::INFINITY, None));
            for _ in 0..3 {
                subject = fresh.clone();
                let begun = Instant::now();
                let found = black_box(from_now(&mut subject, &list, &linear, &|| false));
                leads = (leads.0.min(begun.elapsed().as_secs_f64() * 1e3), found);
                let begun = Instant::now();
                let found =
                    list.len().checked_sub(1).map(|last| settles(&mut subject, &list, &linear, last, &|| false));
                beside = (beside.0.min(begun.elapsed().as_secs_f64() * 1e3), found);
            }
            println!("\n{} / {}: {} species, {} equilibria", file.name, plan.name, subject.species(), list.len());
            if let Some(now) = leads.1 {
                println!("  {:8.3}  {:?} after {:?}, lowest {:?}", leads.0, now.reaches, now.time, now.lowest);
                now.shares.iter().for_each(|(to, share)| println!("            {share:.3} {to:?}"));
            }
            println!("  {:8.3}  {:?}", beside.0, beside.1);
        }
    }
}
