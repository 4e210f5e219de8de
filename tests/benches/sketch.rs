//! The direction field of a Rosenzweig–MacArthur model with harvest (Rosenzweig & MacArthur 1963) at 200 x 100 cells: the
//! program against a loop written by hand, in the same run.

#![allow(clippy::print_stdout, clippy::panic, reason = "a benchmark prints its table, and fails by panicking")]

mod common;

use common::{Contender, best, table};
use restpoint::analysis::assess::assess;
use restpoint::analysis::equilibria::{Budget, OneByOne, all};
use restpoint::analysis::field::{Flow, Frame, Held, LINEAR, Octant, Scale, Sight, Slice, Window};
use restpoint::analysis::subject::Subject;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;
use restpoint::report::sketch::{Extras, Picture, Plot, Size, Style, View, drawing};
use restpoint::report::table::{Names, Solved};

const COLUMNS: usize = 200;
const ROWS: usize = 100;
const CELLS: usize = COLUMNS * ROWS;
const WINDOW: Window = Window { x: [0.0, 1000.0], y: [0.0, 150.0] };

const MODEL: &str = "\
title: Rosenzweig-MacArthur
time: yr
species: {N: {upper: 1500}, P: {upper: 400}}
parameters: {r: 0.9, K: 900, a: 0.012, h: 0.02, e: 0.25, m: 0.3, q: 0.35, E: 1}
change: {N: r*N*(1 - N/K) - a*N*P/(1 + a*h*N) - q*E*N, P: e*a*N*P/(1 + a*h*N) - m*P}
";

fn main() {
    let (Some(model), ..) = load("m.yaml", MODEL.as_bytes(), &NoFiles) else { panic!("the model is sound") };
    let Ok(system) = System::new(&model, &[]) else { panic!("the model has values") };
    let mut subject = Subject::new(&model, &system.graph, &system.plans[0], vec![[0.0, 1500.0], [0.0, 400.0]]);
    let slice = Slice { x: 0, y: Some(1), held: vec![0.0; 2], from: Held::Nothing };
    let flow = Flow::new(&mut subject, slice);
    let frame = Frame::new(WINDOW, COLUMNS, ROWS);
    let values: [f64; 8] = [0.9, 900.0, 0.012, 0.02, 0.25, 0.3, 0.35, 1.0];
    let octants = |x: &[f64], y: &[f64]| {
        let sight = Sight::new(&frame);
        let rows = x.chunks(COLUMNS).zip(y.chunks(COLUMNS)).enumerate();
        let cells =
            rows.flat_map(|(row, (x, y))| x.iter().zip(y).enumerate().map(move |(c, (&x, &y))| (c, row, [x, y])));
        let octants = cells.filter_map(|(column, row, rates)| Octant::of(sight.at(column, row, rates)));
        octants.map(|octant| octant.index() as f64).sum::<f64>()
    };
    let mut out = [vec![0.0; CELLS], vec![0.0; CELLS]];
    let mut contenders = [
        Contender::new("rates by hand, called once per cell", CELLS, || {
            by_hand(&values, &frame, &mut out);
            out[0][CELLS / 3]
        }),
        Contender::new("rates", CELLS, || flow.motion(&frame).x[CELLS / 3]),
        Contender::new("rates and directions", CELLS, || {
            let motion = flow.motion(&frame);
            octants(&motion.x, &motion.y)
        }),
        Contender::new("zero growth of both", CELLS, || {
            let marked = [0, 1].map(|axis| flow.zero_growth(axis, &frame).iter().filter(|&&cell| cell).count());
            (marked[0] + marked[1]) as f64
        }),
    ];
    let times = best(&mut contenders, 60, 3);
    println!("Ratios are to the first line; 60 µs for {CELLS} cells are 3 ns a cell.");
    table("direction field, 200 x 100", &contenders, &times, &["2.0 ns", "3.0 ns", "", ""]);
    whole("prey and predator", MODEL, WINDOW, LINEAR);
    whole("rivals", RIVALS, Window { x: [0.0, 17.0], y: [0.0, 17.0] }, LINEAR);
    whole("rivals, logarithmic", RIVALS, Window { x: [0.1, 20.0], y: [0.1, 20.0] }, [Scale::Logarithmic; 2]);
}

/// Rivals of which either excludes the other, with a saddle and the lines into it.
const RIVALS: &str = "\
title: rivals
time: yr
species: {x: {upper: 20}, y: {upper: 20}}
parameters: {a: 2}
change: {x: x*(15 - x - a*y), y: y*(14 - y - a*x)}
";

/// Everything that a screen needs anew when a key moves the window: numbers and characters of 100 x 45 cells, in
/// microseconds; at most 3000.
fn whole(name: &str, yaml: &str, window: Window, scales: [Scale; 2]) {
    const SIZE: Size = Size { columns: 108, rows: 49 };
    let (Some(model), ..) = load("m.yaml", yaml.as_bytes(), &NoFiles) else { panic!("the model is sound") };
    let Ok(system) = System::new(&model, &[]) else { panic!("the model has values") };
    let sides = model.species.iter().map(|species| [0.0, species.upper.unwrap_or(1.0)]).collect();
    let mut subject = Subject::new(&model, &system.graph, &system.plans[0], sides);
    let budget = Budget { boxes: 20_000, stop: &|| false, workers: &OneByOne, observer: None };
    let (graph, problem) = subject.problem();
    let equilibria = all(graph, &problem, &budget);
    let assessment = assess(&mut subject, &equilibria, &|| false);
    let solved = Solved { values: system.plans[0].values.clone(), equilibria, assessment };
    let ids = Names::alone(solved.equilibria.list.len()).ids.pop().unwrap_or_default();
    let slice = Slice::new(&subject, [0, 1], &solved.equilibria, &solved.assessment);
    let view = View { model: &model, scenario: 0, solved: &solved, ids: &ids, slice: &slice, window, scales };
    let mut other = subject.clone();
    let picture = Picture::new(&mut other, &view, &Plot::of(SIZE));
    let mut contenders = [
        Contender::new("picture and drawing", 1000, || {
            let picture = Picture::new(&mut subject, &view, &Plot::of(SIZE));
            let grid = drawing(&view, &picture, &Extras::default(), SIZE, Style::Unicode);
            f64::from(u32::from(grid.at(20, 20).0))
        }),
        Contender::new("drawing alone", 1000, || {
            let grid = drawing(&view, &picture, &Extras::default(), SIZE, Style::Unicode);
            f64::from(u32::from(grid.at(20, 20).0))
        }),
    ];
    let times = best(&mut contenders, 20, 20);
    table(&format!("{name}, 100 x 45, microseconds"), &contenders, &times, &["3000", ""]);
}

#[inline(never)]
fn rates(v: &[f64; 8], [n, p]: [f64; 2]) -> [f64; 2] {
    let [r, k, a, h, e, m, q, effort] = *v;
    let eaten = a * n * p / (1.0 + a * h * n);
    [r * n * (1.0 - n / k) - eaten - q * effort * n, e * eaten - m * p]
}

fn by_hand(values: &[f64; 8], frame: &Frame, out: &mut [Vec<f64>; 2]) {
    for row in 0..ROWS {
        let y = frame.y(row as f64);
        for column in 0..COLUMNS {
            let cell = row * COLUMNS + column;
            [out[0][cell], out[1][cell]] = rates(values, [frame.x(column as f64), y]);
        }
    }
}
