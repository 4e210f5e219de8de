//! The keys of a model file: one table for each kind of map.
//!
//! Unknown keys, suggestions and missing keys are judged by these tables alone. To add a key, add a row here and read it
//! in the section's module. Maps whose keys are the user's own names (species, parameters, effects …) have none.

/// One key of a kind of map.
pub(super) struct Key {
    pub(super) name: &'static str,
    pub(super) required: bool,
    /// What it is, as it reads after "is".
    pub(super) what: &'static str,
    /// How it is written.
    pub(super) example: &'static str,
}

/// One kind of map.
pub(super) struct Table {
    /// What it is called in "… has no key".
    pub(super) name: &'static str,
    /// What may stand in its place, as it reads after "expected".
    pub(super) form: &'static str,
    pub(super) keys: &'static [Key],
}

const MAP: &str = "keys and values";
const NUMBER_OR_MAP: &str = "a number, or keys and values";

const fn needed(name: &'static str, what: &'static str, example: &'static str) -> Key {
    Key { name, required: true, what, example }
}

const fn key(name: &'static str, what: &'static str, example: &'static str) -> Key {
    Key { name, required: false, what, example }
}

const NOTE: Key = key("note", "a remark", "note: survey of 2019");

pub(super) const MODEL: Table = Table {
    name: "a model",
    form: MAP,
    keys: &[
        needed("title", "one line that says what is modelled", "title: Lake trout under two quotas"),
        NOTE,
        needed("time", "the unit of time", "time: yr"),
        key("species", "the map of species", "species: {stock: {symbol: N, upper: 1000}}"),
        key("parameters", "the map of named numbers", "parameters: {r: 0.9}"),
        key("shorthand", "the map of named formulas", "shorthand: {intake: a*S/(1 + a*h*S)}"),
        key("processes", "what goes on", "processes: {growth: {rate: r*N, effect: {N: 1}}}"),
        key("change", "what is added to the rates of change", "change: {N: -m*N}"),
        key("next", "the next state of a discrete model", "next: {N: N*exp(r*(1 - N/K))}"),
        key("lotka_volterra", "a Lotka–Volterra block", "lotka_volterra: {growth: {H: 0.8}, matrix: {H: {H: -0.001}}}"),
        key("harvest", "what is taken", "harvest: {catch: {takes: {N: q*E*N}}}"),
        key("now", "where the stocks stand today", "now: {N: 610}"),
        key("scenarios", "the plans to compare", "scenarios: {half effort: {values: {E: 0.5*E}}}"),
        key("correlations", "rank correlations of the draws", "correlations: [{between: [r, K], rank: -0.4}]"),
        key("draws", "a file of joint draws", "draws: posterior.csv"),
        key("sketch", "the default axes", "sketch: {x: S, y: C}"),
    ],
};

pub(super) const TIME: Table = Table {
    name: "\"time\"",
    form: MAP,
    keys: &[
        needed("unit", "the unit of time", "unit: yr"),
        needed("step", "how much time one application of the map takes", "step: 1"),
    ],
};

pub(super) const SPECIES: Table = Table {
    name: "a species",
    form: MAP,
    keys: &[
        key("symbol", "the name that formulas use", "symbol: S"),
        key("unit", "the unit of abundance", "unit: kt"),
        key("lower", "the lower side of the search box", "lower: 0"),
        key("upper", "the upper side of the search box", "upper: 1500"),
        key("population", "the group it belongs to", "population: cod"),
        key("role", "fleet or resource", "role: fleet"),
        key("aim", "keep or remove", "aim: remove"),
    ],
};

pub(super) const PARAMETER: Table = Table {
    name: "a parameter",
    form: NUMBER_OR_MAP,
    keys: &[
        needed("value", "the base value", "value: 0.9"),
        key("unit", "its unit", "unit: 1/yr"),
        key("range", "what is plausible, low then high", "range: [0.5, 1.5]"),
        key("draw", "the distribution it is drawn from", "draw: {lognormal: {cv: 0.2}}"),
        key("min", "the hard lower limit", "min: 0"),
        key("max", "the hard upper limit", "max: 1"),
        NOTE,
        key("control", "whether management can set it", "control: true"),
    ],
};

