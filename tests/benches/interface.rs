//! How long a user waits, and what a line has to carry: the program in a pseudo-terminal, on all shipped models.
//!
//! From a key to the last byte that comes of it; with and without a search in the background; from the start of the process
//! to its first frame. Beside each time stands its ratio to an echo in the same run: a key that goes to another process
//! through the same terminal and comes back.

#![allow(clippy::print_stdout, clippy::unwrap_used, reason = "a benchmark prints its table, and fails by panicking")]
#![allow(unreachable_pub, missing_docs, reason = "a benchmark has no users")]

#[path = "../terminal/session.rs"]
mod session;

use std::fs;
use std::path::Path;
use std::thread;
use std::time::{Duration, Instant};

use session::{Session, Setup};

/// After so long without a byte a frame has come to its end.
const QUIET: Duration = Duration::from_millis(30);
const SIZES: [(u16, u16); 2] = [(80, 24), (200, 50)];
/// More bytes than taking the terminal needs.
const TAKING: usize = 64;
/// Through the list, to other scenarios, and back.
const KEYS: &str = "nnnnppfnnfnpbbp";

/// A scenario with many states that are found at once, and one whose search takes minutes: all are limited by the same.
const BUSY: &str = "\
title: One scenario at once, one hardly ever
time: yr
species: {A: {upper: 99}, B: {upper: 99}, C: {upper: 99}, D: {upper: 99}, F: {upper: 99}, G: {upper: 99}, H: {upper: 99}}
parameters: {z: 1}
shorthand: {left: 7 - A/(1+A/9) - B/(1+B/9) - C/(1+C/9) - D/(1+D/9) - F/(1+F/9) - G/(1+G/9) - H/(1+H/9)}
change:
  A: A*(left*(1 + B) - z*A)
  B: B*(left*(2 + C) - 2*z*B)
  C: C*(left*(3 + D) - 3*z*C)
  D: D*(left*(4 + F) - 4*z*D)
  F: F*(left*(5 + G) - 5*z*F)
  G: G*(left*(6 + H) - 6*z*G)
  H: H*(left*(7 + A) - 7*z*H)
scenarios:
  limited: {}
  all alike: {values: {z: 0}}
";

/// What was measured: seconds, and bytes.
#[derive(Default)]
struct Measured {
    seconds: Vec<f64>,
    bytes: Vec<usize>,
}

impl Measured {
    fn add(&mut self, (time, bytes): (Duration, usize)) {
        self.seconds.push(time.as_secs_f64());
        self.bytes.push(bytes);
    }

    fn print(&mut self, what: &str, echo: f64) {
        self.seconds.sort_by(f64::total_cmp);
        self.bytes.sort_unstable();
        let (half, most) = (share(&self.seconds, 50), share(&self.seconds, 99));
        println!(
            "  {what:<34} {:>5} {:>8.2} {:>8.2} {:>7.1}x {:>7.1}x {:>8} {:>8}",
            self.seconds.len(),
            half * 1e3,
            most * 1e3,
            half / echo,
            most / echo,
            share(&self.bytes, 50),
            share(&self.bytes, 100),
        );
    }
}

/// So many hundredths of what is measured, in order, are at most this.
fn share<T: Copy>(sorted: &[T], hundredths: usize) -> T {
    sorted[((sorted.len() * hundredths).div_ceil(100).max(1) - 1).min(sorted.len() - 1)]
}

