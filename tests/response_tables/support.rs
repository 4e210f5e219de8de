//! A response of two stocks to fishing, built by hand: cod live off sprat until the fleet is too large, and meet a saddle.

use nalgebra::Complex;
use restpoint::analysis::linearise::Kind;
use restpoint::analysis::response::{
    Advice, Arm, Band, BestYield, Branch, Chart, ChartCurve, ChartPoint, ClosestEdge, Control, Criticality, Edge,
    Ending, Front, FrontPoint, Gap, GapReason, Margins, OpenAccess, Point, Region, RegionState, Response, Station,
    Taking, Threshold, ThresholdKind, Total,
};
use restpoint::model::{Model, ParameterId, SpeciesId};
use restpoint::report::response::chart::{self, Charted, Charts};
use restpoint::report::response::{Along, Chosen, FIELDS, Reach, Responses};

use crate::table_support::with_table_of;

/// The parameter that is varied: E of the table's model.
pub(crate) const CONTROL: ParameterId = ParameterId(1);

/// A part of a branch beside a threshold: its side, type, and whether sprat and cod are there.
pub(crate) fn arm(above: bool, kind: Kind, present: [bool; 2]) -> Arm {
    let stable = Some(matches!(kind, Kind::StableNode | Kind::StableSpiral));
    Arm { branch: None, above, kind: Some(kind), stable, feasible: true, present: present.to_vec() }
}

/// A threshold at E = 1.5 with these arms.
pub(crate) fn threshold(kind: ThresholdKind, arms: Vec<Arm>) -> Threshold {
    Threshold {
        kind,
        at: 1.5,
        state: vec![40.0, 12.5],
        eigenvalues: vec![Complex::new(0.0, 0.0), Complex::new(-0.25, 0.0)],
        other_side: None,
        criticality: None,
        species: None,
        arms,
        kink: None,
        error: 1e-14,
    }
}

/// Along E from 0 to 3, now 1, with nothing found.
pub(crate) fn response() -> Response {
    Response {
        control: Control { parameter: CONTROL, from: 0.0, to: 3.0, present: 1.0 },
        takings: vec![
            Taking { harvest: "trawl".to_owned(), species: Some(SpeciesId(0)) },
            Taking { harvest: "trawl".to_owned(), species: None },
        ],
        branches: Vec::new(),
        thresholds: Vec::new(),
        stations: vec![Station { at: 0.0, found: 3, complete: true }, Station { at: 3.0, found: 2, complete: true }],
        gaps: Vec::new(),
        undefined: Vec::new(),
    }
}

/// A point of a branch.
pub(crate) fn point(at: f64, state: [f64; 2], kind: Kind) -> Point {
    Point {
        at,
        state: state.to_vec(),
        kind: Some(kind),
        stable: Some(matches!(kind, Kind::StableNode | Kind::StableSpiral)),
        leading: Some(Complex::new(-0.25, 0.5)),
        feasible: true,
        takings: vec![Some(at * 10.0), None],
        threshold: None,
    }
}

/// A branch through these points.
pub(crate) fn branch(points: Vec<Point>, present: [bool; 2], equilibria: Vec<usize>) -> Branch {
    Branch { present: present.to_vec(), points, ends: [Ending::Range, Ending::Threshold(0)], equilibria }
}

/// The fold at which cod are lost; and a Hopf threshold below, where cycles set in softly.
pub(crate) fn along() -> Along {
    let both = [true, true];
    let fold = threshold(ThresholdKind::Fold, vec![arm(false, Kind::StableNode, both), arm(false, Kind::Saddle, both)]);
    let hopf = Threshold {
        at: 0.25,
        state: vec![60.0, 30.0],
        eigenvalues: vec![Complex::new(1e-17, 0.375), Complex::new(1e-17, -0.375)],
        criticality: Some(Criticality::Soft),
        ..threshold(
            ThresholdKind::Hopf,
            vec![arm(false, Kind::UnstableSpiral, both), arm(true, Kind::StableSpiral, both)],
        )
    };
    let at_threshold = |at: f64, state, place| Point { threshold: Some(place), ..point(at, state, Kind::Undecided) };
    let coexisting = vec![
        point(0.0, [65.0, 35.0], Kind::UnstableSpiral),
        at_threshold(0.25, [60.0, 30.0], 0),
        point(0.5, [55.0, 25.0], Kind::StableSpiral),
        point(1.0, [50.0, 20.0], Kind::StableNode),
        at_threshold(1.5, [40.0, 12.5], 1),
        point(1.25, [30.0, 5.0], Kind::Saddle),
        Point { feasible: false, ..point(1.0, [20.0, -5.0], Kind::Saddle) },
    ];
    let sprat = vec![point(0.0, [100.0, 0.0], Kind::Saddle), point(3.0, [70.0, 0.0], Kind::StableNode)];
    let mut response = response();
    response.branches = vec![branch(sprat, [true, false], vec![0]), branch(coexisting, both, vec![1])];
    response.thresholds = vec![hopf.clone(), fold.clone()];
    response.gaps = vec![Gap { from: 1.4375, to: 1.5625, reason: GapReason::Meeting }];
    let band = Band {
        equilibrium: 1,
        parameter: CONTROL,
        present: 1.0,
        ends: [0.25, 1.5],
        edges: [Edge::Threshold(0), Edge::Threshold(1)],
        thresholds: [Some(hopf), Some(fold)],
    };
    Along { reach: Reach::Whole, advice: advice(), focus: Some(1), margins: margins(&band), band: Some(band), response }
}

