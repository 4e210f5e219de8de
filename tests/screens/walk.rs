//! Thousands of keys at random, with the terminal's size changing under them and answers coming late and in any order:
//! nothing panics, whatever is selected is there, and what is drawn fits.

use restpoint::analysis::field::nearest;
use restpoint::app::keymap::{BINDINGS, lookup, place};
use restpoint::app::{Action, App, Dialog, Key, Msg};
use restpoint::num::random::Source;
use restpoint::ui;
use unicode_width::UnicodeWidthStr;

use crate::bench::{Bench, size};

/// Keys struck altogether.
const KEYS: usize = 20_000;
/// A picture is looked at after so many.
const LOOK: usize = 5;

const MODELS: [&str; 3] = [
    // Two species, two scenarios, a saddle and its divide.
    "title: rivals\ntime: yr\nspecies: {A: {unit: t, upper: 20}, B: {unit: t, upper: 20}}\n\
     parameters: {k: {value: 5, range: [1, 9], control: true}, c: 1.5}\n\
     change: {A: A*(k - A - c*B), B: B*(5 - B - c*A)}\nnow: {A: 4, B: {value: 1, cv: 0.3}}\n\
     scenarios: {as it is: {}, less: {values: {k: 4}}, a name that is longer than most names are: {values: {c: 0.5}}}\n",
    // One species, a map.
    "title: leaping\ntime: {unit: yr, step: 1}\nspecies: {N: {upper: 10}}\nparameters: {r: {value: 2.6, range: [0, 3]}}\n\
     next: {N: N*exp(r*(1 - N))}\n",
    // Three species with wide and combining letters in their names.
    "title: 漁場と e\u{301}tangs\ntime: d\nspecies: {鰯: {symbol: x, upper: 9}, e\u{301}cole: {symbol: y, upper: 9}, z: {upper: 9}}\n\
     parameters: {a: 1}\nchange: {x: x*(3 - x - a*y), y: y*(x - 1 - z), z: z*(y - 0.5)}\n",
];

#[test]
fn nothing_panics_whatever_is_struck_at_a_plane() {
    walk(MODELS[0], 11);
}

#[test]
fn nothing_panics_whatever_is_struck_at_a_map() {
    walk(MODELS[1], 12);
}

#[test]
fn nothing_panics_whatever_is_struck_at_three_species() {
    walk(MODELS[2], 13);
}

fn walk(model: &str, seed: u64) {
    let mut source = Source::new(seed);
    let mut bench = Bench::of(model);
    // Files with names at random would be written where the tests are run.
    bench.writes = false;
    for step in 0..KEYS / MODELS.len() {
        one(&mut bench, &mut source);
        holds(&bench.app);
        if step % LOOK == 0 {
            fits(&bench);
        }
    }
    bench.work();
    bench.tell(Msg::Resized(size([80, 24])));
    fits(&bench);
}

fn one(bench: &mut Bench, source: &mut Source) {
    let below = |source: &mut Source, count: usize| nearest(source.unit() * count as f64 - 0.5, count.max(1) - 1);
    match below(source, 20) {
        0 => {
            let columns = below(source, 220) as u16;
            let rows = below(source, 60) as u16;
            bench.tell(Msg::Resized(size([columns, rows])));
        }
        1 => bench.tell(Msg::Resized(size([80, 24]))),
        2..8 if bench.waiting() > 0 => {
            let place = below(source, bench.waiting());
            bench.do_one(place);
        }
        8 => bench.hold(),
        9 => bench.tell(Msg::Pasted("0.3\u{1b}[2J漁".to_owned())),
        10 => bench.tell(Msg::Changed),
        _ => {
            let binding = &BINDINGS[below(source, BINDINGS.len())];
            let key = binding.keys[below(source, binding.keys.len())];
            let key = if below(source, 8) == 0 { Key::Char(char::from(b' ' + below(source, 95) as u8)) } else { key };
            // Leaving and pausing are done outside.
            if !matches!(lookup(place(&bench.app), key), Some(Action::Leave | Action::Suspend)) {
                bench.tell(Msg::Struck(key));
            }
        }
    }
    bench.taken();
}

/// What always holds.
#[track_caller]
fn holds(app: &App) {
    assert!(app.chooser.chosen < app.chooser.entries.len().max(1));
    if let Some(Dialog::Entry(entry)) = &app.dialog {
        assert!(entry.text.is_char_boundary(entry.cursor));
    }
    let Some(study) = &app.study else { return };
    assert!(study.current < study.slots.len() && study.chosen < study.count().max(1));
    assert!(study.from <= study.chosen && study.parameter < study.model().parameters.len().max(1));
    for (slot, names) in study.names.iter().enumerate() {
        let count = study.slots.get(slot).and_then(|slot| slot.solved()).map_or(0, |s| s.equilibria.list.len());
        assert!(names.is_empty() || names.len() == count, "{names:?} for {count} equilibria");
    }
}

#[track_caller]
fn fits(bench: &Bench) {
    let text = ui::text(&bench.app);
    let (columns, rows) = (usize::from(bench.app.size.columns), usize::from(bench.app.size.rows));
    assert!(text.lines().count() <= rows, "{text}");
    for line in text.lines() {
        assert!(line.width() <= columns, "{} columns of {columns}: {line}", line.width());
        assert!(!line.contains(char::is_control), "{line:?}");
    }
}
