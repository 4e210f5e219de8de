//! Advice on pictures that were followed, and bands found in two ways: along a ray, and off a picture.

use restpoint::analysis::equilibria::{Budget, OneByOne, all};
use restpoint::analysis::prepare::Prepared;
use restpoint::analysis::response::{Control, advise, band, bands, respond};
use restpoint::model::ParameterId;
use restpoint::model::load::{NoFiles, load};

use crate::by_hand::Study;
use crate::common::cases::{self, number};
use crate::common::solve::{Method, solve};

const BUDGET: Budget<'static> = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };

/// A yield of a published case, maximised over a control, on the whole picture of that control.
#[test]
fn published_yields_are_the_best_on_the_picture() {
    let check = |id: &str, range: [f64; 2]| {
        let case = cases::named(id);
        for entry in case.facts["yields"].as_array().unwrap() {
            let Some(over) = entry["maximised_over"].as_str() else { continue };
            let mut text = case.text();
            let word = |key: &str| entry[key].as_str().unwrap().to_owned();
            text.counts = vec![(word("name"), word("expression"))];
            for (name, value) in entry["override"].as_object().unwrap().iter().filter(|(name, _)| *name != over) {
                let held = text.parameters.iter_mut().find(|(parameter, _)| parameter == name).unwrap();
                value.as_str().unwrap().clone_into(&mut held.1);
            }
            let mut study = Study::new(&text);
            let list = solve(&mut study.read, 0, Method::Certified).list;
            let control = study.control(over, range);
            let mut subject = study.subject();
            let response = respond(&mut subject, &control, &list, &BUDGET, &mut |_| ());
            let best = &advise(&mut subject, &response, &|| false).best[0];
            let (amount, at) = (number(&entry["value"]), number(&entry["override"][over]));
            assert!((best.amount - amount).abs() <= 1e-11 * amount, "{id}: {best:?}, not {amount}");
            assert!((best.at - at).abs() <= 1e-8 * at && best.attained, "{id}: {best:?}, not at {at}");
        }
    };
    check("A01_schaefer_halibut", [0.0, 90_000.0]);
    check("A03_fox_gompertz", [0.0, 400.0]);
    check("A04_pella_tomlinson", [0.0, 1.0]);
    check("A08_strong_allee_effort", [0.0, 0.5]);
    check("B25_krill_whale", [0.0, 0.95]);
    check("B27_clark_two_independent", [0.0, 1000.0]);
    check("D04_ricker_harvest_msy", [0.0, 0.9]);
    check("D05_beverton_holt", [0.0, 0.9]);
}

/// Every stable state of the shipped models in their first scenario: where a ray says that it is lost, the picture does.
#[test]
fn bands_agree_with_pictures() {
    let mut compared = 0;
    let mut lost = 0;
    for entry in std::fs::read_dir("scenarios").unwrap() {
        let path = entry.unwrap().path();
        let (model, ..) = load("model.yaml", &std::fs::read(&path).unwrap(), &NoFiles);
        // Those with tables are left to others.
        let Some(model) = model else { continue };
        let prepared = Prepared::new(&model, &[]).unwrap();
        let mut subject = prepared.subject(&model, 0).unwrap();
        if subject.species() > 3 {
            continue;
        }
        let (graph, problem) = subject.problem();
        let list = all(graph, &problem, &BUDGET).list;
        let found: Vec<_> = (0..list.len()).map(|which| bands(&mut subject, &list, which, &BUDGET)).collect();
        let controls = (0..model.parameters.len()).filter(|&i| model.parameters[i].control);
        for i in controls {
            let Some(range) = &model.parameters[i].range else { continue };
            let [from, to] = range.value;
            let control = Control { parameter: ParameterId(i), from, to, present: subject.plan.values[i] };
            if !(from..=to).contains(&control.present) {
                continue;
            }
            let response = respond(&mut subject, &control, &list, &BUDGET, &mut |_| ());
            for (which, bands) in found.iter().enumerate() {
                let Some(ray) = bands.iter().find(|band| band.parameter == control.parameter) else { continue };
                let Some(picture) = band(&response, &list, which) else { continue };
                compared += 1;
                for side in 0..2 {
                    let [a, b] = [ray.ends[side], picture.ends[side]];
                    let name = &model.parameters[i].name;
                    assert!((a - b).abs() <= 1e-9 * (to - from), "{path:?} {name} {which}: {ray:?}\n{picture:?}");
                    let kinds = [ray, &picture].map(|band| band.thresholds[side].as_ref().map(|met| met.kind));
                    assert_eq!(kinds[0], kinds[1], "{path:?} {name} {which}: {ray:?}\n{picture:?}");
                    lost += usize::from(kinds[0].is_some());
                }
            }
        }
    }
    assert!(compared > 15 && lost > 8, "{compared} bands, {lost} ends");
}
