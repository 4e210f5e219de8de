use restpoint::analysis::equilibria::*;
use restpoint::model::{
    TimeKind,
    load::{NoFiles, load},
    system::System,
};
fn main() {
    for path in std::env::args().skip(1) {
        let text = std::fs::read(&path).unwrap();
        let (model, _, d) = load(&path, &text, &NoFiles);
        let Some(model) = model else {
            println!("{path}: {} diags {:?}", d.len(), d.first().map(|d| &d.message));
            continue;
        };
        let mut system = System::new(&model, &[]).unwrap();
        let bounds = system.bounds(&model).unwrap();
        let sides: Vec<[f64; 2]> = bounds.iter().map(|b| [b.lower, b.upper]).collect();
        for k in 0..system.plans.len() {
            let plan = system.plans[k].clone();
            let mut graph = system.graph.clone();
            let rows: Vec<_> = match model.time {
                TimeKind::Continuous => plan.rows.clone(),
                _ => plan
                    .rows
                    .iter()
                    .enumerate()
                    .map(|(i, &r)| {
                        let x = graph.state(i);
                        graph.sub(r, x)
                    })
                    .collect(),
            };
            let mut best = f64::MAX;
            let mut found = None;
            for _ in 0..5 {
                let mut g = graph.clone();
                let t = std::time::Instant::now();
                let stop = || t.elapsed().as_secs_f64() > 20.0;
                found = Some(find(
                    &mut g,
                    &Problem { rows: &rows, values: &plan.values, sides: &sides },
                    &Budget { boxes: 50000, stop: &stop },
                ));
                best = best.min(t.elapsed().as_secs_f64() * 1e3);
                if best > 1000.0 {
                    break;
                }
            }
            let f = found.unwrap();
            println!(
                "{path} [{}] {} roots, {} faces, {} boxes, {best:.3} ms, complete {} above-none {} ",
                plan.name,
                f.list.len(),
                f.faces,
                f.boxes,
                f.complete,
                f.none_above
            );
            if std::env::var("V").is_ok() {
                for e in &f.list {
                    println!(
                        "   {:?} {:?} rad {:?}",
                        e.state,
                        e.derivative,
                        e.radius().iter().cloned().fold(0.0, f64::max)
                    );
                }
            }
            for u in f.unresolved.iter().take(5) {
                println!("   ?? {:?} {:?}", u.probably, u.region);
            }
        }
    }
}
