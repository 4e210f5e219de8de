//! The rank correlations of a model as one matrix: whether they can hold together, and what can be drawn by them.

use super::{Correlation, ParameterId};
use crate::num::correlation;

/// Steps of a thousandth in which rounded correlations are drawn in until they are possible.
const STEPS: u32 = 200;

/// The parameters that are correlated, and how.
#[derive(Clone, Debug, PartialEq)]
pub struct Correlated {
    /// In the order of the file.
    pub parameters: Vec<ParameterId>,
    /// The lower triangular factor of the correlations of standard normal numbers, row by row; a parameter's first number
    /// alone decides it where it is the first of its row.
    pub factor: Vec<f64>,
}

/// Correlations that cannot hold together.
#[derive(Clone, Debug, PartialEq)]
pub struct Impossible {
    /// For each correlation, in their order, a rank correlation with which they can; to three decimals.
    pub possible: Vec<f64>,
    /// Whether these are the nearest such, but for rounding; else all are made smaller in one proportion.
    pub nearest: bool,
}

impl Correlated {
    /// Puts pairs together; pairs that are not named are not correlated.
    ///
    /// Numbers are drawn by a normal copula: a rank correlation r between two is 2 sin(π r/6) between the normal numbers
    /// behind them (Pearson 1907). The matrix of all may have no negative eigenvalue.
    ///
    /// # Errors
    /// If it has, with a matrix that has not.
    pub fn of(correlations: &[Correlation]) -> Result<Self, Impossible> {
        let mut parameters: Vec<ParameterId> = correlations.iter().flat_map(|one| one.between).collect();
        parameters.sort_unstable();
        parameters.dedup();
        let matrix = matrix(correlations, &parameters, |_, one| one.rank);
        match correlation::factor(&matrix, parameters.len()) {
            Some(factor) => Ok(Self { parameters, factor }),
            None => Err(instead(correlations, &parameters, matrix)),
        }
    }
}

/// The correlations of normal numbers, ranks being asked of each pair.
fn matrix(
    correlations: &[Correlation],
    parameters: &[ParameterId],
    rank: impl Fn(usize, &Correlation) -> f64,
) -> Vec<f64> {
    let n = parameters.len();
    let mut entries = vec![0.0; n * n];
    entries.iter_mut().step_by(n + 1).for_each(|entry| *entry = 1.0);
    for (k, one) in correlations.iter().enumerate() {
        let rho = correlation::of_normals(rank(k, one));
        for place in places(one, parameters) {
            entries[place] = rho;
        }
    }
    entries
}

/// The two places of a pair in the matrix.
fn places(one: &Correlation, parameters: &[ParameterId]) -> [usize; 2] {
    let [i, j] = one.between.map(|id| parameters.partition_point(|other| *other < id));
    [i * parameters.len() + j, j * parameters.len() + i]
}

fn instead(correlations: &[Correlation], parameters: &[ParameterId], matrix_given: Vec<f64>) -> Impossible {
    let n = parameters.len();
    let near = correlation::nearest(&matrix_given, n);
    let nearest = near.is_some();
    let found = near.or_else(|| correlation::drawn_in(matrix_given, n));
    let rank_at = |one: &Correlation| {
        let rho = found.as_ref().map_or(0.0, |found| found[places(one, parameters)[0]]);
        correlation::rank_of_normals(rho)
    };
    // Rounding may leave the border on the wrong side.
    let drawn_in = |step: u32| -> Vec<f64> {
        let share = 1.0 - f64::from(step) / 1000.0;
        correlations.iter().map(|one| (rank_at(one) * share * 1000.0).round() / 1000.0).collect()
    };
    let holds = |ranks: &Vec<f64>| correlation::factor(&matrix(correlations, parameters, |k, _| ranks[k]), n).is_some();
    let possible = (0..STEPS).map(drawn_in).find(holds).unwrap_or_else(|| vec![0.0; correlations.len()]);
    Impossible { possible, nearest }
}
