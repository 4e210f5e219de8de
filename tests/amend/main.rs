//! Saving tried values as a scenario in the text of a model file: nothing else in the text may change, and the file must
//! mean what was meant.

#![expect(clippy::expect_used, clippy::panic, reason = "what was to be there is not: the test has failed")]

mod generated;
mod support;

use restpoint::model::amend::{Addition, Refusal, with_scenario};
use restpoint::model::load::NoFiles;
use support::{addition, check, files_with, old_and_new};

const HEAD: &str = "title: T\ntime: yr\nspecies: {N: {upper: 9}}\nparameters: {r: 1, E: 0.5}\nchange: {N: r - N}\n";

/// What is added to HEAD and the given section, written out.
fn becomes(section: &str, base: Option<&str>, expected: &str) {
    let text = format!("{HEAD}{section}");
    let new = check(&text, &addition("tried", base, &[("E", 2.0)]), &NoFiles);
    assert_eq!(new.strip_prefix(HEAD), Some(expected), "{section:?}");
}

#[test]
fn the_entry_is_written_in_the_style_of_those_that_are_there() {
    for (section, base, expected) in [
        ("scenarios:\n  a: {}\n", Some("a"), "scenarios:\n  a: {}\n  tried: {values: {E: 2}}\n"),
        ("scenarios:\n  a: {}", Some("a"), "scenarios:\n  a: {}\n  tried: {values: {E: 2}}"),
        (
            "scenarios:\n    a:\n        values: {E: 3}\n",
            None,
            "scenarios:\n    a:\n        values: {E: 3}\n    tried: {values: {E: 2}}\n",
        ),
        ("scenarios: {a: {}}\n", Some("a"), "scenarios: {a: {}, tried: {values: {E: 2}}}\n"),
        ("scenarios: {a: {},}\n", Some("a"), "scenarios: {a: {}, tried: {values: {E: 2}},}\n"),
        ("scenarios: {a: }\n", None, "scenarios: {a: , tried: {values: {E: 2}}}\n"),
        (
            "scenarios: {\n  a: {}, # first\n  b: {} # last\n}\n",
            Some("b"),
            "scenarios: {\n  a: {}, # first\n  b: {}, # last\n  tried: {values: {E: 2}}\n}\n",
        ),
        (
            "scenarios: {\n  a: {}, # only\n}\n",
            Some("a"),
            "scenarios: {\n  a: {}, # only\n  tried: {values: {E: 2}},\n}\n",
        ),
    ] {
        becomes(section, base, expected);
    }
}

#[test]
fn a_file_without_scenarios_keeps_the_one_it_has() {
    for (section, expected) in [
        ("", "scenarios:\n  base: {}\n  tried: {values: {E: 2}}\n"),
        ("# end", "# end\nscenarios:\n  base: {}\n  tried: {values: {E: 2}}"),
        ("...\n# after\n", "scenarios:\n  base: {}\n  tried: {values: {E: 2}}\n...\n# after\n"),
        (
            "scenarios: # none\nnow:\n   N: 1\n",
            "scenarios: # none\n   base: {}\n   tried: {values: {E: 2}}\nnow:\n   N: 1\n",
        ),
        ("scenarios: null # yet\n", "scenarios: {base: {}, tried: {values: {E: 2}}} # yet\n"),
        ("scenarios: ~", "scenarios: {base: {}, tried: {values: {E: 2}}}"),
    ] {
        becomes(section, Some("base"), expected);
        becomes(section, None, expected);
    }
}

#[test]
fn comments_as_far_in_as_the_scenarios_belong_to_them() {
    becomes(
        "scenarios:\n  a: {} # one\n\n  # b: {}\n\n# axes\nnow: {N: 1}\n",
        None,
        "scenarios:\n  a: {} # one\n\n  # b: {}\n  tried: {values: {E: 2}}\n\n# axes\nnow: {N: 1}\n",
    );
}

