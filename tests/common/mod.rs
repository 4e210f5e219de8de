//! What several test files share.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]
#![allow(dead_code, unreachable_pub, missing_docs, reason = "each file uses its own part")]

pub mod cases;
pub mod families;
pub mod linear;
pub mod measured;
pub mod newton;
pub mod references;
pub mod solve;
pub mod text;
pub mod whole;
pub mod workers;

pub use restpoint::num::random::Source;

use restpoint::expr::graph::{Graph, NodeId};
use restpoint::expr::parse::parse;
use restpoint::num::interval::Interval;

/// States x, y, z and parameters a, b, c, p, in any positive values.
pub const STATES: [&str; 3] = ["x", "y", "z"];
/// See [`STATES`].
pub const PARAMETERS: [&str; 4] = ["a", "b", "c", "p"];

/// A graph over [`STATES`] and [`PARAMETERS`].
pub fn graph() -> Graph {
    Graph::new(STATES.len(), vec![Interval::new(f64::MIN_POSITIVE, f64::MAX); PARAMETERS.len()])
}

/// The node of a formula over [`STATES`] and [`PARAMETERS`].
pub fn node(graph: &mut Graph, text: &str) -> NodeId {
    let (expr, slips) = parse(text);
    assert!(slips.is_empty(), "{text}: {slips:?}");
    graph.read(&expr, &mut |graph, name| {
        if let Some(i) = STATES.iter().position(|state| *state == name) {
            return graph.state(i);
        }
        let i = PARAMETERS.iter().position(|parameter| *parameter == name);
        graph.parameter(i.unwrap_or_else(|| panic!("unknown name {name} in {text}")))
    })
}
