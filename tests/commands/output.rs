//! Results in files: whole or not at all, and never over what is there without being asked.
#![cfg(unix)]
#![allow(clippy::unwrap_used, reason = "a test fails by panicking")]

use std::fs;
use std::os::unix::fs::{FileTypeExt, PermissionsExt, symlink};
use std::path::Path;

use crate::cli_support::{file, run, word};

const MOOR: &str = "scenarios/harrowmere-moor.yaml";

/// Writes the table to a path: the exit status, and what must be said.
fn write(path: &Path, more: &[&str], code: i32, said: &str) {
    let ran = run(&[&["table", MOOR, "--output", word(path)], more].concat());
    assert_eq!(ran.code, Some(code), "{}: {}", path.display(), ran.err);
    assert!(ran.out.is_empty() && ran.err.contains(said), "{}: {}", path.display(), ran.err);
    assert_eq!(ran.err.is_empty(), said.is_empty(), "{}", ran.err);
}

fn names(folder: &Path) -> Vec<String> {
    let names = folder.read_dir().unwrap().map(|entry| entry.unwrap().file_name().into_string().unwrap());
    let mut names: Vec<String> = names.collect();
    names.sort();
    names
}

#[test]
fn a_new_file_holds_what_would_be_printed() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("table.txt");
    write(&path, &[], 0, "");
    assert_eq!(fs::read_to_string(&path).unwrap(), run(&["table", MOOR]).out);
    assert_eq!(names(folder.path()), ["table.txt"]);
}

#[test]
fn an_old_file_is_replaced_only_by_force() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(folder.path(), "old.txt", "dear to someone");
    fs::set_permissions(&path, fs::Permissions::from_mode(0o640)).unwrap();
    write(&path, &[], 1, "is there already and was left as it is");
    assert_eq!(fs::read_to_string(&path).unwrap(), "dear to someone");
    write(&path, &["--force"], 0, "");
    assert_eq!(fs::read_to_string(&path).unwrap(), run(&["table", MOOR]).out);
    assert_eq!(fs::metadata(&path).unwrap().permissions().mode() & 0o777, 0o640);
    assert_eq!(names(folder.path()), ["old.txt"]);
}

#[test]
fn a_link_stays_and_what_it_names_is_replaced() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(folder.path(), "real.txt", "old");
    let link = folder.path().join("link.txt");
    symlink("real.txt", &link).unwrap();
    write(&link, &[], 1, "is there already");
    assert_eq!(fs::read_to_string(&path).unwrap(), "old");
    write(&link, &["--force"], 0, "");
    assert!(fs::symlink_metadata(&link).unwrap().is_symlink());
    assert_eq!(fs::read_to_string(&path).unwrap(), run(&["table", MOOR]).out);

    let nowhere = folder.path().join("nowhere.txt");
    symlink("missing.txt", &nowhere).unwrap();
    write(&nowhere, &["--force"], 1, "is a link to nothing");
    assert_eq!(names(folder.path()), ["link.txt", "nowhere.txt", "real.txt"]);
}

#[test]
fn what_is_no_file_is_left_alone() {
    let folder = tempfile::tempdir().unwrap();
    for more in [&[][..], &["--force"]] {
        write(folder.path(), more, 1, "is a folder; name a file in it");
        write(Path::new("/dev/null"), more, 1, "/dev/null is no ordinary file");
    }
    assert!(fs::metadata("/dev/null").unwrap().file_type().is_char_device());
    assert!(names(folder.path()).is_empty());
    write(&folder.path().join("missing/table.txt"), &[], 1, "there is no such folder; nothing was changed");
}

#[test]
fn a_folder_that_cannot_be_written_to_is_said() {
    let folder = tempfile::tempdir().unwrap();
    fs::set_permissions(folder.path(), fs::Permissions::from_mode(0o555)).unwrap();
    // Where permissions do not bind us, no one can write to the folder of processes.
    let binds = fs::write(folder.path().join("trial"), "").is_err();
    let path = if binds { folder.path().join("table.txt") } else { Path::new("/proc/table.txt").to_path_buf() };
    write(&path, &[], 1, "table.txt cannot be written: ");
    assert!(!path.exists());
    fs::set_permissions(folder.path(), fs::Permissions::from_mode(0o755)).unwrap();
}

#[test]
fn nothing_is_written_where_nothing_could_be_read() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("table.json");
    let ran = run(&["table", "no-such.yaml", "--format", "json", "--output", word(&path)]);
    assert_eq!(ran.code, Some(1));
    assert!(names(folder.path()).is_empty());
}
