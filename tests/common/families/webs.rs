//! Random food webs from a seed, and three that serve as examples. No equilibrium is known beforehand.
//!
//! [`web`]: the first half of the species (rounded up) are producers in logistic competition, the rest eat one to three
//! species before them with one saturating response (Holling 1959) over all they eat, and are limited by their own
//! density. [`webx`] mixes the forms: a producer may have an Allee effect, an eater a response of exponent 1, 1.5 or 2,
//! with interference (Beddington 1975, DeAngelis et al. 1975) or by the ratio of prey to eaters (Arditi & Ginzburg 1989).
//! Forms are recalled from memory. All numbers have three decimals at most.

use super::{Family, combination, index, model, symbols, whole};
use crate::common::Source;

/// What an eater's response depends on beside its food.
#[derive(Clone, Copy, PartialEq)]
enum Crowding {
    /// Nothing.
    No,
    /// It also loses time to its own kind: `1 + …+ w y` in the denominator.
    Interference(f64),
    /// Food per eater: `y + …` in the denominator.
    Ratio,
}

/// One species.
#[derive(Clone)]
struct Member {
    /// Growth rate, carrying capacity and, where there is one, the Allee threshold of a producer; all 0 for an eater.
    growth: f64,
    capacity: f64,
    threshold: Option<f64>,
    /// Competition felt from each other producer.
    competition: Vec<(usize, f64)>,
    /// Loss, and loss by own density, of an eater.
    loss: f64,
    density: f64,
    /// What it eats: which species, attack rate and conversion.
    diet: Vec<(usize, f64, f64)>,
    handling: f64,
    exponent: f64,
    crowding: Crowding,
}

/// A producer.
fn producer(growth: f64, capacity: f64) -> Member {
    let (competition, diet) = (Vec::new(), Vec::new());
    let (threshold, loss, density, handling, exponent, crowding) = (None, 0.0, 0.0, 0.0, 1.0, Crowding::No);
    Member { growth, capacity, threshold, competition, loss, density, diet, handling, exponent, crowding }
}

/// An eater of `diet`: species, attack rate and conversion each.
fn eater(loss: f64, density: f64, handling: f64, diet: &[(usize, f64, f64)]) -> Member {
    Member { loss, density, handling, diet: diet.to_vec(), ..producer(0.0, 0.0) }
}

/// A number from `low` to `high` thousandths.
fn thousandths(source: &mut Source, low: i128, high: i128) -> f64 {
    whole(source, low, high) as f64 / 1000.0
}

/// One of a few.
fn one_of<T: Copy>(source: &mut Source, all: &[T]) -> T {
    all[index(source, all.len())]
}

fn draw(n: usize, seed: u64, mixed: bool) -> Vec<Member> {
    let mut source = Source::new(seed);
    let producers = n.div_ceil(2);
    let member = |i: usize| {
        let s = &mut source;
        if i < producers {
            let mut member = producer(thousandths(s, 500, 1500), thousandths(s, 2000, 8000));
            member.competition = (0..producers).filter(|&j| j != i).map(|j| (j, thousandths(s, 100, 900))).collect();
            member.threshold = (mixed && s.unit() < 0.3).then(|| thousandths(s, 100, 500));
            return member;
        }
        let mut food: Vec<usize> = (0..i).collect();
        let count = (1 + index(s, 3)).min(i);
        // The last of what is left takes the place of what is chosen.
        let diet: Vec<_> = (0..count)
            .map(|_| {
                let chosen = index(s, food.len());
                (food.swap_remove(chosen), thousandths(s, 300, 1500), thousandths(s, 300, 800))
            })
            .collect();
        let mut member = eater(thousandths(s, 50, 300), thousandths(s, 10, 100), thousandths(s, 100, 600), &diet);
        if mixed {
            member.exponent = one_of(s, &[1.0, 1.5, 2.0]);
            member.crowding = one_of(s, &[Crowding::No, Crowding::Interference(0.5), Crowding::Ratio]);
        }
        member
    };
    (0..n).map(member).collect()
}