#[test]
fn what_the_base_says_is_copied_with_its_aliases_written_out() {
    let section = "\
processes: {p: {rate: &rate r*N, effect: {N: -0.1}}}
harvest: {h: {takes: {N: E*N}}}
scenarios:
  a:
    values: &v {r: 2*r, 'E': &e 3}
    without: [h]
  b: # second
    values: *v
    harvest:
      net: {takes: {N: \"min(N, E)\"}, cost: *e}
    processes:
      p:
        rate: *rate
        effect:
          N: >-
            -min(r,
            1)
now: {N: 1}
";
    let added = "  tried: {values: {r: 2*r, E: 2}, \
                 harvest: {net: {takes: {N: \"min(N, E)\"}, cost: 3}}, \
                 processes: {p: {rate: r*N, effect: {N: \"-min(r, 1)\"}}}}\n";
    let (before, after) = section.split_at(section.find("now:").expect("the last section"));
    let narrow = added.replacen("  tried: {values: ", "  tried:\n    values: ", 1);
    let narrow =
        narrow.replacen("}, harvest: ", "}\n    harvest: ", 1).replacen("}, processes: ", "}\n    processes: ", 1);
    let narrow = narrow.replacen("}}}}\n", "}}}\n", 1);
    becomes(section, Some("b"), &format!("{before}{narrow}{after}"));
    becomes(section, Some("a"), &format!("{before}  tried: {{values: {{r: 2*r, E: 2}}, without: [h]}}\n{after}"));
}

#[test]
fn a_file_in_brackets_stays_in_brackets() {
    let plain = "{title: T, time: yr, species: {N: {upper: 9}}, parameters: {E: 1}, change: {N: 1 - N}";
    let tried = addition("tried", None, &[("E", 2.0)]);
    for (end, expected) in [
        ("}\n", ", scenarios: {base: {}, tried: {values: {E: 2}}}}\n"),
        (", scenarios: }", ", scenarios: {base: {}, tried: {values: {E: 2}}}}"),
        (", scenarios: null}", ", scenarios: {base: {}, tried: {values: {E: 2}}}}"),
        (", scenarios: {a: {}}}", ", scenarios: {a: {}, tried: {values: {E: 2}}}}"),
    ] {
        assert_eq!(check(&format!("{plain}{end}"), &tried, &NoFiles), format!("{plain}{expected}"));
    }
}

#[test]
fn block_scalars_and_line_breaks_are_left_alone() {
    for section in [
        "scenarios:\n  a:\n    values:\n      E: |\n        2*E\n\n\n# end\n",
        "scenarios:\n  a:\n    values:\n      E: >+\n        2*E\n\n\n\n",
        "scenarios:\n  a:\n    values:\n      E: |-\n        2*E",
        "scenarios:\n  ? a\n  : values:\n      E: 2*E\n",
        "note: |\n  remark\n\n",
        "note: >\n  remark",
        "scenarios:\n  \"a: b\": {}\n  &x 'c': {values: {r: 3}}\n",
        "scenarios: &all\n  a: &a {values: {r: 4}}\n  b: *a",
        "scenarios: &all {a: &a {}, b: *a}",
        "scenarios: {a: {values: {E: \n 2*E\n } } }",
        "? scenarios\n: a: {}\n  b: {}\n",
        "\"scenarios\": {a: {}}\n",
    ] {
        for text in [format!("{HEAD}{section}"), format!("--- # start\n{HEAD}{section}\n...\n")] {
            let crlf = text.replace('\n', "\r\n");
            for text in [format!("\u{feff}{text}"), format!("\u{feff}{crlf}"), text, crlf] {
                for base in [None, Some("a"), Some("b"), Some("base")] {
                    let tried = addition("tried", base, &[("r", -2.5)]);
                    match with_scenario(&text, &tried, &NoFiles) {
                        Err(Refusal::NoBase(_)) => {}
                        _ => _ = check(&text, &tried, &NoFiles),
                    }
                }
            }
        }
    }
}

#[test]
fn names_are_kept_whatever_they_are() {
    for name in [
        "yes",
        "12",
        "~",
        "name: with # signs",
        "🐟",
        "say \"no\"",
        "it's",
        "- a",
        "{a}",
        "a\\b",
        "e\u{301}",
        "Ä, ö",
        "?",
        "<<",
    ] {
        for section in ["", "scenarios:\n  a: {}\n", "scenarios: {a: {}}\n"] {
            check(&format!("{HEAD}{section}"), &addition(name, None, &[("E", 1e-300)]), &NoFiles);
        }
    }
}

#[test]
fn a_refusal_says_why_and_what_to_do() {
    let section = "scenarios: {a: {}, \u{e9}: {}}\n";
    let text = format!("{HEAD}{section}");
    let long = "x".repeat(121);
    for (tried, expected) in [
        (addition("a", None, &[]), Refusal::Taken("a".into())),
        (addition("e\u{301}", None, &[]), Refusal::Taken("\u{e9}".into())),
        (addition("b", Some("none"), &[]), Refusal::NoBase("none".into())),
        (addition("b", None, &[("q", 1.0)]), Refusal::NoParameter("q".into())),
        (addition("b", None, &[("N", 1.0)]), Refusal::NoParameter("N".into())),
        (addition("b", None, &[("r", f64::NAN)]), Refusal::NotFinite("r".into())),
        (addition("", None, &[]), Refusal::Name("it is empty")),
        (addition("a\nb", None, &[]), Refusal::Name("a name has one line and no invisible characters")),
        (addition("\u{202e}b", None, &[]), Refusal::Name("a name has one line and no invisible characters")),
        (addition("b ", None, &[]), Refusal::Name("it begins or ends with a space")),
        (addition(&long, None, &[]), Refusal::Name("it is longer than 120 characters")),
    ] {
        let refusal = with_scenario(&text, &tried, &NoFiles);
        assert_eq!(refusal, Err(expected.clone()), "{tried:?}");
        assert!(expected.to_string().contains([';', ':']), "{expected}");
    }
    assert_eq!(with_scenario("title: T", &addition("b", None, &[]), &NoFiles), Err(Refusal::Unsound));
    let empty = format!("{HEAD}scenarios: {{}}\n");
    assert_eq!(with_scenario(&empty, &addition("b", None, &[]), &NoFiles), Err(Refusal::Unsound));
    assert_eq!(with_scenario(HEAD, &addition("base", None, &[]), &NoFiles), Err(Refusal::Taken("base".into())));
}

#[test]
fn names_in_either_form_are_one_parameter() {
    let text = HEAD.replace("E: 0.5", "E: 0.5, e\u{301}: 1") + "scenarios: {a: {values: {e\u{301}: 3}}}\n";
    let new = check(&text, &addition("tried", Some("a"), &[("\u{e9}", 4.0), ("e\u{301}", 5.0)]), &NoFiles);
    assert!(new.ends_with(", tried: {values: {\u{e9}: 5}}}\n"), "{new}");
}

#[test]
fn every_sound_model_of_this_repository_takes_a_scenario() {
    let mut taken = 0;
    for (path, text, tables) in files_with(&["scenarios", "tests/files"]) {
        let Some(model) = support::model(&text, &tables) else { continue };
        let Some(parameter) = model.parameters.first() else { continue };
        for base in model.scenarios.iter().map(|scenario| Some(scenario.name.as_str())).chain([None]) {
            let tried = addition("tried: #1", base, &[(&parameter.name, parameter.value * 1.5)]);
            check(&text, &tried, &tables);
            taken += 1;
        }
        assert!(path.exists());
    }
    assert!(taken > 150, "{taken}");
}

#[test]
fn a_scenario_added_to_an_added_one_is_as_good() {
    let first = Addition { name: "one".into(), base: None, values: vec![("E".into(), 3.0)] };
    let text = with_scenario(HEAD, &first, &NoFiles).expect("a place");
    let second = Addition { name: "two".into(), base: Some("one".into()), values: vec![("r".into(), 4.0)] };
    let (_, model) = old_and_new(&text, &check(&text, &second, &NoFiles), &NoFiles);
    let names: Vec<&str> = model.scenarios.iter().map(|scenario| scenario.name.as_str()).collect();
    assert_eq!(names, ["base", "one", "two"]);
    assert_eq!(model.values(2, &[]).expect("finite values"), [4.0, 3.0]);
}
