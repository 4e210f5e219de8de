//! Which model? What is listed, what is said of what is wrong, what is opened.

use restpoint::app::catalogue::{Entry, Origin};
use restpoint::app::{Msg, Source};

use crate::bench::{Bench, SIZES, shipped};
use crate::texts::looks_as;

fn entry(name: &str, title: &str, problem: Option<&str>) -> Entry {
    Entry {
        source: Source::File(name.into()),
        origin: Origin::Folder,
        name: name.to_owned(),
        title: title.to_owned(),
        species: vec!["sprat".to_owned(), "cod".to_owned()],
        scenarios: if problem.is_some() { 0 } else { 4 },
        problem: problem.map(str::to_owned),
    }
}

/// The chooser with only these in it.
fn with(entries: Vec<Entry>) -> Bench {
    let mut bench = Bench::empty();
    bench.app.chooser.listing = 7;
    bench.app.chooser.is_listing = true;
    for entry in entries {
        bench.tell(Msg::Listed(7, entry));
    }
    bench
}

#[test]
fn models_are_listed_and_opened() {
    for size in SIZES {
        let mut bench = Bench::empty().at(size);
        bench.shows(&["restpoint: which model?", "Aldrun river", "in scenarios", "scenarios/aldrun-river.yaml"]);
        bench.press("n");
        bench.shows(&["scenarios/corvale-orchards.yaml"]);
        bench.press("<Enter>");
        bench.shows(&["Corvale orchards", "(1 of 5)"]);
        bench.press("o");
        bench.shows(&["> Corvale orchards", "open now"]);
    }
}

#[test]
fn what_is_wrong_is_said_with_its_place() {
    let problem = "bad.yaml:7:3: nothing is called \"foo\"";
    for size in SIZES {
        let mut bench =
            with(vec![entry("good.yaml", "A good one", None), entry("bad.yaml", "", Some(problem))]).at(size);
        bench.shows(&["> A good one", "4", "! bad.yaml", "looking for models"]);
        bench.press("n");
        bench.shows(&["It cannot be used: bad.yaml:7:3: nothing is called \"foo\""]);
        bench.tell(Msg::AllListed(7));
        bench.hides(&["looking for models"]);
    }
}

#[test]
fn a_listing_that_was_overtaken_adds_nothing() {
    let mut bench = with(vec![entry("a.yaml", "A good one", None)]);
    bench.tell(Msg::Listed(6, entry("b.yaml", "Another", None)));
    bench.hides(&["Another"]);
}

#[test]
fn where_there_is_none_it_is_said_what_to_do() {
    let mut bench = with(Vec::new());
    bench.tell(Msg::Resumed);
    bench.shows(&["Looking for models."]);
    bench.tell(Msg::AllListed(7));
    bench.shows(&["No model was found.", "press t to type the path of one"]);
}

#[test]
fn a_path_is_typed_and_completed() {
    let mut bench = with(Vec::new());
    bench.press("t");
    bench.shows(&["path of a model:", "Tab completes it"]);
    bench.press("scenarios/h");
    bench.press("<Tab>");
    bench.shows(&["scenarios/ha", "scenarios/hallowick-bays.yaml, scenarios/harrowmere-moor.yaml"]);
    bench.press("r<Tab>");
    bench.shows(&["path of a model: scenarios/harrowmere-moor.yaml"]);
    bench.press("<Enter>");
    bench.shows(&["Harrowmere moor"]);
}

#[test]
fn a_path_that_leads_nowhere_is_said() {
    let mut bench = with(Vec::new());
    bench.press("tnowhere.yaml<Enter>");
    bench.shows(&["! nowhere.yaml cannot be read: there is no such file"]);
    bench.press("tzzz<Tab>");
    bench.shows(&["nothing begins so"]);
}

#[test]
fn what_was_opened_before_is_listed_next_time() {
    let bench =
        Bench::of("title: one of my own\ntime: yr\nspecies: {S: {unit: kt, upper: 9}}\nchange: {S: S*(1 - S)}\n");
    let mut again = bench.restarted();
    again.press("<End>");
    again.tell(Msg::Resumed);
    let named = |entry: &&Entry| entry.title == "one of my own";
    let listed: Vec<&Entry> = again.app.chooser.entries.iter().filter(named).collect();
    assert_eq!(listed.iter().map(|entry| entry.origin).collect::<Vec<_>>(), [Origin::Recent]);
    assert_eq!(shipped("skarnby-bank").is_file(), again.app.chooser.entries.len() > 10);
}

#[test]
fn the_screen_looks_as_it_should() {
    let problem = "bad.yaml:7:3: nothing is called \"foo\"";
    let entries = || vec![entry("one.yaml", "The same title", None), entry("two.yaml", "The same title", None)];
    let mut all = entries();
    all.push(entry("bad.yaml", "", Some(problem)));
    all.push(Entry {
        origin: Origin::Compiled,
        ..entry("scenarios/sound.yaml", "A sound with a name that is long", None)
    });
    let mut bench = with(all);
    bench.tell(Msg::AllListed(7));
    bench.press("nn");
    looks_as(&bench, "chooser-80x24");
    looks_as(&bench.at([60, 20]).ascii(), "chooser-60x20-ascii");
}