/// The distributions, each with the table of its own map.
pub(super) const DRAWS: &[(&str, Table)] = &[
    ("normal", Table { name: "a normal draw", form: MAP, keys: &[needed("sd", "the standard deviation", "sd: 0.1")] }),
    (
        "lognormal",
        Table { name: "a lognormal draw", form: MAP, keys: &[needed("cv", "the coefficient of variation", "cv: 0.2")] },
    ),
    ("uniform", Table { name: "a uniform draw", form: MAP, keys: &[] }),
    ("triangular", Table { name: "a triangular draw", form: MAP, keys: &[] }),
    (
        "beta",
        Table {
            name: "a beta draw",
            form: MAP,
            keys: &[needed("a", "the first shape", "a: 2"), needed("b", "the second shape", "b: 5")],
        },
    ),
];

pub(super) const PROCESS: Table = Table {
    name: "a process",
    form: MAP,
    keys: &[
        needed("rate", "how fast it goes", "rate: r*N"),
        needed("effect", "what one unit of it does to each species", "effect: {N: 1}"),
    ],
};

pub(super) const HARVEST: Table = Table {
    name: "a harvest",
    form: MAP,
    keys: &[
        key("takes", "how much of each species is taken", "takes: {N: q*E*N}"),
        key("counts", "a yield that the equations already contain", "counts: {N: q*E*N}"),
        key("when", "before or after the step", "when: before"),
        key("price", "what one unit of each species is worth", "price: {N: 0.3}"),
        key("cost", "the cost per unit of time", "cost: c*E"),
    ],
};

pub(super) const BLOCK: Table = Table {
    name: "a Lotka–Volterra block",
    form: MAP,
    keys: &[
        needed("growth", "each species' own growth, or the name of a CSV file", "growth: {H: 0.8}"),
        needed("matrix", "the effects on each species, or the name of a CSV file", "matrix: {H: {H: -0.001}}"),
        key("upper", "the upper side of the search box of species without one", "upper: 500"),
    ],
};

pub(super) const SURVEY: Table = Table {
    name: "a survey's estimate",
    form: NUMBER_OR_MAP,
    keys: &[
        needed("value", "the estimated abundance", "value: 610"),
        key("cv", "its coefficient of variation", "cv: 0.2"),
    ],
};

pub(super) const CORRELATION: Table = Table {
    name: "a correlation",
    form: MAP,
    keys: &[
        needed("between", "the two parameters", "between: [r, K]"),
        needed("rank", "the rank correlation", "rank: -0.4"),
    ],
};

pub(super) const SCENARIO: Table = Table {
    name: "a scenario",
    form: MAP,
    keys: &[
        key("values", "new values of parameters", "values: {E: 0.5*E}"),
        key("without", "the processes and harvests left out", "without: [trawl]"),
        key("harvest", "harvests added or replaced", "harvest: {quota: {takes: {S: Q}}}"),
        key("processes", "processes added or replaced", "processes: {stocking: {rate: 5, effect: {S: 1}}}"),
    ],
};

pub(super) const SKETCH: Table = Table {
    name: "\"sketch\"",
    form: MAP,
    keys: &[
        needed("x", "the species on the horizontal axis", "x: S"),
        needed("y", "the species on the vertical axis", "y: C"),
    ],
};

/// Choices of the keys that take one of a few words, in the order of their enums.
pub(super) const ROLES: &[&str] = &["population", "fleet", "resource"];
pub(super) const AIMS: &[&str] = &["keep", "remove"];
pub(super) const WHENS: &[&str] = &["before", "after"];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn examples_show_their_own_key_and_keys_are_distinct() {
        let tables = [
            &MODEL,
            &TIME,
            &SPECIES,
            &PARAMETER,
            &PROCESS,
            &HARVEST,
            &BLOCK,
            &SURVEY,
            &CORRELATION,
            &SCENARIO,
            &SKETCH,
        ];
        for table in tables.into_iter().chain(DRAWS.iter().map(|(_, table)| table)) {
            for (index, key) in table.keys.iter().enumerate() {
                assert!(key.example.starts_with(&format!("{}: ", key.name)), "{}", key.name);
                assert!(table.keys[..index].iter().all(|other| other.name != key.name), "{}", key.name);
            }
        }
    }
}
