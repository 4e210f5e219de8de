//! The published models of `tests/cases/published.json`, as plain values and as models of ours.
//!
//! Numbers are the f64 nearest to the printed decimals. [`all`] reads them; [`Case::text`] is the model file, whose
//! scenario 0 is the case itself and whose scenario k is `scenarios[k - 1]`.

use restpoint::num::interval::Interval;
use serde_json::{Map, Value};

use super::text::{ModelText, Point};

/// One published model.
pub struct Case {
    pub id: String,
    pub discrete: bool,
    pub species: Vec<String>,
    /// In species order.
    pub equilibria: Vec<Equilibrium>,
    pub scenarios: Vec<Scenario>,
    /// The whole entry, for facts that are not spelt out here: thresholds, yields, transients, press, cycles, ….
    pub facts: Map<String, Value>,
}

/// A case under other parameters.
pub struct Scenario {
    pub name: String,
    /// Parameters with their new values.
    pub values: Vec<(String, String)>,
    /// Name and formula of what its equilibria yield.
    pub yields: Vec<(String, String)>,
    pub equilibria: Vec<Equilibrium>,
}

/// A published equilibrium. In a list of them stand all that the box holds with no negative coordinate, but for points of
/// continua.
pub struct Equilibrium {
    pub x: Vec<f64>,
    /// Row by row the derivatives of the rates, or of the map.
    pub jacobian: Option<Vec<Vec<f64>>>,
    /// Real and imaginary parts, by falling real part.
    pub eigenvalues: Vec<(f64, f64)>,
    /// The catalogue's word for the linear part, see [`type_word`].
    pub linear_type: String,
    /// How many eigenvalues have negative, positive and zero real part (maps: modulus below, above and equal to 1).
    pub counts: [usize; 3],
    /// What is true of the nonlinear model.
    pub stability: String,
    /// Above 1 where several roots coincide here.
    pub multiplicity: usize,
    pub yields: Vec<(String, f64)>,
}

/// Every case.
pub fn all() -> Vec<Case> {
    let whole: Value = serde_json::from_str(include_str!("../cases/published.json")).unwrap();
    list(&whole["cases"]).iter().map(case).collect()
}

/// The case of that id.
pub fn named(id: &str) -> Case {
    all().into_iter().find(|case| case.id == id).unwrap_or_else(|| panic!("no case {id}"))
}

/// The contract's word for a catalogue's word: of the linear part alone, critical eigenvalues by the contract's rules.
pub fn type_word(linear_type: &str) -> &str {
    match linear_type.trim_end_matches(" (oscillatory: negative multiplier)") {
        "stable focus" => "stable spiral",
        "unstable focus" => "unstable spiral",
        "stable star node" => "stable star",
        "unstable star node" => "unstable star",
        "saddle-focus" => "saddle",
        "linear centre" | "non-hyperbolic: unit-modulus pair" | "non-hyperbolic: 1 imaginary pair, 1 stable" => {
            "centre"
        }
        "non-hyperbolic: multiplier -1, 1 unstable" => "unstable node",
        "zero eigenvalue"
        | "double zero (nilpotent)"
        | "non-hyperbolic: 1 zero eigenvalue, 1 stable"
        | "non-hyperbolic: 1 zero eigenvalue, 2 stable" => "undecided",
        same => same,
    }
}

impl Case {
    /// The model file.
    pub fn text(&self) -> ModelText {
        let bounds = list(&self.facts["box"]).iter().map(|side| (text(&side[0]), text(&side[1])));
        let mut counts: Vec<(String, String)> = Vec::new();
        for found in self.scenarios.iter().flat_map(|scenario| &scenario.yields) {
            if !counts.contains(found) {
                counts.push(found.clone());
            }
        }
        ModelText {
            title: text(&self.facts["name"]),
            discrete: self.discrete,
            species: self.species.iter().zip(bounds).map(|(s, (lower, upper))| (s.clone(), lower, upper)).collect(),
            parameters: pairs(&self.facts["parameters"]),
            shorthand: Vec::new(),
            rows: list(&self.facts["equations"]).iter().map(text).collect(),
            block: None,
            counts,
            scenarios: self.scenarios.iter().map(|s| (s.name.clone(), s.values.clone())).collect(),
        }
    }

