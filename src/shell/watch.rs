//! Noticing that a model file, or a table that it names, was changed by another program.
//!
//! The folders are watched, not the files: a file that is saved by renaming a new one into its place takes the watch on the
//! old one with it. Where a file is a symbolic link, so is every folder on the way to what it names. A change counts when
//! nothing more has happened for a moment and the contents differ. Nothing wakes up while nothing happens. Start at
//! [`Watch::start`].

use std::collections::HashSet;
use std::fs;
use std::path::{Path, PathBuf, absolute};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Receiver, SyncSender, sync_channel};
use std::sync::{Arc, Mutex, PoisonError};
use std::thread;
use std::time::{Duration, Instant};

use notify::event::{AccessKind, AccessMode};
use notify::{Config, ErrorKind, Event, EventKind, RecommendedWatcher, RecursiveMode, Watcher};

use super::files::{MODEL_LIMIT, read_ordinary, sha256};
use crate::diag::cleanse::cleanse;
use crate::model::Original;

/// How long nothing must happen before a change counts: editors write in several steps.
const QUIET: Duration = Duration::from_millis(100);

/// When a change is looked at although more goes on happening.
const LONGEST: Duration = Duration::from_secs(2);

/// Bytes of a table that are compared.
const TABLE_LIMIT: usize = 64 << 20;

/// Links that are followed one after another.
const LINKS: usize = 16;

/// What the mount table calls file systems on which other machines' changes are not told.
const NETWORKS: &[&str] =
    &["nfs", "nfs4", "cifs", "smb3", "9p", "afs", "ceph", "fuse.sshfs", "fuse.glusterfs", "virtiofs"];

/// The files of a model as they were read.
#[derive(Clone, Debug, Default)]
pub struct Seen {
    /// SHA-256 of the model file, in hexadecimal digits.
    pub sha256: String,
    /// Name, relative to the model file, and SHA-256 of each table.
    pub tables: Vec<(String, String)>,
}

impl From<&Original> for Seen {
    fn from(original: &Original) -> Self {
        Self { sha256: original.sha256.clone(), tables: original.tables.clone() }
    }
}

/// A watch that lasts until it is dropped.
pub struct Watch {
    stop: Arc<AtomicBool>,
    wake: SyncSender<()>,
    remark: Option<String>,
}

impl Watch {
    /// Calls `changed` after every change of the model file or its tables, beginning with what they were when they were
    /// `seen`: a change between the reading and this call counts. The call comes on a thread of its own.
    ///
    /// Where the system refuses, there is only a [remark](Self::remark).
    pub fn start(model: &Path, seen: &Seen, changed: impl FnMut() + Send + 'static) -> Self {
        let (wake, woken) = sync_channel(1);
        let stop = Arc::new(AtomicBool::new(false));
        let remark = begin(model, seen, changed, &wake, woken, &stop).unwrap_or_else(|refusal| Some(told(&refusal)));
        Self { stop, wake, remark }
    }

    /// What the reader should know of the watch, once: that there is none, or how far it reaches.
    pub fn remark(&self) -> Option<&str> {
        self.remark.as_deref()
    }
}

impl Drop for Watch {
    fn drop(&mut self) {
        self.stop.store(true, Ordering::Relaxed);
        // A full channel wakes the thread just as well.
        let _ = self.wake.try_send(());
    }
}

/// A refusal in words.
fn told(refusal: &notify::Error) -> String {
    let reason = match &refusal.kind {
        ErrorKind::MaxFilesWatch => "the system watches as many files as it may".to_owned(),
        ErrorKind::PathNotFound => "its folder is gone".to_owned(),
        ErrorKind::Io(error) => error.to_string(),
        other => format!("{other:?}"),
    };
    format!("changes of the model file are not noticed: {reason}; read it again by hand after a change")
}

