//! Responses put together from closed forms, so that what is said of them is tested alone.

use restpoint::analysis::response::{
    Arm, Branch, Control, Ending, Point, Response, Taking, Threshold, ThresholdKind, advise,
};
use restpoint::analysis::subject::Subject;
use restpoint::model::{Name, ParameterId};

use crate::common::text::{ModelText, Read};

/// A piece of a branch: the control and the state along it, from one threshold or end to the next.
pub(crate) struct Piece {
    /// Control and state at a share of the piece, from 0 to 1.
    pub(crate) curve: Box<dyn Fn(f64) -> (f64, Vec<f64>)>,
    /// Whether it is stable.
    pub(crate) stable: bool,
    /// What happens at its end; nothing at the end of the range.
    pub(crate) end: Option<ThresholdKind>,
}

/// A stable piece.
pub(crate) fn stable(end: Option<ThresholdKind>, curve: impl Fn(f64) -> (f64, Vec<f64>) + 'static) -> Piece {
    Piece { curve: Box::new(curve), stable: true, end }
}

/// An unstable piece.
pub(crate) fn unstable(end: Option<ThresholdKind>, curve: impl Fn(f64) -> (f64, Vec<f64>) + 'static) -> Piece {
    Piece { curve: Box::new(curve), stable: false, end }
}

/// A model that was read, with the sides of its box.
pub(crate) struct Study {
    pub(crate) read: Read,
    sides: Vec<[f64; 2]>,
}

impl Study {
    pub(crate) fn new(text: &ModelText) -> Self {
        Self::of(text.read())
    }

    pub(crate) fn of(mut read: Read) -> Self {
        let bounds = read.system.bounds(&read.model).unwrap();
        Self { read, sides: bounds.iter().map(|bound| [bound.lower, bound.upper]).collect() }
    }

    pub(crate) fn subject(&self) -> Subject<'_> {
        Subject::new(&self.read.model, &self.read.system.graph, &self.read.system.plans[0], self.sides.clone())
    }

    pub(crate) fn parameter(&self, name: &str) -> ParameterId {
        match self.read.model.names[name] {
            Name::Parameter(id) => id,
            other => panic!("{name} is {other:?}"),
        }
    }

    pub(crate) fn control(&self, name: &str, [from, to]: [f64; 2]) -> Control {
        let parameter = self.parameter(name);
        Control { parameter, from, to, present: self.read.system.plans[0].values[parameter.0] }
    }

    /// The response whose branches are these pieces, each list one branch on the face of who is above 0 half-way along its
    /// first piece. Takings are those of the model's harvests.
    pub(crate) fn response(&self, control: Control, branches: Vec<Vec<Piece>>) -> Response {
        let mut thresholds = Vec::new();
        let branches = branches.into_iter().enumerate().map(|(place, pieces)| branch(place, &pieces, &mut thresholds));
        let branches = branches.collect();
        let takings = self.read.system.plans[0].harvests.iter().flat_map(|harvest| {
            let taking = |species| Taking { harvest: harvest.name.clone(), species };
            let amounts = harvest.amounts.iter().map(move |&(species, _)| taking(Some(species)));
            let is_worth = !harvest.price.is_empty() || harvest.cost.is_some();
            amounts.chain(is_worth.then(|| taking(None)))
        });
        Response {
            control,
            takings: takings.collect(),
            branches,
            thresholds,
            stations: Vec::new(),
            gaps: Vec::new(),
            undefined: Vec::new(),
        }
    }

    pub(crate) fn advice(&self, response: &Response) -> restpoint::analysis::response::Advice {
        advise(&mut self.subject(), response, &|| false)
    }
}

/// Points of a piece.
const POINTS: usize = 24;

fn branch(place: usize, pieces: &[Piece], thresholds: &mut Vec<Threshold>) -> Branch {
    let present = (pieces[0].curve)(0.5).1.iter().map(|&x| x > 0.0).collect();
    let mut points: Vec<Point> = Vec::new();
    let mut ending = Ending::Range;
    for (index, piece) in pieces.iter().enumerate() {
        // What a piece begins with is the last point of the one before.
        for step in usize::from(index > 0)..=POINTS {
            let (at, state) = (piece.curve)(step as f64 / POINTS as f64);
            let is_met = step == POINTS && piece.end.is_some();
            points.push(Point {
                at,
                feasible: state.iter().all(|&x| x >= 0.0),
                state,
                kind: None,
                stable: (!is_met).then_some(piece.stable),
                leading: None,
                takings: Vec::new(),
                threshold: is_met.then_some(thresholds.len()),
            });
        }
        if let Some(kind) = piece.end {
            ending = Ending::Threshold(thresholds.len());
            thresholds.push(threshold(place, kind, &points, pieces.get(index + 1)));
        } else {
            ending = Ending::Range;
        }
    }
    Branch { present, points, ends: [Ending::Range, ending], equilibria: vec![0] }
}

fn threshold(place: usize, kind: ThresholdKind, points: &[Point], next: Option<&Piece>) -> Threshold {
    let [before, here] = [&points[points.len() - 2], &points[points.len() - 1]];
    let arm = |above, stable| Arm {
        branch: Some(place),
        above,
        kind: None,
        stable: Some(stable),
        feasible: true,
        present: here.state.iter().map(|&x| x > 0.0).collect(),
    };
    let mut arms = vec![arm(before.at > here.at, before.stable == Some(true))];
    if let Some(next) = next {
        arms.push(arm((next.curve)(0.5).0 > here.at, next.stable));
    }
    Threshold {
        kind,
        at: here.at,
        state: here.state.clone(),
        eigenvalues: Vec::new(),
        other_side: None,
        criticality: None,
        species: None,
        arms,
        kink: None,
        error: 0.0,
    }
}