    /// The equilibria of every scenario of [`Case::text`], the case itself first.
    pub fn lists(&self) -> impl Iterator<Item = &[Equilibrium]> {
        std::iter::once(&self.equilibria[..]).chain(self.scenarios.iter().map(|scenario| &scenario.equilibria[..]))
    }

    /// Whether an eigenvalue is so near the border that rounding the parameters may decide on which side it is.
    pub fn is_degenerate(&self, published: &Equilibrium) -> bool {
        let largest = published.eigenvalues.iter().fold(0.0f64, |most, (re, im)| most.max(re.hypot(*im)));
        let distance = |&(re, im): &(f64, f64)| if self.discrete { re.hypot(im) - 1.0 } else { re };
        published.eigenvalues.iter().any(|value| distance(value).abs() <= 1e-9 * largest)
    }

    /// The published eigenvalue of largest real part or modulus.
    pub fn leading(&self, published: &Equilibrium) -> (f64, f64) {
        let size = |&(re, im): &(f64, f64)| if self.discrete { re.hypot(im) } else { re };
        let leading = published.eigenvalues.iter().max_by(|a, b| size(a).total_cmp(&size(b)));
        *leading.unwrap()
    }

    /// The contract's word: above two species a spiral is one whose leading eigenvalues are a pair.
    pub fn word(&self, published: &Equilibrium) -> String {
        let word = type_word(&published.linear_type);
        let complex = self.leading(published).1 != 0.0;
        if published.x.len() > 2 && !complex { word.replace("spiral", "node") } else { word.to_owned() }
    }
}

impl Equilibrium {
    /// A box around the published coordinates, `relative` of each to either side.
    pub fn around(&self, relative: f64) -> Point {
        self.x.iter().map(|&x| Interval::new(x - relative * x.abs(), x + relative * x.abs())).collect()
    }
}

fn case(entry: &Value) -> Case {
    let facts = entry.as_object().unwrap().clone();
    let scenarios = entry.get("scenarios").map_or(&[][..], list);
    Case {
        id: text(&entry["id"]),
        discrete: entry["time"] == "discrete",
        species: list(&entry["species"]).iter().map(text).collect(),
        equilibria: list(&entry["equilibria"]).iter().map(equilibrium).collect(),
        scenarios: scenarios.iter().map(scenario).collect(),
        facts,
    }
}

fn scenario(entry: &Value) -> Scenario {
    Scenario {
        name: text(&entry["name"]),
        values: pairs(&entry["override"]),
        yields: pairs(&entry["yield_expressions"]),
        equilibria: list(&entry["equilibria"]).iter().map(equilibrium).collect(),
    }
}

fn equilibrium(entry: &Value) -> Equilibrium {
    let row = |row: &Value| list(row).iter().map(number).collect();
    let eigenvalue = |value: &Value| match value {
        Value::Array(parts) => (number(&parts[0]), number(&parts[1])),
        real => (number(real), 0.0),
    };
    let counts: Vec<usize> = list(&entry["counts"]).iter().map(|count| count.as_u64().unwrap() as usize).collect();
    Equilibrium {
        x: row(&entry["x"]),
        jacobian: entry.get("jacobian").map(|rows| list(rows).iter().map(row).collect()),
        eigenvalues: list(&entry["eigenvalues"]).iter().map(eigenvalue).collect(),
        linear_type: text(&entry["linear_type"]),
        counts: counts.try_into().unwrap(),
        stability: text(&entry["stability"]),
        multiplicity: entry.get("multiplicity").map_or(1, |m| m.as_u64().unwrap() as usize),
        yields: pairs(&entry["yields"]).into_iter().map(|(name, value)| (name, value.parse().unwrap())).collect(),
    }
}

fn list(value: &Value) -> &[Value] {
    value.as_array().unwrap_or_else(|| panic!("a list, not {value}"))
}

fn text(value: &Value) -> String {
    value.as_str().unwrap_or_else(|| panic!("text, not {value}")).to_owned()
}

/// The f64 nearest to a decimal.
pub fn number(value: &Value) -> f64 {
    text(value).parse().unwrap_or_else(|_| panic!("a number, not {value}"))
}

/// A map of texts; empty where there is none.
fn pairs(value: &Value) -> Vec<(String, String)> {
    value.as_object().into_iter().flatten().map(|(key, value)| (key.clone(), text(value))).collect()
}
