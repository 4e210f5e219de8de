//! The linear part: eigenvalues, type and stability, with what is proved of each, and what the nonlinear terms add.

use serde_json::{Value, json};

use crate::analysis::linearise::{Dimensions, Kind, Linearisation, Nonlinear};
use crate::report::kinds::{self, SPIRALS};

use super::super::layout::{Align, Cell, Head, Ink};
use super::super::number::human;
use super::super::{Row, exact, words};
use super::path::{Get, keyed, listed};
use super::{Cells, Column, Glyphs, Shown, Unit, key};

pub(super) static COLUMNS: &[Column] = &[
    Column {
        id: "eigenvalues",
        unit: Unit::PerTime,
        help: "eigenvalues of the Jacobian there, by falling real part; of a map its multipliers, without a unit, by \
               falling modulus",
        shown: Shown::Files,
        title: "eigenvalue",
        keys: &[key(
            "eigenvalues",
            Get::Other {
                paths: |table| listed(table.model.species.len(), &["re", "im"]),
                value: |row| row.linear().map_or(Value::Null, eigenvalues),
            },
        )],
        cells: Cells::Own {
            heads: |table| {
                let unit = if table.is_map() { String::new() } else { Unit::PerTime.of(table, None) };
                let head =
                    |place| Head { unit: unit.clone(), ..Head::new(&format!("eigenvalue {place}"), Align::Left) };
                (1..=table.model.species.len()).map(head).collect()
            },
            cells: |row, _| {
                let values = row.linear().map_or(&[][..], |linear| &linear.spectrum.values);
                let cell = |place: usize| values.get(place).map_or_else(String::new, |v| complex(v.re, v.im));
                (0..row.table.model.species.len()).map(|place| Cell::new(cell(place))).collect()
            },
        },
    },
    Column {
        id: "type",
        unit: Unit::None,
        help: "type by the linear part alone: node, spiral, saddle, centre and so on, and whether that is proved; for people \
               also why there is none",
        shown: Shown::Everywhere,
        title: "type",
        keys: &[
            key("type", Get::One(|row| row.linear().map_or(Value::Null, |l| kinds::of(l.kind).word.into()))),
            key("type_proven", Get::One(|row| row.linear().map_or(Value::Null, |l| l.kind_proven.into()))),
        ],
        cells: Cells::Own {
            heads: |_| vec![Head::new("type", Align::Left)],
            cells: |row, glyphs| vec![kind(row, glyphs)],
        },
    },
    Column {
        id: "stable",
        unit: Unit::None,
        help: "whether all eigenvalues attract, and whether that is proved; open where only the nonlinear terms decide; for \
               people the type says so",
        shown: Shown::Files,
        title: "stable",
        keys: &[
            key("stable", Get::One(|row| row.linear().map_or(Value::Null, |l| json!(l.stable)))),
            key("stable_proven", Get::One(|row| row.linear().map_or(Value::Null, |l| l.stable_proven.into()))),
        ],
        cells: Cells::Own {
            heads: |_| vec![Head::new("stable", Align::Left)],
            cells: |row, _| vec![row.linear().map_or_else(|| Cell::new(""), stable)],
        },
    },
    Column {
        id: "dimensions",
        unit: Unit::None,
        help: "how many eigenvalues attract, are critical, and repel",
        shown: Shown::Files,
        title: "directions",
        keys: &[key(
            "dimensions",
            Get::Other {
                paths: |_| keyed(&["stable", "centre", "unstable"]),
                value: |row| row.linear().map_or(Value::Null, |linear| dimensions(linear.dimensions)),
            },
        )],
        cells: Cells::Rounded,
    },
    Column {
        id: "alternating",
        unit: Unit::None,
        help: "whether the leading multiplier of a map is negative, so that the state is overshot at every step",
        shown: Shown::Files,
        title: "alternating",
        keys: &[key("alternating", Get::One(|row| row.linear().map_or(Value::Null, |l| l.alternating.into())))],
        cells: Cells::Rounded,
    },
    Column {
        id: "nonlinear",
        unit: Unit::None,
        help: "what the nonlinear terms say where an eigenvalue is critical and none repels: the verdict, the \
               coefficient that gives it, and whether it is proved (Kuznetsov 2004)",
        shown: Shown::Everywhere,
        title: "nonlinear terms",
        keys: &[key(
            "nonlinear",
            Get::Other {
                paths: |_| keyed(&["verdict", "test", "coefficient", "proven"]),
                value: |row| row.linear().and_then(|l| l.nonlinear).map_or(Value::Null, nonlinear),
            },
        )],
        cells: Cells::Own {
            heads: |_| vec![Head::new("nonlinear terms", Align::Left)],
            cells: |row, _| vec![row.linear().and_then(|l| l.nonlinear).map_or_else(|| Cell::new(""), verdict)],
        },
    },
];

