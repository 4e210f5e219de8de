mod common;
use common::families::*;
use common::solve::solve;

#[test]
fn report() {
    let mut all = examples();
    for seed in 1..30 {
        all.push(webs::web(3, seed));
        all.push(webs::web(4, seed));
        all.push(webs::webx(3, seed));
    }
    for seed in 1..10 {
        all.push(webs::web(6, seed));
        all.push(webs::webx(5, seed));
    }
    let only = std::env::var("ONLY").unwrap_or_default();
    for family in all.into_iter().filter(|f| f.name.contains(&only)) {
        let mut read = family.text.read();
        let t = std::time::Instant::now();
        let f = solve(&mut read, 0, 50_000);
        let ms = t.elapsed().as_secs_f64() * 1e3;
        let hit = |p: &Vec<restpoint::num::interval::Interval>| {
            f.list.iter().any(|e| e.enclosure.iter().zip(p).all(|(a, b)| !a.intersect(*b).is_empty()))
        };
        let missed = family.simple.iter().filter(|p| !hit(p)).count();
        let extra = if family.complete {
            f.list
                .iter()
                .filter(|e| {
                    !family.points().any(|p| e.enclosure.iter().zip(p).all(|(a, b)| !a.intersect(*b).is_empty()))
                })
                .count()
        } else {
            0
        };
        println!(
            "{:<34} found {:>3} simple {:>3} missed {missed} extra {extra} degenerate {} corners {} continua {} complete {} above {} faces {} boxes {} ms {ms:.2} unresolved {}",
            family.name,
            f.list.len(),
            family.simple.len(),
            family.degenerate.len(),
            family.corners.len(),
            family.continua.len(),
            f.complete,
            f.none_above,
            f.faces,
            f.boxes,
            f.unresolved.len()
        );
        if missed + extra > 0 || (!f.unresolved.is_empty()) {
            for u in f.unresolved.iter().take(4) {
                println!(
                    "      ?? {:?} {} {:?}",
                    u.probably,
                    u.text,
                    u.region.iter().map(|s| (s.lo(), s.hi())).collect::<Vec<_>>()
                );
            }
        }
    }
}
