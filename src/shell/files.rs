//! Reading model files and their tables, and writing results whole or not at all.

use std::fs::File;
use std::io::{self, Read, Write};
use std::path::{Path, PathBuf};

use anyhow::{Context, Result, bail};
use atomic_write_file::AtomicWriteFile;

use crate::model::load::Files;

/// A model's text is refused beyond this; reading stops one byte later.
const MODEL_LIMIT: usize = 1 << 20;

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
        return Ok(Found { name: "standard input".into(), bytes, tables: Folder(PathBuf::from(".")) });
    }
    let name = path.display().to_string();
    if path.is_dir() {
        bail!("{name} is a folder; name a model file in it");
    }
    let bytes = read_up_to(path, MODEL_LIMIT).map_err(|error| unreadable(&name, &error))?;
    let folder = path.parent().unwrap_or(Path::new("")).to_path_buf();
    Ok(Found { name, bytes, tables: Folder(folder) })
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

fn read_up_to(path: &Path, limit: usize) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    File::open(path)?.take(limit as u64 + 1).read_to_end(&mut bytes)?;
    Ok(bytes)
}

/// The folder that a model's tables are relative to.
pub struct Folder(PathBuf);

impl Files for Folder {
    fn read(&self, path: &str, limit: usize) -> std::result::Result<Vec<u8>, String> {
        read_up_to(&self.0.join(path), limit).map_err(|error| plain(&error))
    }
}

/// Writes a file whole or not at all: beside its place, synced, then renamed into it.
///
/// A symbolic link is followed, so that the file it names is replaced and the link stays.
///
/// # Errors
/// If the file is there and `replace` is not set, or it cannot be written.
pub fn write_whole(path: &Path, text: &str, replace: bool) -> Result<()> {
    let name = path.display().to_string();
    if path.exists() && !replace {
        bail!("{name} is there already and was left as it is; choose another name, or add --force to replace it");
    }
    let target = std::fs::canonicalize(path).unwrap_or_else(|_| path.to_path_buf());
    let written = AtomicWriteFile::open(&target).and_then(|mut file| {
        file.write_all(text.as_bytes())?;
        file.commit()
    });
    written.map_err(|error| anyhow::anyhow!("{name} cannot be written: {}; nothing was changed", plain(&error)))
}
