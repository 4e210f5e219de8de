//! The files that are kept between runs: models opened recently, and for each model the work that no file holds yet.
//!
//! They lie in the folder for state that the XDG base directory specification names. Each is written whole and readable by its
//! owner alone; of two programs at once the last one wins. What cannot be read is put aside, not overwritten, and what
//! cannot be kept is not spoken of: nothing here is needed to go on. Texts are made and read by `app::memory`.

use std::ffi::OsString;
use std::fs::{self, DirBuilder};
use std::io::{self, Write};
use std::path::{Path, PathBuf};
use std::time::SystemTime;

use atomic_write_file::OpenOptions;

use super::files::{read_ordinary, sha256};
use crate::app::memory::{Session, TEXT_LIMIT, read_recent, read_session, recent_text, session_text, with_latest};

/// Sessions that are kept; the oldest go.
const SESSIONS: usize = 200;

/// What is kept between runs; nothing, where there is no place for it.
#[derive(Clone, Debug)]
pub struct Memory {
    folder: Option<PathBuf>,
}

impl Memory {
    /// Where the environment says: below `XDG_STATE_HOME`, else below the home folder.
    pub fn open() -> Self {
        Self { folder: place(std::env::var_os("XDG_STATE_HOME"), std::env::home_dir()) }
    }

    /// In a folder of the caller's.
    pub fn at(folder: PathBuf) -> Self {
        Self { folder: Some(folder) }
    }

    /// Models opened recently that are still there, the latest first.
    pub fn recent(&self) -> Vec<PathBuf> {
        self.noted().into_iter().map(PathBuf::from).filter(|path| path.is_file()).collect()
    }

    /// Notes that a model was opened.
    pub fn note_opened(&self, model: &Path) {
        let Some((list, path)) = self.list().zip(absolute(model)) else { return };
        let text = recent_text(&with_latest(&self.noted(), &path));
        // Without a list of models one names them oneself.
        let _ = write(&list, &text, |old| read_recent(old).is_some());
    }

    /// The work on a model, if it is the same to the byte.
    pub fn session(&self, model: &Path, sha256: &str) -> Option<Session> {
        let path = absolute(model)?;
        let (kept_for, session) = read_session(&text(&self.file(&path)?)?)?;
        (kept_for == path && session.sha256 == sha256).then_some(session)
    }

    /// Keeps the work on a model.
    ///
    /// # Errors
    ///
    /// If it could not be written, or is too much; where there is no place for it, that is no error.
    pub fn keep(&self, model: &Path, session: &Session) -> io::Result<()> {
        let Some(path) = absolute(model) else { return Ok(()) };
        let Some(file) = self.file(&path) else { return Ok(()) };
        let text = session_text(&path, session).ok_or(io::ErrorKind::FileTooLarge)?;
        let is_new = !file.exists();
        write(&file, &text, |old| read_session(old).is_some())?;
        if is_new && let Some(folder) = file.parent() {
            prune(folder);
        }
        Ok(())
    }

    /// Forgets the work on a model.
    pub fn forget(&self, model: &Path) {
        if let Some(file) = absolute(model).and_then(|path| self.file(&path)) {
            // What is not there is forgotten.
            let _ = fs::remove_file(file);
        }
    }

    fn list(&self) -> Option<PathBuf> {
        Some(self.folder.as_ref()?.join("recent.json"))
    }

    fn noted(&self) -> Vec<String> {
        self.list().and_then(|list| read_recent(&text(&list)?)).unwrap_or_default()
    }

    /// A file a model, named after its path in a form that every file system takes.
    fn file(&self, path: &str) -> Option<PathBuf> {
        let name = format!("{:.32}.json", sha256(path.as_bytes()));
        Some(self.folder.as_ref()?.join("sessions").join(name))
    }
}