fn begin(
    model: &Path,
    seen: &Seen,
    changed: impl FnMut() + Send + 'static,
    wake: &SyncSender<()>,
    woken: Receiver<()>,
    stop: &Arc<AtomicBool>,
) -> notify::Result<Option<String>> {
    let model = absolute(model).map_err(notify::Error::io)?;
    let files = files_of(&model, seen);
    let names = Arc::new(Mutex::new(HashSet::new()));
    let mut watcher = watcher(Arc::clone(&names), wake.clone())?;
    let refused = follow(&mut watcher, &files, &names);
    let remark = match refused {
        // Without the model's own folder there is no watch; without a table's there is half a one.
        Some((file, error)) if file == model => return Err(error),
        Some((table, _)) => {
            let table = table.display().to_string();
            let table = cleanse(&table);
            Some(format!("changes of {table} are not noticed; read the model again by hand after one"))
        }
        None => remark(&model),
    };
    let known = std::iter::once(&seen.sha256).chain(seen.tables.iter().map(|(_, sha256)| sha256)).cloned().collect();
    run(Watched { files, names, watcher, known }, woken, stop, changed)?;
    Ok(remark)
}

/// The model file, then its tables, with as many bytes as are compared.
fn files_of(model: &Path, seen: &Seen) -> Vec<(PathBuf, usize)> {
    let table = |(name, _): &(String, String)| (model.with_file_name(name), TABLE_LIMIT);
    std::iter::once((model.to_path_buf(), MODEL_LIMIT)).chain(seen.tables.iter().map(table)).collect()
}

type Names = Arc<Mutex<HashSet<PathBuf>>>;

fn watcher(names: Names, wake: SyncSender<()>) -> notify::Result<RecommendedWatcher> {
    let heard = move |event: notify::Result<Event>| {
        let matters = match event {
            Ok(event) => may_change(&event) && (event.need_rescan() || is_ours(&event, &names)),
            Err(_) => true,
        };
        if matters {
            // One call that waits is as good as many.
            let _ = wake.try_send(());
        }
    };
    RecommendedWatcher::new(heard, Config::default().with_follow_symlinks(false))
}

/// Reading is no change; our own would never end.
fn may_change(event: &Event) -> bool {
    match event.kind {
        EventKind::Access(kind) => kind == AccessKind::Close(AccessMode::Write),
        _ => true,
    }
}

fn is_ours(event: &Event, names: &Mutex<HashSet<PathBuf>>) -> bool {
    let names = names.lock().unwrap_or_else(PoisonError::into_inner);
    event.paths.iter().any(|path| names.contains(path))
}

/// A file, and what it names if it is a link, and so on.
fn chain(file: &Path) -> Vec<PathBuf> {
    let mut chain = vec![file.to_path_buf()];
    while chain.len() < LINKS
        && let Some(last) = chain.last()
        && let Ok(target) = fs::read_link(last)
        && let Ok(next) = absolute(last.with_file_name("").join(target))
    {
        chain.push(next);
    }
    chain
}

/// Watches the folders of all files as they are now; says which file could not be, the first.
fn follow(
    watcher: &mut RecommendedWatcher,
    files: &[(PathBuf, usize)],
    names: &Mutex<HashSet<PathBuf>>,
) -> Option<(PathBuf, notify::Error)> {
    let mut refused = None;
    for (file, _) in files {
        for path in chain(file) {
            let Some(folder) = path.parent() else { continue };
            // Watching again what is watched does no harm, and brings back a folder that was made anew.
            if let Err(error) = watcher.watch(folder, RecursiveMode::NonRecursive)
                && refused.is_none()
            {
                refused = Some((file.clone(), error));
            }
            let mut names = names.lock().unwrap_or_else(PoisonError::into_inner);
            names.insert(folder.to_path_buf());
            names.insert(path);
        }
    }
    refused
}

/// Files under watch, and their contents as last told.
struct Watched {
    files: Vec<(PathBuf, usize)>,
    names: Names,
    watcher: RecommendedWatcher,
    known: Vec<String>,
}

