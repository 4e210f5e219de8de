//! Every screen as it is to look, at the smallest size, the usual one and a large one: in ASCII without colour, and in Unicode
//! with colour.

use crate::bench::{Bench, SIZES};
use crate::texts::{looks_as, looks_in_colour_as};

/// Where colours are compared as well.
const USUAL: [u16; 2] = [80, 24];

/// Name, model and keys. Screens that have a file of their own here have their looks there.
const SCREENS: &[(&str, &str, &str)] = &[
    ("equilibria", "skarnby-bank", "<Down><Down><Down>"),
    ("equilibria-three", "millgate-ponds", "<Down><Down>X"),
    ("equilibria-point", "corvale-orchards", "<Down><Down>mr<Right><Right>"),
    ("side-by-side", "skarnby-bank", "s<Right><Down><Down><Down>"),
    ("side-by-side-map", "aldrun-river", "s<Right><Right><Down>"),
    ("values", "skarnby-bank", "<Down><Down><Down>v<Right><Right>.<Down>"),
    ("help", "skarnby-bank", "h"),
];

#[test]
fn every_screen_looks_as_expected() {
    for (name, model, keys) in SCREENS {
        for size in SIZES {
            let [columns, rows] = size;
            let mut bench = Bench::open(model).at(size).ascii();
            bench.press(keys);
            assert!(bench.text().is_ascii());
            looks_as(&bench, &format!("{name}-ascii-{columns}x{rows}"));
            let mut bench = Bench::open(model).at(size).coloured();
            bench.press(keys);
            if size == USUAL {
                looks_in_colour_as(&bench, &format!("{name}-{columns}x{rows}"));
            } else {
                looks_as(&bench, &format!("{name}-{columns}x{rows}"));
            }
        }
    }
}

#[test]
fn a_file_that_has_become_wrong_is_shown_over_the_last_good_result() {
    let mut bench = Bench::of("title: t\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: N*(3 - N)}\n");
    bench.shows(&["E2"]);
    let path = bench.folder().join("m.yaml");
    std::fs::write(&path, "title: t\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: N*(3 - M)}\n").unwrap();
    bench.tell(restpoint::app::Msg::Changed);
    bench.shows(&["m.yaml:4:", "\"M\""]);
    bench.press("<Esc>");
    bench.shows(&["E2", "3.000"]);
}
