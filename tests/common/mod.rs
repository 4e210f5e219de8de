//! What several test files share.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]
#![allow(dead_code, unreachable_pub, missing_docs, reason = "each file uses its own part")]

pub mod cases;
pub mod families;
pub mod newton;
pub mod solve;
pub mod text;

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

/// A small reproducible source of numbers in [0, 1) (Steele, Lea & Flood 2014, SplitMix64).
pub struct Source(pub u64);

impl Source {
    pub fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    pub fn unit(&mut self) -> f64 {
        (self.bits() >> 11) as f64 / (1u64 << 53) as f64
    }

    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }
}
