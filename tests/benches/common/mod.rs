//! Timing for benchmarks: contenders run in turn, so that a drifting machine slows all alike, and the best round counts.
#![allow(clippy::print_stdout, reason = "a benchmark prints its table")]
#![allow(dead_code, unreachable_pub, missing_docs, reason = "each file uses its own part")]

use std::hint::black_box;
use std::time::Instant;

/// One thing to time: a name, how much work one call does, and the call.
pub struct Contender<'c> {
    pub name: &'c str,
    pub points: usize,
    pub call: Box<dyn FnMut() -> f64 + 'c>,
}

impl<'c> Contender<'c> {
    pub fn new(name: &'c str, points: usize, call: impl FnMut() -> f64 + 'c) -> Self {
        Self { name, points, call: Box::new(call) }
    }
}

/// Nanoseconds a point of each contender: the best of `rounds` rounds of about `millis` milliseconds.
pub fn best(contenders: &mut [Contender<'_>], rounds: usize, millis: u64) -> Vec<f64> {
    let repeats: Vec<u32> = contenders.iter_mut().map(|contender| calibrate(contender, millis)).collect();
    let mut best = vec![f64::INFINITY; contenders.len()];
    for _ in 0..rounds {
        for (k, contender) in contenders.iter_mut().enumerate() {
            let start = Instant::now();
            for _ in 0..repeats[k] {
                black_box((contender.call)());
            }
            let nanos = start.elapsed().as_secs_f64() * 1e9 / f64::from(repeats[k]) / contender.points as f64;
            best[k] = best[k].min(nanos);
        }
    }
    best
}

fn calibrate(contender: &mut Contender<'_>, millis: u64) -> u32 {
    let start = Instant::now();
    let mut calls = 0u32;
    while start.elapsed().as_millis() < u128::from(millis) {
        black_box((contender.call)());
        calls += 1;
    }
    calls.max(1)
}

/// Prints a table: nanoseconds, and the ratio to the first contender, with what is to be reached.
pub fn table(title: &str, contenders: &[Contender<'_>], times: &[f64], goals: &[&str]) {
    println!("\n{title}");
    println!("  {:<48} {:>12} {:>9}   to reach", "", "ns a point", "ratio");
    for ((contender, time), goal) in contenders.iter().zip(times).zip(goals) {
        println!("  {:<48} {time:>12.2} {:>8.2}x   {goal}", contender.name, time / times[0]);
    }
}
