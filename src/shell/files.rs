//! Reading model files and their tables, and writing results whole or not at all.

use std::fs::File;
use std::io::{self, Read, Write};
use std::path::{Path, PathBuf};
use std::sync::Mutex;

use anyhow::{Context, Result, bail};
use atomic_write_file::AtomicWriteFile;
use sha2::{Digest, Sha256};

use crate::model::load::Files;

/// A model's text is refused beyond this; reading stops one byte later.
pub(super) const MODEL_LIMIT: usize = 1 << 20;

/// Names that are tried for a copy.
const COPIES: usize = 1000;

/// A model as it was found.
pub struct Found {
    /// What messages call it.
    pub name: String,
    /// Its bytes, at most one more than a model may have.
    pub bytes: Vec<u8>,
    /// Where its tables are looked for.
    pub tables: Folder,
}

/// Reads a model: a path, or `-` for standard input.
///
/// # Errors
/// If it cannot be read: which file, why, and what to do.
pub fn read_model(path: &Path) -> Result<Found> {
    if path == Path::new("-") {
        let mut bytes = Vec::new();
        io::stdin().lock().take(MODEL_LIMIT as u64 + 1).read_to_end(&mut bytes).context("standard input")?;
        return Ok(Found { name: "standard input".into(), bytes, tables: Folder::at(PathBuf::from(".")) });
    }
    let name = path.display().to_string();
    if path.is_dir() {
        bail!("{name} is a folder; name a model file in it");
    }
    let bytes = read_up_to(path, MODEL_LIMIT).map_err(|error| unreadable(&name, &error))?;
    Ok(Found { name, bytes, tables: folder_of(path) })
}

/// A path as typed: `~/` at its beginning is the home folder, as shells have it.
pub fn from_home(path: &Path) -> PathBuf {
    match (path.strip_prefix("~"), std::env::home_dir()) {
        (Ok(rest), Some(home)) => home.join(rest),
        _ => path.to_path_buf(),
    }
}

/// The folder that a model's tables are relative to.
pub fn folder_of(model: &Path) -> Folder {
    Folder::at(model.parent().unwrap_or(Path::new("")).to_path_buf())
}

fn unreadable(name: &str, error: &io::Error) -> anyhow::Error {
    let hint = match error.kind() {
        io::ErrorKind::NotFound => "check the name; the models that come with restpoint are in scenarios/",
        io::ErrorKind::PermissionDenied => "ask for permission to read it, or read a copy of your own",
        _ => "check the file",
    };
    anyhow::anyhow!("{name} cannot be read: {}; {hint}", plain(error))
}

/// What went wrong, without the number that the system gives it.
fn plain(error: &io::Error) -> String {
    match error.kind() {
        io::ErrorKind::NotFound => "there is no such file".into(),
        io::ErrorKind::PermissionDenied => "permission denied".into(),
        _ => error.to_string(),
    }
}

/// The bytes of an ordinary file, at most one more than `limit`. A pipe or a device, which could keep one waiting for ever, is
/// an error.
pub(super) fn read_ordinary(path: &Path, limit: usize) -> io::Result<Vec<u8>> {
    if path.metadata()?.is_file() {
        return read_up_to(path, limit);
    }
    Err(io::Error::new(io::ErrorKind::InvalidInput, "it is no ordinary file"))
}

fn read_up_to(path: &Path, limit: usize) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    File::open(path)?.take(limit as u64 + 1).read_to_end(&mut bytes)?;
    Ok(bytes)
}

/// The folder that a model's tables are relative to, and what was read from it.
pub struct Folder {
    path: PathBuf,
    read: Mutex<Vec<(String, String)>>,
}

impl Folder {
    fn at(path: PathBuf) -> Self {
        Self { path, read: Mutex::new(Vec::new()) }
    }

    /// Every file that was read, in order: as it was named, and its SHA-256.
    pub fn into_read(self) -> Vec<(String, String)> {
        self.read.into_inner().unwrap_or_else(std::sync::PoisonError::into_inner)
    }
}

impl Files for Folder {
    fn read(&self, path: &str, limit: usize) -> std::result::Result<Vec<u8>, String> {
        let bytes = read_up_to(&self.path.join(path), limit).map_err(|error| plain(&error))?;
        if let Ok(mut read) = self.read.lock()
            && read.iter().all(|(name, _)| name != path)
        {
            read.push((path.to_owned(), sha256(&bytes)));
        }
        Ok(bytes)
    }
}

/// The SHA-256 of some bytes, in hexadecimal digits.
pub fn sha256(bytes: &[u8]) -> String {
    format!("{:x}", Sha256::digest(bytes))
}

/// Why a result may not be written to a path; asked before the work, so that none is lost.
pub fn refusal(path: &Path, replace: bool) -> Option<String> {
    let name = path.display();
    let is_link = path.symlink_metadata().is_ok_and(|found| found.is_symlink());
    match path.metadata() {
        Err(_) if is_link => Some(format!("{name} is a link to nothing; name the file itself")),
        Err(_) => None,
        Ok(found) if found.is_dir() => Some(format!("{name} is a folder; name a file in it")),
        // Renaming a file into its place would do away with a device or a pipe.
        Ok(found) if !found.is_file() => Some(format!("{name} is no ordinary file; write to standard output instead")),
        Ok(_) if replace => None,
        Ok(_) => Some(format!(
            "{name} is there already and was left as it is; choose another name, or add --force to replace it"
        )),
    }
}

/// A free name beside a model for a copy with what was tried in it: `NAME-tried.yaml`, else with the next number.
///
/// `None` where a thousand are taken, or the path has no name.
pub fn name_for_copy(model: &Path) -> Option<PathBuf> {
    let stem = model.file_stem()?.to_string_lossy();
    let ending = model.extension().map_or("yaml".into(), |ending| ending.to_string_lossy());
    // A copy of a copy is numbered, not called tried twice.
    let numbered = stem.rsplit_once("-tried-").filter(|(_, number)| number.bytes().all(|b| b.is_ascii_digit()));
    let stem = stem.strip_suffix("-tried").or(numbered.map(|(stem, _)| stem)).unwrap_or(&stem);
    let name = |number: usize| match number {
        1 => format!("{stem}-tried.{ending}"),
        _ => format!("{stem}-tried-{number}.{ending}"),
    };
    let mut paths = (1..=COPIES).map(|number| model.with_file_name(name(number)));
    paths.find(|path| path.symlink_metadata().is_err())
}

/// Writes a file whole or not at all: beside its place, synced, then renamed into it.
///
/// A symbolic link is followed, so that the file it names is replaced and the link stays.
///
/// # Errors
/// If it is [refused](refusal), or cannot be written.
pub fn write_whole(path: &Path, text: &str, replace: bool) -> Result<()> {
    if let Some(reason) = refusal(path, replace) {
        bail!(reason);
    }
    let target = std::fs::canonicalize(path).unwrap_or_else(|_| path.to_path_buf());
    let written = AtomicWriteFile::open(&target).and_then(|mut file| {
        file.write_all(text.as_bytes())?;
        file.commit()
    });
    let name = path.display();
    written.map_err(|error| anyhow::anyhow!("{name} cannot be written: {}; nothing was changed", unwritable(&error)))
}

fn unwritable(error: &io::Error) -> String {
    match error.kind() {
        io::ErrorKind::NotFound => "there is no such folder".into(),
        _ => plain(error),
    }
}
