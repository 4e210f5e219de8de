//! What is watched while a stable state is followed: abundances, eigenvalues of those present and of absent populations, and
//! the quantities that kinks compare.
//!
//! All of it is numbers at one point; where one of them has changed its sign, `locate` solves for the place. Start at
//! [`Watch::new`].

use nalgebra::Complex;

use super::defining::kernel::excess;
use super::defining::{Matrix, at_face};
use super::equations::{Equations, Face};
use super::locate::{Sign, compared};
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::num::dense::block;
use crate::num::eigen::{eigenvalues, strongly_connected};

/// Matrices larger than this are not followed.
const LARGEST: usize = 40;

/// The numbers of one face, compiled over those who move and then every control.
#[derive(Clone, Debug)]
pub(super) struct Watch {
    /// Species that are absent.
    absent: Vec<usize>,
    moving: usize,
    is_map: bool,
    matrices: Tape,
    kinks: Vec<NodeId>,
    differences: Tape,
    values: Vec<f64>,
    /// One pair a species that moves.
    sides: Vec<[f64; 2]>,
}

/// Which absent species, or those who move, and their eigenvalues.
type Group = (Option<Vec<usize>>, Vec<Complex<f64>>);

/// What was seen at a point.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Seen {
    /// Eigenvalues, or multipliers, of those who move, and of each group of absent species that depend on each other.
    groups: Vec<Group>,
    /// For each kink the difference of what it compares.
    kinks: Vec<f64>,
}

impl Watch {
    /// `None` for a face on which something has no derivative, and for large communities.
    pub(super) fn new(equations: &mut Equations, face: &Face) -> Option<Self> {
        if equations.species > LARGEST {
            return None;
        }
        let absent: Vec<usize> = (0..equations.species).filter(|i| !face.moving.contains(i)).collect();
        let own = Matrix::of_rows(equations, face)?;
        let others = Matrix::of_absent(equations, &absent, face)?;
        let nodes: Vec<NodeId> = own.entries.iter().chain(&others.entries).copied().collect();
        let inputs = equations.inputs(face);
        let (kinks, differences) = kinks(equations, face);
        Some(Self {
            matrices: Tape::over(&equations.graph, &nodes, &inputs),
            differences: Tape::over(&equations.graph, &differences, &inputs),
            kinks,
            moving: face.moving.len(),
            absent,
            is_map: equations.step.is_some(),
            values: equations.values.clone(),
            sides: face.moving.iter().map(|&i| equations.sides[i]).collect(),
        })
    }

    /// What there is to see at abundances and controls; `None` where something has no value.
    pub(super) fn at(&self, inputs: &[f64]) -> Option<Seen> {
        let mut run = self.matrices.start(&self.values);
        run.at(inputs);
        let entries: Vec<f64> = run.outputs().copied().collect();
        if entries.iter().any(|entry| !entry.is_finite()) {
            return None;
        }
        let (own, others) = entries.split_at(self.moving * self.moving);
        let mut groups = vec![(None, eigenvalues(own, self.moving).ok()?)];
        let n = self.absent.len();
        for part in strongly_connected(n, |i, j| others[i * n + j] != 0.0) {
            let mut matrix = block(others, n, &part);
            if self.is_map {
                // A divided row, and a row of what is 0 at an equilibrium, is a multiplier less 1.
                (0..part.len()).for_each(|k| matrix[k * part.len() + k] += 1.0);
            }
            let mut species: Vec<usize> = part.iter().map(|&k| self.absent[k]).collect();
            let found = eigenvalues(&matrix, part.len()).ok()?;
            species.sort_unstable();
            groups.push((Some(species), found));
        }
        let mut run = self.differences.start(&self.values);
        run.at(inputs);
        Some(Seen { groups, kinks: run.outputs().copied().collect() })
    }

    /// Whether the state is one that persists: stable, with nobody below 0 or outside the box.
    pub(super) fn is_sound(&self, x: &[f64], seen: &Seen) -> bool {
        let is_inside = |(&x, side): (&f64, &[f64; 2])| x >= side[0].max(0.0) && x <= side[1];
        self.is_stable(seen) && x.iter().zip(&self.sides).all(is_inside)
    }

    /// Whether all eigenvalues attract.
    pub(super) fn is_stable(&self, seen: &Seen) -> bool {
        seen.groups.iter().flat_map(|(_, values)| values).all(|&value| excess(value, self.is_map) < 0.0)
    }

    /// What may have happened on the way to a point that is not sound, or at which the control has turned.
    pub(super) fn signs(&self, face: &Face, x: &[f64], seen: &Seen, turned: bool) -> Vec<Sign> {
        let mut signs = Vec::new();
        for ((&i, &x), side) in face.moving.iter().zip(x).zip(&self.sides) {
            if x < 0.0 {
                signs.push(Sign::Abundance(i));
            } else if x > side[1] {
                signs.push(Sign::Side(i, 1));
            } else if x < side[0] {
                signs.push(Sign::Side(i, 0));
            }
        }
        for (absent, values) in &seen.groups {
            let beyond = values.iter().filter(|&&value| excess(value, self.is_map) >= 0.0);
            for value in beyond.filter(|value| value.im >= 0.0) {
                signs.push(self.sign(absent.as_ref(), *value));
            }
        }
        if turned && !signs.contains(&Sign::Turn) {
            signs.push(Sign::Turn);
        }
        signs
    }

    fn sign(&self, absent: Option<&Vec<usize>>, value: Complex<f64>) -> Sign {
        match absent {
            _ if value.im != 0.0 => Sign::Pair(absent.cloned()),
            _ if self.is_map && value.re < 0.0 => Sign::Flip(absent.cloned()),
            None => Sign::Turn,
            Some(species) => match species[..] {
                [i] => Sign::Growth(i),
                _ => Sign::Block(species.clone()),
            },
        }
    }

    /// Kinks that lie between two points.
    pub(super) fn kinks_between(&self, before: &Seen, after: &Seen) -> Vec<Sign> {
        let parts = self.kinks.iter().zip(before.kinks.iter().zip(&after.kinks));
        parts
            .filter(|(_, (a, b))| (**a < 0.0) != (**b < 0.0) || (**a > 0.0) != (**b > 0.0))
            .map(|(&node, _)| Sign::Kink(node))
            .collect()
    }
}

/// Every node of a face's rows that has a kink, and the difference of what it compares.
fn kinks(equations: &mut Equations, face: &Face) -> (Vec<NodeId>, Vec<NodeId>) {
    let mut found = (Vec::new(), Vec::new());
    for node in equations.graph.reachable(&face.rows) {
        let Some((a, b)) = compared(equations, node) else { continue };
        let difference = equations.graph.sub(a, b);
        if let Some(known) = at_face(equations, &[difference], face) {
            found.0.push(node);
            found.1.push(known[0]);
        }
    }
    found
}
