//! Lines and planes of equilibria.

use super::{Continuum, Family, exactly, model};

/// Every one of them.
pub fn all() -> Vec<Family> {
    vec![line_in_the_plane(), lines_in_space(), plane_in_space(), hidden_line()]
}

fn family(name: &str, rows: &[&str], simple: &[&[f64]], continua: &[(usize, &[&[f64]])]) -> Family {
    let rows: Vec<String> = rows.iter().map(|row| (*row).to_owned()).collect();
    let points = |points: &[&[f64]]| points.iter().map(|x| exactly(x)).collect();
    let continuum = |&(dimension, some): &(usize, &[&[f64]])| Continuum { dimension, points: points(some) };
    let complete = Family::complete(name, model(name, "4", &rows), points(simple));
    Family { continua: continua.iter().map(continuum).collect(), ..complete }
}

/// Two species limited by the same sum: the line x + y = 1.
fn line_in_the_plane() -> Family {
    let line: (usize, &[&[f64]]) = (1, &[&[0.0, 1.0], &[0.25, 0.75], &[1.0, 0.0]]);
    family("line in 2-D", &["x1*(1 - x1 - x2)", "0.5*x2*(1 - x1 - x2)"], &[&[0.0, 0.0]], &[line])
}

/// The same beside a third species that is by itself: a line without it and one with it.
fn lines_in_space() -> Family {
    let line = |z: f64| [[0.0, 1.0, z], [0.25, 0.75, z], [1.0, 0.0, z]];
    let (without, with) = (line(0.0), line(0.5));
    let [without, with] = [&without, &with].map(|line| line.each_ref().map(|point| &point[..]));
    let rows = ["x1*(1 - x1 - x2)", "x2*(1 - x1 - x2)", "x3*(0.5 - x3)"];
    family("lines in 3-D", &rows, &[&[0.0; 3], &[0.0, 0.0, 0.5]], &[(1, &without), (1, &with)])
}

/// Three species limited by the same sum: the plane x + y + z = 1.
fn plane_in_space() -> Family {
    let rows = ["x1*(1 - x1 - x2 - x3)", "x2*(1 - x1 - x2 - x3)", "2*x3*(1 - x1 - x2 - x3)"];
    let plane: (usize, &[&[f64]]) = (2, &[&[0.0, 0.0, 1.0], &[0.25, 0.25, 0.5], &[0.5, 0.5, 0.0]]);
    family("plane in 3-D", &rows, &[&[0.0; 3]], &[plane])
}

/// Rows without a factor x that share the factor x + y - 2 and cross in (1, 3) beside it.
fn hidden_line() -> Family {
    let rows = ["(x1 + x2 - 2)*(x1 - 1)", "(x1 + x2 - 2)*(x2 - x1 - 2)"];
    let line: (usize, &[&[f64]]) = (1, &[&[0.0, 2.0], &[0.5, 1.5], &[2.0, 0.0]]);
    family("hidden line in 2-D", &rows, &[&[1.0, 3.0]], &[line])
}