fn main() {
    let echo = echo();
    println!("An echo through the same terminal takes {:.3} ms (median of 200).\n", echo * 1e3);
    println!(
        "  {:<34} {:>5} {:>8} {:>8} {:>8} {:>8} {:>8} {:>8}",
        "", "", "median", "99 in", "ratio", "ratio", "median", "most"
    );
    println!(
        "  {:<34} {:>5} {:>8} {:>8} {:>8} {:>8} {:>8} {:>8}",
        "", "times", "ms", "100, ms", "median", "99", "bytes", "bytes"
    );
    for size in SIZES {
        let (mut starts, mut pictures, mut steps) = (Measured::default(), Measured::default(), Measured::default());
        for model in shipped() {
            walk(&model, size, &mut starts, &mut pictures, &mut steps);
        }
        let name = |what: &str| format!("{what}, {}x{}", size.0, size.1);
        starts.print(&name("start to first frame"), echo);
        pictures.print(&name("start to all found and drawn"), echo);
        steps.print(&name("a step"), echo);
        let (mut seven, mut meadow) = (busy_with(BUSY, size), busy(&meadow(), "fffbbb", size));
        seven.print(&name("a step during a search"), echo);
        meadow.print(&name("among 30 species"), echo);
    }
    println!(
        "\nTo reach: 16 ms for 99 of 100 steps, 60 ms to the first frame; at 80x24 1,500 bytes a step, at most 4,096."
    );
    println!("Bytes in 2 s without a key: {}.", idle());
}

/// Seconds that a key takes through a terminal to another process and back: the median.
fn echo() -> f64 {
    let setup = Setup { program: "sh".into(), ..Setup::new(&["-c", "stty raw -echo; echo ready; exec cat"]) };
    let mut session = Session::start(&setup);
    session.wait_for_text("ready");
    let mut seconds: Vec<f64> = (0..200)
        .filter_map(|_| session.answer("n", Duration::from_millis(3)))
        .map(|(time, _)| time.as_secs_f64())
        .collect();
    seconds.sort_by(f64::total_cmp);
    share(&seconds, 50)
}

/// Every shipped model but the meadow of thirty species.
fn shipped() -> Vec<String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let files = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let is_model = |path: &Path| path.extension().is_some_and(|extension| extension == "yaml");
    let names = files.filter(|path| is_model(path)).map(|path| path.to_str().unwrap().to_owned());
    let mut names: Vec<String> = names.filter(|name| !name.contains("ferrow-meadow")).collect();
    names.sort();
    names
}

fn walk(model: &str, size: (u16, u16), starts: &mut Measured, pictures: &mut Measured, steps: &mut Measured) {
    let start = Instant::now();
    let mut session = Session::start(&Setup::new(&[model]).size(size.0, size.1));
    session.wait_for_more_than(TAKING);
    starts.add((session.last().0 - start, session.last().1));
    session.wait_until_done();
    pictures.add((start.elapsed(), session.last().1));
    // Other scenarios may still be searched.
    thread::sleep(Duration::from_millis(300));
    for key in KEYS.chars() {
        session.answer(&key.to_string(), QUIET).into_iter().for_each(|measured| steps.add(measured));
    }
    session.keys("q");
    assert_eq!(session.code(), 0);
}

/// The model of thirty species, whose last scenario is searched for long.
fn meadow() -> String {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios/ferrow-meadow.yaml");
    path.to_str().unwrap().to_owned()
}

fn busy_with(text: &str, size: (u16, u16)) -> Measured {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("busy.yaml");
    fs::write(&path, text).unwrap();
    busy(path.to_str().unwrap(), "n", size)
}

/// Steps while another scenario is searched.
fn busy(model: &str, keys: &str, size: (u16, u16)) -> Measured {
    let mut session = Session::start(&Setup::new(&[model, "--budget", "600"]).size(size.0, size.1));
    session.wait_for_text("E1");
    session.wait_for_text("searching");
    // The scenarios before the one that takes long.
    thread::sleep(Duration::from_secs(1));
    let mut steps = Measured::default();
    for key in keys.chars().cycle().take(100) {
        session.answer(&key.to_string(), QUIET).into_iter().for_each(|measured| steps.add(measured));
    }
    session.keys("q");
    assert_eq!(session.code(), 0);
    steps
}

fn idle() -> usize {
    let mut session = Session::start(&Setup::new(&[&shipped()[0]]));
    session.wait_until_done();
    thread::sleep(Duration::from_millis(300));
    let before = session.last().1;
    thread::sleep(Duration::from_secs(2));
    let written = session.last().1 - before;
    session.keys("q");
    session.code();
    written
}
