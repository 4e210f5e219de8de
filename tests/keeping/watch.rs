//! Files changed in all the ways that editors know, and how often that is told.

use std::fs::{self, OpenOptions};
use std::io::Write;
use std::path::{Path, PathBuf};
use std::sync::mpsc::{Receiver, channel};
use std::time::Duration;

use restpoint::shell::files::sha256;
use restpoint::shell::watch::{Seen, Watch};

use super::write;

/// Long enough for a busy machine to tell a change.
const SOON: Duration = Duration::from_secs(20);

/// Longer than a change takes to be told.
const NEVER: Duration = Duration::from_millis(700);

struct Scene {
    folder: tempfile::TempDir,
    calls: Receiver<()>,
    watch: Watch,
}

impl Scene {
    /// A model of the name with a table beside, both watched.
    fn open(name: &str) -> Self {
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join(name);
        fs::create_dir_all(path.parent().expect("a folder")).expect("a folder");
        write(&path, "first");
        write(&folder.path().join("table.csv"), "1");
        Self::watch(folder, &path)
    }

    fn watch(folder: tempfile::TempDir, path: &Path) -> Self {
        let (sender, calls) = channel();
        let hash = |path: &Path| sha256(&fs::read(path).expect("a file"));
        let table = folder.path().join("table.csv");
        let relative = if path.parent() == Some(folder.path()) { "table.csv" } else { "../table.csv" };
        let seen = Seen { sha256: hash(path), tables: vec![(relative.into(), hash(&table))] };
        let watch = Watch::start(path, &seen, move || _ = sender.send(()));
        assert_eq!(watch.remark(), None);
        Self { folder, calls, watch }
    }

    fn at(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// That a change is told, and not by every event that it consists of: a machine that is busy may stop between two of them for
    /// longer than a change takes, so once more is no mistake.
    fn told(&self, what: &str) {
        assert!(self.calls.recv_timeout(SOON).is_ok(), "{what} is not told");
        let more = std::iter::from_fn(|| self.calls.recv_timeout(NEVER).ok()).take(10).count();
        assert!(more <= 2, "{what} is told {} times", more + 1);
    }

    fn not_told(&self, what: &str) {
        assert!(self.calls.recv_timeout(NEVER).is_err(), "{what} is told");
    }
}

#[test]
fn every_way_of_saving_is_told_and_again() {
    let scene = Scene::open("m.yaml");
    for round in 0..2 {
        write(&scene.at("new"), &format!("renamed {round}"));
        fs::rename(scene.at("new"), scene.at("m.yaml")).expect("a file");
        scene.told("a file renamed into its place");
        write(&scene.at("m.yaml"), &format!("in place {round}"));
        scene.told("a file written in place");
        fs::remove_file(scene.at("m.yaml")).expect("a file");
        write(&scene.at("m.yaml"), &format!("anew {round}"));
        scene.told("a file deleted and made anew");
        fs::rename(scene.at("m.yaml"), scene.at("m.yaml~")).expect("a file");
        write(&scene.at("m.yaml"), &format!("with a backup {round}"));
        scene.told("a file moved away and made anew");
        write(&scene.at("table.csv"), &format!("table {round}"));
        scene.told("a table");
    }
}

#[test]
fn a_burst_is_one_change() {
    let scene = Scene::open("m.yaml");
    let mut file = OpenOptions::new().append(true).open(scene.at("m.yaml")).expect("a file");
    for line in 0..51 {
        writeln!(file, "{line}").expect("a line");
        file.flush().expect("a line");
    }
    scene.told("a burst of 51 lines");
}

#[test]
fn what_changes_nothing_is_not_told() {
    let scene = Scene::open("m.yaml");
    write(&scene.at("other"), "x");
    fs::read(scene.at("m.yaml")).expect("a file");
    // In its place by one step: a file that is written anew is empty for a moment.
    write(&scene.at("new"), "first");
    fs::rename(scene.at("new"), scene.at("m.yaml")).expect("a file");
    scene.not_told("what was there before");
    write(&scene.at("m.yaml"), "second");
    scene.told("what was not");
}

#[test]
fn a_link_is_followed_to_where_it_leads_and_where_it_leads_next() {
    let folder = tempfile::tempdir().expect("a folder");
    let at = |name: &str| folder.path().join(name);
    for name in ["near", "far", "further"] {
        fs::create_dir(at(name)).expect("a folder");
    }
    write(&at("far/real.yaml"), "first");
    write(&at("further/real.yaml"), "elsewhere");
    write(&at("table.csv"), "1");
    std::os::unix::fs::symlink("../far/real.yaml", at("near/m.yaml")).expect("a link");
    let path = at("near/m.yaml");
    let scene = Scene::watch(folder, &path);
    write(&scene.at("far/real.yaml"), "second");
    scene.told("the file behind the link");
    write(&scene.at("far/new"), "third");
    fs::rename(scene.at("far/new"), scene.at("far/real.yaml")).expect("a file");
    scene.told("the file behind the link, replaced");
    std::os::unix::fs::symlink("../further/real.yaml", scene.at("near/new")).expect("a link");
    fs::rename(scene.at("near/new"), scene.at("near/m.yaml")).expect("a link");
    scene.told("the link itself");
    write(&scene.at("further/real.yaml"), "elsewhere again");
    scene.told("the file behind the new link");
    write(&scene.at("table.csv"), "2");
    scene.told("a table in another folder");
}

#[test]
fn a_change_between_reading_and_watching_is_told() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("m.yaml");
    write(&path, "second");
    let (sender, calls) = channel();
    let seen = Seen { sha256: sha256(b"first"), tables: Vec::new() };
    let _watch = Watch::start(&path, &seen, move || _ = sender.send(()));
    assert!(calls.recv_timeout(SOON).is_ok());
}

#[test]
fn without_a_folder_there_is_a_remark_and_no_crash() {
    let watch = Watch::start(Path::new("/no such folder/m.yaml"), &Seen::default(), || {});
    assert_eq!(
        watch.remark(),
        Some("changes of the model file are not noticed: its folder is gone; read it again by hand after a change")
    );
}

#[test]
fn a_watch_that_is_dropped_tells_nothing_more() {
    let Scene { folder, calls, watch } = Scene::open("m.yaml");
    drop(watch);
    // The sender goes with the thread.
    assert!(matches!(calls.recv_timeout(SOON), Err(std::sync::mpsc::RecvTimeoutError::Disconnected)));
    write(&folder.path().join("m.yaml"), "second");
}