/// Writes a file whole. What stands in its place and is not ours is put aside.
fn write(file: &Path, text: &str, is_ours: impl Fn(&str) -> bool) -> io::Result<()> {
    let (mut options, mut folders) = (OpenOptions::new(), DirBuilder::new());
    private(&mut options, &mut folders);
    if let Some(folder) = file.parent() {
        folders.recursive(true).create(folder)?;
    }
    if file.exists() && !self::text(file).is_some_and(|old| is_ours(&old)) {
        fs::rename(file, file.with_extension("aside"))?;
    }
    let mut open = options.open(file)?;
    open.write_all(text.as_bytes())?;
    open.commit()
}

/// New files and folders for their owner alone, for the values of an unpublished model are in them.
#[cfg(unix)]
fn private(files: &mut OpenOptions, folders: &mut DirBuilder) {
    use atomic_write_file::unix::OpenOptionsExt;
    use std::os::unix::fs::{DirBuilderExt, OpenOptionsExt as _};
    files.mode(0o600).preserve_mode(false);
    folders.mode(0o700);
}

/// Where the system has no such permissions, the home folder's rules hold.
#[cfg(not(unix))]
fn private(_files: &mut OpenOptions, _folders: &mut DirBuilder) {}

/// The folder of this program below that for state. A path that is not absolute is to be ignored (XDG base directory
/// specification), and without a home there is none.
fn place(state: Option<OsString>, home: Option<PathBuf>) -> Option<PathBuf> {
    let given = state.map(PathBuf::from).filter(|path| path.is_absolute());
    let usual = || home.filter(|path| path.is_absolute()).map(|home| home.join(".local/state"));
    Some(given.or_else(usual)?.join("restpoint"))
}

/// A model's path from the root, links kept; `None` where it is no Unicode text.
fn absolute(model: &Path) -> Option<String> {
    std::path::absolute(model).ok()?.to_str().map(str::to_owned)
}

fn text(file: &Path) -> Option<String> {
    String::from_utf8(read_ordinary(file, TEXT_LIMIT).ok()?).ok()
}

/// Removes the oldest sessions beyond as many as are kept.
fn prune(folder: &Path) {
    let Ok(found) = fs::read_dir(folder) else { return };
    let age = |path: &Path| path.metadata().and_then(|found| found.modified()).unwrap_or(SystemTime::UNIX_EPOCH);
    let paths = found.map_while(Result::ok).map(|entry| entry.path());
    let sessions = paths.filter(|path| path.extension().is_some_and(|extension| extension == "json"));
    let mut sessions: Vec<_> = sessions.map(|path| (age(&path), path)).collect();
    sessions.sort();
    let excess = sessions.len().saturating_sub(SESSIONS);
    for (_, path) in &sessions[..excess] {
        // Another program may have removed it.
        let _ = fs::remove_file(path);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_folder_is_where_the_specification_says() {
        for (state, home, expected) in [
            (Some("/s"), Some("/h"), Some("/s/restpoint")),
            (Some("/s"), None, Some("/s/restpoint")),
            (None, Some("/h"), Some("/h/.local/state/restpoint")),
            (Some("s"), Some("/h"), Some("/h/.local/state/restpoint")),
            (Some(""), Some("/h"), Some("/h/.local/state/restpoint")),
            (Some("../s"), None, None),
            (None, Some("h"), None),
            (None, None, None),
        ] {
            let found = place(state.map(Into::into), home.map(Into::into));
            assert_eq!(found, expected.map(PathBuf::from), "{state:?} {home:?}");
        }
    }

    #[test]
    fn without_a_place_nothing_is_kept_and_nothing_is_said() {
        let memory = Memory { folder: None };
        memory.note_opened(Path::new("/a.yaml"));
        assert!(memory.keep(Path::new("/a.yaml"), &Session::default()).is_ok());
        assert_eq!(memory.session(Path::new("/a.yaml"), ""), None);
        assert_eq!(memory.recent(), [""; 0].map(PathBuf::from));
        memory.forget(Path::new("/a.yaml"));
    }
}
