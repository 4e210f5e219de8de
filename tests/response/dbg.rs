#![allow(warnings)]
use crate::common::cases::{self, number};
use crate::setting::{Bench, control, subject};
use restpoint::analysis::equilibria::{Budget, OneByOne};
use restpoint::analysis::response::chart::{Seed, chart_from};
use restpoint::analysis::response::locate::Sign;
#[test]
fn dbg() {
    let case = cases::named("D09_negative_binomial");
    let mut read = case.text().read();
    let s = subject(&mut read);
    let mut bench = Bench::new(&s, &["k"]);
    let face = bench.face(&[0, 1]);
    println!("{face:?} {:?}", bench.equations.divided);
    for d in [0.03, 0.01, 0.001, 0.0] {
        for sign in [Sign::Pair(None)] {
            println!(
                "{d} {:?}",
                bench.locate(
                    &face,
                    sign,
                    &[20.0 * (1.0 + d), 10.0 * (1.0 + d), 1.0 - d],
                    &[20.0 - 19.0 * d, 10.0 - 9.0 * d, 1.0 + d + 1e-9]
                )
            );
        }
    }
    let case = cases::named("B19_bazykin_three_interior");
    let mut read = case.text().read();
    let s = subject(&mut read);
    for seed in [
        ([6.26576552896235307359, 3.601553936836364771427], [0.4536243277781294552192, 0.1751275929502174242147]),
        ([42.0, 21.0], [0.86, 0.006]),
    ] {
        let controls = [control(&s, "al", 0.2, 1.0), control(&s, "de", 0.0001, 0.4)];
        let budget = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
        let c = chart_from(
            &s,
            controls,
            &[Seed { present: vec![true; 2], sign: Sign::Turn, state: seed.0.to_vec(), at: seed.1 }],
            &budget,
        );
        for curve in &c.curves {
            println!(
                "{:?} {} closed {} from {:?} {:?} to {:?} {:?}",
                curve.kind,
                curve.points.len(),
                curve.closed,
                curve.points[0],
                curve.states[0],
                curve.points.last(),
                curve.states.last()
            );
            for (p, s) in curve.points.iter().zip(&curve.states).step_by(1 + curve.points.len() / 12) {
                println!("   {p:?} {s:?}");
            }
        }
        println!("{:?}", c.points);
        for r in &c.regions {
            println!(
                "{:?} {:?}",
                r.inside,
                r.equilibria.iter().map(|e| (e.present.clone(), e.kind)).collect::<Vec<_>>()
            );
        }
    }
}
