//! Standard streams, odd paths and interruption.
#![cfg(target_os = "linux")]
#![allow(clippy::unwrap_used, reason = "a test fails by panicking")]

use std::ffi::OsStr;
use std::fs::{self, File};
use std::os::unix::ffi::OsStrExt;
use std::process::{Command, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant};

use crate::cli_support::{FOLD, Ran, restpoint, run, run_on};
use serde_json::Value;

#[test]
fn a_model_is_read_from_standard_input() {
    let text = fs::read_to_string("scenarios/harrowmere-moor.yaml").unwrap();
    let (piped, named) = (run_on(&text, &["table", "-"]), run(&["table", "scenarios/harrowmere-moor.yaml"]));
    assert_eq!((piped.code, piped.err.as_str()), (Some(0), ""));
    assert_eq!(piped.out, named.out.replace("scenarios/harrowmere-moor.yaml", "-"));
}

#[test]
fn a_path_need_not_be_text() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join(OsStr::from_bytes(b"m\xff\x1b[31m.yaml"));
    fs::write(&path, FOLD).unwrap();
    let ran: Ran = restpoint().arg("table").arg(&path).output().unwrap().into();
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    assert!(ran.out.contains('\u{fffd}') && !ran.out.contains('\u{1b}'), "{}", ran.out);
    let ran: Ran = restpoint().args(["table", "--format", "json"]).arg(&path).output().unwrap().into();
    assert_eq!(ran.code, Some(0));
    assert!(serde_json::from_str::<Value>(&ran.out).is_ok());
}

#[test]
fn a_reader_that_has_gone_away_is_no_mistake() {
    for arguments in
        [&["table", "scenarios/harrowmere-moor.yaml"][..], &["--help"], &["check", "scenarios/ostrel-coast.yaml"]]
    {
        let mut child = restpoint().args(arguments).stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
        drop(child.stdout.take());
        let ran: Ran = child.wait_with_output().unwrap().into();
        assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""), "{arguments:?}");
    }
}

#[test]
fn a_result_that_cannot_be_written_is_a_fault() {
    let full = File::options().write(true).open("/dev/full").unwrap();
    let child =
        restpoint().args(["table", "scenarios/harrowmere-moor.yaml"]).stdout(full).stderr(Stdio::piped()).spawn();
    let ran: Ran = child.unwrap().wait_with_output().unwrap().into();
    assert_eq!(ran.code, Some(1));
    assert!(ran.err.contains("error: ") && ran.err.contains("No space left"), "{}", ran.err);
}

/// Twelve species, each of which crowds every other and saturates: hours of work.
fn endless() -> String {
    let names: Vec<String> = (0..12).map(|i| format!("x{i}")).collect();
    let species: Vec<String> = names.iter().map(|name| format!("{name}: {{upper: 10}}")).collect();
    let row = |(i, name): (usize, &String)| {
        let others = names.iter().enumerate().map(|(j, other)| {
            let weight = 0.3 + 0.05 * ((7 * i + 5 * j) % 11) as f64;
            format!("{weight}*{other}^2/(1 + {other}^2)")
        });
        format!("  {name}: \"{name}*(2 - {name} - {})\"\n", others.collect::<Vec<_>>().join(" - "))
    };
    let rows: String = names.iter().enumerate().map(row).collect();
    format!(
        "title: Endless\ntime: yr\nspecies: {{{}}}\nchange:\n{rows}scenarios: {{one: {{}}, two: {{}}}}\n",
        species.join(", ")
    )
}

/// Interrupts a run once it listens to interruption.
fn interrupted(arguments: &[&str]) -> Ran {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("endless.yaml");
    fs::write(&path, endless()).unwrap();
    let mut command = restpoint();
    command.arg("table").arg(&path).args(arguments).stdout(Stdio::piped()).stderr(Stdio::piped());
    let child = command.spawn().unwrap();
    let start = Instant::now();
    let status = format!("/proc/{}/status", child.id());
    // The set of signals that are caught, SIGINT being number 2.
    let listens = |status: &str| {
        let caught = status.lines().find_map(|line| line.strip_prefix("SigCgt:")).unwrap_or("0");
        u64::from_str_radix(caught.trim(), 16).unwrap_or(0) & 2 != 0
    };
    while !listens(&fs::read_to_string(&status).unwrap()) {
        assert!(start.elapsed() < Duration::from_secs(60), "never listens");
        sleep(Duration::from_millis(5));
    }
    sleep(Duration::from_millis(200));
    assert!(Command::new("kill").args(["-INT", &child.id().to_string()]).status().unwrap().success());
    let ran = child.wait_with_output().unwrap().into();
    assert!(start.elapsed() < Duration::from_secs(60), "goes on for {:?}", start.elapsed());
    ran
}

#[test]
fn an_interruption_leaves_a_partial_result_that_says_so() {
    let ran = interrupted(&["--budget", "3600"]);
    assert_eq!((ran.code, ran.err.as_str()), (Some(130), ""), "{}", ran.out);
    assert!(ran.out.contains("INTERRUPTED: the search was broken off; this is a partial result."), "{}", ran.out);
    assert_eq!(ran.out.matches("NOT PROVED COMPLETE").count(), 2, "{}", ran.out);

    let ran = interrupted(&["--budget", "3600", "--format", "json", "--strict"]);
    assert_eq!(ran.code, Some(130));
    let json: Value = serde_json::from_str(&ran.out).unwrap();
    assert_eq!(json["run"]["interrupted"], true);
    for scenario in json["scenarios"].as_array().unwrap() {
        assert_eq!(scenario["search"]["complete"], false);
        assert!(!scenario["search"]["unresolved"].as_array().unwrap().is_empty());
    }
}

#[test]
fn a_budget_ends_a_search() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("endless.yaml");
    fs::write(&path, endless()).unwrap();
    let start = Instant::now();
    let ran: Ran = restpoint().args(["table", "--budget", "0.2"]).arg(&path).output().unwrap().into();
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    assert!(ran.out.contains("the budget ended here"), "{}", ran.out);
    assert!(start.elapsed() < Duration::from_secs(30), "took {:?}", start.elapsed());
}