fn advice() -> Advice {
    let best = BestYield {
        taking: Some(0),
        amount: 14.5,
        at: 1.45,
        state: vec![41.0, 13.0],
        branch: 1,
        attained: true,
        edge: None,
        nearest: Some((1, 0.05 / 1.45)),
    };
    let open = OpenAccess { harvest: "trawl".to_owned(), at: 1.125, state: vec![48.0, 18.0], branch: 1 };
    Advice { best: vec![best], removals: Vec::new(), open_access: vec![open] }
}

fn margins(band: &Band) -> Margins {
    let growth = Band {
        parameter: ParameterId(0),
        present: 0.9,
        ends: [0.5, 1.0],
        edges: [Edge::NotFollowed, Edge::Range],
        thresholds: [None, None],
        ..band.clone()
    };
    let closest = ClosestEdge {
        equilibrium: 1,
        kind: ThresholdKind::Fold,
        values: vec![(ParameterId(0), 0.875), (CONTROL, 1.25)],
        distance: 0.125,
        state: vec![42.0, 14.0],
        residual: 1e-12,
        within_ranges: true,
    };
    Margins { bands: vec![band.clone(), growth], closest: Some((closest, 3)) }
}

/// Uses the responses of a model's three scenarios: that built by hand, an empty one, and none, where it failed.
pub(crate) fn with_responses_of<T>(model: &Model, use_it: impl Fn(&Responses<'_>) -> T) -> T {
    let bare = Along {
        reach: Reach::Whole,
        response: response(),
        advice: Advice::default(),
        focus: None,
        band: None,
        margins: Margins::default(),
    };
    let along = [Some(along()), Some(bare), None];
    let chosen = Chosen::all(&FIELDS);
    with_table_of(model, None, |table| {
        use_it(&Responses { table, control: CONTROL, range: [0.0, 3.0], chosen: &chosen, along: &along })
    })
}

/// A chart of E and r with a cusp: three states between two folds, one elsewhere.
pub(crate) fn chart() -> Chart {
    let control = |parameter, to, present| Control { parameter, from: 0.0, to, present };
    let state = |kind, present: [bool; 2]| RegionState { present: present.to_vec(), kind: Some(kind) };
    let stable = || state(Kind::StableNode, [true, true]);
    let saddle = || state(Kind::Saddle, [true, false]);
    let curve = |points: [[f64; 2]; 2], bounds: [bool; 2]| ChartCurve {
        kind: ThresholdKind::Fold,
        bounds_stable: bounds.to_vec(),
        points: points.to_vec(),
        states: vec![vec![40.0, 12.5], vec![41.0, 13.5]],
        closed: false,
    };
    Chart {
        controls: [control(CONTROL, 2.0, 1.0), control(ParameterId(0), 4.0, 0.5)],
        curves: vec![curve([[0.5, 0.0], [1.5, 3.0]], [true, true]), curve([[2.0, 0.0], [1.5, 3.0]], [false, true])],
        points: vec![ChartPoint { kind: ThresholdKind::Cusp, at: [1.5, 3.0], state: vec![41.0, 13.5], error: 1e-12 }],
        regions: vec![
            Region { inside: [0.25, 2.0], equilibria: vec![saddle(), stable()], complete: true },
            Region { inside: [1.25, 1.0], equilibria: vec![saddle(), saddle(), stable(), stable()], complete: false },
        ],
        cells: vec![Some(0), Some(1), Some(0), None],
        grid: [2, 2],
    }
}

/// Two pairs of what trawl and gill nets take of the two stocks, with the largest total between.
pub(crate) fn front() -> Front {
    let of = |harvest: &str, species| Taking { harvest: harvest.to_owned(), species: Some(SpeciesId(species)) };
    let point = |at: f64, yields| FrontPoint { at: [at, 0.75], yields, state: vec![40.0, 12.5] };
    Front {
        takings: [of("trawl", 0), of("gill nets", 1)],
        points: vec![point(0.5, [10.0, 4.0]), point(1.0, [12.0, 1.5])],
        total: Total::At(point(0.5, [10.0, 4.0])),
        is_whole: true,
    }
}

/// Uses the charts of a model's three scenarios, of which the last two are not there.
pub(crate) fn with_charts_of<T>(model: &Model, use_it: impl Fn(&Charts<'_>) -> T) -> T {
    let charts = [Some(Charted { chart: chart(), front: Ok(front()) }), None, None];
    let chosen = Chosen::all(&chart::FIELDS);
    let (controls, ranges) = ([CONTROL, ParameterId(0)], [[0.0, 2.0], [0.0, 4.0]]);
    with_table_of(model, None, |table| use_it(&Charts { table, controls, ranges, chosen: &chosen, charts: &charts }))
}
