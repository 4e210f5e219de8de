//! Files have fewer points of a branch than were followed, and straight lines between them still show it.

use restpoint::analysis::linearise::Kind;
use restpoint::analysis::response::{Advice, Margins, Point};
use restpoint::report::response::{Along, Chosen, FIELDS, Reach, Responses, json};
use serde_json::Value;

use crate::support::{CONTROL, branch, point, response};
use crate::table_support::{model, with_table_of};

const STEPS: u32 = 1000;

/// Round a fold at E = 1.5, where a stable state meets a saddle: S = 50 + 40 s, E = 1.5 − 1.5 s².
fn round_the_fold(s: f64) -> Point {
    let kind = if s > 0.0 { Kind::StableNode } else { Kind::Saddle };
    let at = 1.5 - 1.5 * s * s;
    let whole = point(at, [50.0 + 40.0 * s, 10.0], kind);
    Point { threshold: (s == 0.0).then_some(0), ..whole }
}

fn written() -> Vec<Value> {
    let mut response = response();
    let points = (0..=STEPS).map(|k| round_the_fold(1.0 - 2.0 * f64::from(k) / f64::from(STEPS)));
    response.branches = vec![branch(points.collect(), [true, true], vec![0])];
    let along = Along {
        response,
        advice: Advice::default(),
        focus: None,
        band: None,
        margins: Margins::default(),
        reach: Reach::Whole,
    };
    let chosen = Chosen::all(&FIELDS);
    let json = with_table_of(&model(), None, |table| {
        let along = [Some(along.clone()), None, None];
        json(&Responses { table, control: CONTROL, range: [0.0, 3.0], chosen: &chosen, along: &along })
    });
    json["scenarios"][0]["branches"][0]["points"].as_array().unwrap().clone()
}

#[test]
fn a_branch_is_written_in_few_points_and_still_shown() {
    let written = written();
    assert!((10..100).contains(&written.len()), "{} points", written.len());
    let kept: Vec<[f64; 2]> =
        written.iter().map(|point| [&point["at"], &point["state"]["S"]].map(|x| x.as_f64().unwrap())).collect();
    assert_eq!((kept[0], kept[kept.len() - 1]), ([0.0, 90.0], [0.0, 10.0]));
    assert!(written.iter().any(|point| point["threshold"] == 0 && point["at"] == 1.5), "{written:?}");
    // Some place of a line is within 1/500 of E's range, 3, and of what S spans, 80; and E changes by at most 3/40 where S
    // does by one.
    let room = 3.0 / 500.0 + 3.0 / 40.0 * 80.0 / 500.0;
    for k in 0..=STEPS {
        let s = 1.0 - 2.0 * f64::from(k) / f64::from(STEPS);
        let (at, size) = (1.5 - 1.5 * s * s, 50.0 + 40.0 * s);
        let pair = kept.windows(2).find(|pair| pair[0][1] >= size && size >= pair[1][1]).unwrap();
        let share = (size - pair[0][1]) / (pair[1][1] - pair[0][1]);
        let line = pair[0][0] + share * (pair[1][0] - pair[0][0]);
        assert!((line - at).abs() <= room + 1e-12, "{at}: {line}");
    }
}