impl Watched {
    /// SHA-256 of each file; empty where there is none.
    fn contents(&self) -> Vec<String> {
        let content = |(path, limit): &(PathBuf, usize)| {
            read_ordinary(path, *limit).map(|bytes| sha256(&bytes)).unwrap_or_default()
        };
        self.files.iter().map(content).collect()
    }

    fn has_changed(&mut self) -> bool {
        let contents = self.contents();
        let changed = contents != self.known;
        self.known = contents;
        changed
    }
}

/// Compares and tells on a thread of its own, first what changed before the watch began, until it is to stop.
fn run(
    mut watched: Watched,
    woken: Receiver<()>,
    stop: &Arc<AtomicBool>,
    mut changed: impl FnMut() + Send + 'static,
) -> notify::Result<()> {
    let stop = Arc::clone(stop);
    let work = move || {
        loop {
            if stop.load(Ordering::Relaxed) {
                return;
            }
            if watched.has_changed() {
                changed();
            }
            if woken.recv().is_err() {
                return;
            }
            settle(&woken, &stop);
            follow(&mut watched.watcher, &watched.files, &watched.names);
        }
    };
    thread::Builder::new().name("watch".into()).spawn(work).map(|_| ()).map_err(notify::Error::io)
}

/// Waits until nothing more happens, or for long enough.
fn settle(woken: &Receiver<()>, stop: &AtomicBool) {
    let start = Instant::now();
    while !stop.load(Ordering::Relaxed) && start.elapsed() < LONGEST && woken.recv_timeout(QUIET).is_ok() {}
}

/// That the model lies where changes from elsewhere are not told.
fn remark(model: &Path) -> Option<String> {
    let mounts = read_mounts()?;
    let real = fs::canonicalize(model).unwrap_or_else(|_| model.to_path_buf());
    let kind = file_system(&mounts, &real)?;
    NETWORKS.contains(&kind).then(|| {
        "the model lies on a network drive: changes made on other machines may not be noticed; read it again by hand"
            .to_owned()
    })
}

fn read_mounts() -> Option<String> {
    use std::io::Read;
    let mut text = String::new();
    fs::File::open("/proc/self/mounts").ok()?.take(1 << 20).read_to_string(&mut text).ok()?;
    Some(text)
}

/// The kind of file system that a path lies on, by the table of mounts: device, place, kind, separated by spaces; a space
/// within a place is written `\040`.
fn file_system<'m>(mounts: &'m str, path: &Path) -> Option<&'m str> {
    let fields = |line: &'m str| {
        let mut fields = line.split(' ').skip(1);
        Some((PathBuf::from(fields.next()?.replace("\\040", " ")), fields.next()?))
    };
    let above = mounts.lines().filter_map(fields).filter(|(place, _)| path.starts_with(place));
    // Of two on the same place the later one covers the earlier.
    above.max_by_key(|(place, _)| place.components().count()).map(|(_, kind)| kind)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_innermost_mount_tells_the_file_system() {
        let mounts =
            "/dev/a / ext4 rw 0 0\nsrv:/x /home nfs4 rw 0 0\n//s/my\\040docs /home/my\\040docs cifs rw 0 0\nbroken\n";
        for (path, expected) in [
            ("/m.yaml", Some("ext4")),
            ("/home/m.yaml", Some("nfs4")),
            ("/homes/m.yaml", Some("ext4")),
            ("/home/my docs/m.yaml", Some("cifs")),
            ("m.yaml", None),
        ] {
            assert_eq!(file_system(mounts, Path::new(path)), expected, "{path}");
        }
    }

    #[test]
    fn only_writing_is_a_change() {
        let event = |kind| Event::new(kind);
        assert!(!may_change(&event(EventKind::Access(AccessKind::Open(AccessMode::Any)))));
        assert!(!may_change(&event(EventKind::Access(AccessKind::Close(AccessMode::Read)))));
        assert!(may_change(&event(EventKind::Access(AccessKind::Close(AccessMode::Write)))));
        assert!(may_change(&event(EventKind::Any)));
    }
}
