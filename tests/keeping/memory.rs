//! Memory in a folder of its own, damaged and shared.

use std::fs;
use std::os::unix::fs::PermissionsExt;
use std::path::{Path, PathBuf};

use restpoint::app::memory::Session;
use restpoint::shell::files::name_for_copy;
use restpoint::shell::memory::Memory;

use super::{model, write};

fn session(effort: f64) -> Session {
    Session { sha256: "ab".into(), scenario: "base".into(), values: vec![("E".into(), effort)], ..Session::default() }
}

fn files(folder: &Path) -> Vec<PathBuf> {
    let Ok(found) = fs::read_dir(folder) else { return Vec::new() };
    let paths = found.map(|entry| entry.expect("an entry").path());
    paths.flat_map(|path| if path.is_dir() { files(&path) } else { vec![path] }).collect()
}

#[test]
fn work_is_kept_for_the_same_file_only_and_forgotten_on_demand() {
    let folder = tempfile::tempdir().expect("a folder");
    let memory = Memory::at(folder.path().join("state/restpoint"));
    let path = Path::new("/models/velmo.yaml");
    assert_eq!(memory.session(path, "ab"), None);
    memory.keep(path, &session(2.0)).expect("a place");
    memory.keep(path, &session(0.1 + 0.2)).expect("a place");
    assert_eq!(memory.session(path, "ab"), Some(session(0.1 + 0.2)));
    assert_eq!(memory.session(path, "cd"), None);
    assert_eq!(memory.session(Path::new("/models/other.yaml"), "ab"), None);
    memory.forget(path);
    assert_eq!(memory.session(path, "ab"), None);
    assert_eq!(files(folder.path()), [""; 0].map(PathBuf::from));
}

#[test]
fn nobody_else_can_read_it() {
    let folder = tempfile::tempdir().expect("a folder");
    let memory = Memory::at(folder.path().join("state/restpoint"));
    memory.keep(Path::new("/a.yaml"), &session(1.0)).expect("a place");
    memory.keep(Path::new("/a.yaml"), &session(2.0)).expect("a place");
    memory.note_opened(Path::new("/a.yaml"));
    let mode = |path: &Path| path.metadata().expect("there").permissions().mode() & 0o777;
    for path in files(folder.path()) {
        assert_eq!(mode(&path), 0o600, "{}", path.display());
    }
    for path in ["state", "state/restpoint", "state/restpoint/sessions"] {
        assert_eq!(mode(&folder.path().join(path)), 0o700, "{path}");
    }
}

#[test]
fn recent_models_are_those_that_are_there_the_latest_first() {
    let folder = tempfile::tempdir().expect("a folder");
    let memory = Memory::at(folder.path().join("state"));
    let paths: Vec<PathBuf> = (0..25).map(|number| folder.path().join(format!("{number}.yaml"))).collect();
    for path in paths.iter().chain(&paths[7..8]) {
        write(path, &model("T"));
        memory.note_opened(path);
    }
    fs::remove_file(&paths[24]).expect("a file");
    let recent = memory.recent();
    assert_eq!((recent.len(), &recent[0], &recent[1]), (19, &paths[7], &paths[23]));
}

#[test]
fn what_cannot_be_read_is_put_aside_and_not_lost() {
    let folder = tempfile::tempdir().expect("a folder");
    let memory = Memory::at(folder.path().to_path_buf());
    let path = Path::new("/a.yaml");
    memory.keep(path, &session(1.0)).expect("a place");
    memory.note_opened(path);
    let kept = files(folder.path());
    assert_eq!(kept.len(), 2);
    for (number, text) in ["", "{\"format\": 9, \"values\": 7}", "\u{0}\u{1}", "[[[["].iter().enumerate() {
        for file in &kept {
            write(file, text);
        }
        assert_eq!((memory.session(path, "ab"), memory.recent().len()), (None, 0));
        memory.keep(path, &session(number as f64)).expect("a place");
        memory.note_opened(path);
        assert_eq!(memory.session(path, "ab"), Some(session(number as f64)));
        let aside = files(folder.path()).into_iter().filter(|file| file.extension().is_some_and(|end| end == "aside"));
        let aside: Vec<String> = aside.map(|file| fs::read_to_string(file).expect("a text")).collect();
        assert_eq!(aside, [*text, *text]);
    }
}

#[test]
fn a_folder_that_cannot_be_made_is_no_crash() {
    let folder = tempfile::tempdir().expect("a folder");
    let file = folder.path().join("file");
    write(&file, "");
    let memory = Memory::at(file.join("restpoint"));
    memory.note_opened(Path::new("/a.yaml"));
    assert!(memory.keep(Path::new("/a.yaml"), &session(1.0)).is_err());
    assert_eq!(memory.session(Path::new("/a.yaml"), "ab"), None);
}

#[test]
fn programs_at_once_leave_whole_files() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = Path::new("/a.yaml");
    std::thread::scope(|scope| {
        for writer in 0..4 {
            let memory = Memory::at(folder.path().to_path_buf());
            scope.spawn(move || {
                for step in 0..20 {
                    memory.keep(path, &session(f64::from(writer * 100 + step))).expect("a place");
                    memory.note_opened(path);
                    let read = memory.session(path, "ab").expect("a whole session");
                    assert_eq!(read, session(read.values[0].1));
                }
            });
        }
    });
    assert!(files(folder.path()).iter().all(|file| file.extension().is_some_and(|end| end == "json")));
}

#[test]
fn sessions_do_not_pile_up() {
    let folder = tempfile::tempdir().expect("a folder");
    let memory = Memory::at(folder.path().to_path_buf());
    for number in 0..205 {
        memory.keep(Path::new(&format!("/{number}.yaml")), &session(1.0)).expect("a place");
    }
    assert_eq!(files(folder.path()).len(), 200);
    assert!(memory.session(Path::new("/204.yaml"), "ab").is_some());
}

#[test]
fn a_copy_gets_the_next_free_name() {
    let folder = tempfile::tempdir().expect("a folder");
    let at = |name: &str| folder.path().join(name);
    for (model, taken, expected) in [
        ("velmo.yaml", "velmo-tried-3.yaml", "velmo-tried.yaml"),
        ("velmo.yaml", "velmo-tried.yaml", "velmo-tried-2.yaml"),
        ("velmo-tried.yaml", "velmo-tried-2.yaml", "velmo-tried-4.yaml"),
        ("velmo-tried-2.yaml", "velmo-tried.yaml", "velmo-tried-4.yaml"),
        ("moor.yml", "moor.yml", "moor-tried.yml"),
        ("moor", "moor", "moor-tried.yaml"),
        ("untried-2.yaml", "untried-2.yaml", "untried-2-tried.yaml"),
    ] {
        write(&at(taken), "");
        assert_eq!(name_for_copy(&at(model)), Some(at(expected)));
    }
    assert_eq!(name_for_copy(Path::new("/")), None);
}