fn eigenvalues(linear: &Linearisation) -> Value {
    linear.spectrum.values.iter().map(|value| json!({"re": exact(value.re), "im": exact(value.im)})).collect()
}

/// A complex number for people.
fn complex(re: f64, im: f64) -> String {
    match im {
        0.0 => human(re),
        im if im < 0.0 => format!("{} - {}i", human(re), human(-im)),
        im => format!("{} + {}i", human(re), human(im)),
    }
}

/// The type for people, with its glyph and what is proved of it.
pub(in crate::report) fn kind(row: &Row<'_>, glyphs: Glyphs) -> Cell {
    let Some(linear) = row.linear() else {
        return Cell::inked(row.why().map_or_else(String::new, |why| format!("none: {why}")), Ink::Undecided);
    };
    let look = kinds::of(linear.kind);
    let winds = if look.spirals { SPIRALS } else { ' ' };
    let (proof, ink) = match (linear.kind, linear.kind_proven) {
        (Kind::Undecided, true) => (", proved critical", Ink::Undecided),
        (Kind::Undecided, false) => ("", Ink::Undecided),
        (_, true) => (", proved", Ink::Proved),
        (_, false) => (", numerical", Ink::Numerical),
    };
    let proof = format!("{proof}{}", apart(linear));
    Cell::inked(
        match glyphs {
            Glyphs::Unicode => format!("{}{winds} {}{proof}", look.glyph, look.word),
            Glyphs::Ascii => format!("{}{winds} {}{proof}", look.ascii, look.word),
            Glyphs::Words => format!("{}{proof}", look.word),
        },
        ink,
    )
}

/// What is to be said of stability where it is proved and the type is not, or the other way round.
fn apart(linear: &Linearisation) -> &'static str {
    match (linear.kind_proven, linear.stable_proven, linear.stable) {
        (false, true, Some(true)) => "; proved stable",
        (false, true, Some(false)) => "; proved not stable",
        (true, false, Some(_)) => "; stability numerical",
        _ => "",
    }
}

fn stable(linear: &Linearisation) -> Cell {
    match linear.stable {
        None => Cell::inked("open", Ink::Undecided),
        Some(stable) => {
            let answer = if stable { "yes" } else { "no" };
            Cell::inked(format!("{answer}, {}", words::proof(linear.stable_proven)), Ink::of(linear.stable_proven))
        }
    }
}

fn dimensions(count: Dimensions) -> Value {
    json!({"stable": count.stable, "centre": count.centre, "unstable": count.unstable})
}

fn nonlinear(found: Nonlinear) -> Value {
    json!({
        "verdict": words::verdict_word(found.verdict),
        "test": words::test(found.test),
        "coefficient": exact(found.coefficient),
        "proven": found.proven,
    })
}

fn verdict(found: Nonlinear) -> Cell {
    let text =
        format!("{}, {} ({})", words::verdict_word(found.verdict), words::proof(found.proven), words::test(found.test));
    Cell::inked(text, Ink::of(found.proven))
}