/// A random web of type II responses.
pub fn web(n: usize, seed: u64) -> Family {
    family(&format!("web {n}, seed {seed}"), &draw(n, seed, false))
}

/// A random web of mixed forms. With responses to ratios, (0, 0) of food and eater is a corner where a row is 0/0.
pub fn webx(n: usize, seed: u64) -> Family {
    family(&format!("webx {n}, seed {seed}"), &draw(n, seed, true))
}

fn family(name: &str, members: &[Member]) -> Family {
    let symbols = symbols(members.len());
    let mut rows: Vec<String> = members.iter().zip(&symbols).map(|(member, x)| own(member, x, &symbols)).collect();
    for (i, (eater, y)) in members.iter().zip(&symbols).enumerate() {
        for &(food, attack, conversion) in &eater.diet {
            let eaten =
                format!("{attack}*{}*{y}/({})", power(&symbols[food], eater.exponent), busy(eater, y, &symbols));
            rows[food].extend([" - ", &eaten]);
            rows[i].extend([" + ", &conversion.to_string(), "*", &eaten]);
        }
    }
    Family::unknown(name, model(name, "100", &rows))
}

/// Growth or loss without regard to food.
fn own(member: &Member, x: &str, symbols: &[String]) -> String {
    if member.growth == 0.0 {
        return format!("-{}*{x} - {}*{x}^2", member.loss, member.density);
    }
    let (others, felt): (Vec<_>, Vec<_>) = member.competition.iter().map(|&(j, a)| (symbols[j].clone(), a)).unzip();
    let crowd = combination(&[vec![1.0], felt].concat(), &[vec![x.to_owned()], others].concat());
    let growth = format!("{}*{x}*(1 - ({crowd})/{})", member.growth, member.capacity);
    match member.threshold {
        Some(threshold) => format!("{growth}*({x}/{threshold} - 1)/(1 + {x}/{threshold})"),
        None => growth,
    }
}

/// What an eater's intake is divided by.
fn busy(eater: &Member, y: &str, symbols: &[String]) -> String {
    let (food, attacks): (Vec<_>, Vec<_>) =
        eater.diet.iter().map(|&(j, attack, _)| (power(&symbols[j], eater.exponent), attack)).unzip();
    let handling = format!("{}*({})", eater.handling, combination(&attacks, &food));
    match eater.crowding {
        Crowding::No => format!("1 + {handling}"),
        Crowding::Interference(time) => format!("1 + {handling} + {time}*{y}"),
        Crowding::Ratio => format!("{y} + {handling}"),
    }
}

fn power(x: &str, exponent: f64) -> String {
    if exponent == 1.0 { x.to_owned() } else { format!("{x}^{exponent}") }
}

/// Two producers and two eaters that can all live together; 3000 starts a face find 9 equilibria.
pub fn four_species() -> Family {
    Family { name: "four-species web".to_owned(), ..web(4, 8) }
}

/// Three producers and three eaters that can all live together; 3000 starts a face find 25 equilibria.
pub fn six_species() -> Family {
    Family { name: "six-species web".to_owned(), ..web(6, 12) }
}

/// Three producers and three eaters, each on all before it, by type III responses with interference; 3000 starts a face
/// find 46 equilibria.
pub fn dense_six_species() -> Family {
    let mut members = draw(6, 21, false);
    let mut source = Source::new(21);
    for (i, member) in members.iter_mut().enumerate().skip(3) {
        member.exponent = 2.0;
        member.crowding = Crowding::Interference(0.5);
        let mut food = |j| (j, thousandths(&mut source, 300, 1500), thousandths(&mut source, 300, 800));
        member.diet = (0..i).map(&mut food).collect();
    }
    family("dense six-species web", &members)
}
