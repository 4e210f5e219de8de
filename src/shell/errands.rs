//! Short work with files that the interface asks for: writing, recording, completing a path, keeping what was tried.
//!
//! Each errand is an effect of `app`, done where it is called and answered with a message. Nothing here waits for more than
//! a disk. To add one: its effect and message in `app`, an arm in [`Errands::run`].

use std::path::{Path, PathBuf};

use super::catalogue::{FOLDER, complete, entries};
use super::files::{folder_of, from_home, name_for_copy, write_whole};
use super::memory::Memory;
use super::models::COMPILED;
use crate::app::catalogue::Entry;
use crate::app::study::World;
use crate::app::{Effect, Msg, Source, Written, text_of};
use crate::model::amend::{Addition, with_scenario};
use crate::model::load::{Files, NoFiles};

/// Does errands.
pub struct Errands {
    memory: Memory,
    /// The file of the model that is open: nothing is written over it.
    model: Option<PathBuf>,
}

impl Errands {
    /// With what is kept between runs.
    pub fn new(memory: Memory) -> Self {
        Self { memory, model: None }
    }

    /// Does one; the answer, where it has any. What is no errand is passed over.
    pub fn run(&mut self, effect: Effect) -> Option<Msg> {
        match effect {
            Effect::Write { path, text, replace } => Some(Msg::Written(self.write(&path, &text, replace))),
            Effect::Record { source, world, addition, path, replace } => {
                Some(Msg::Written(self.record(&source, &world, &addition, &path, replace)))
            }
            Effect::Complete(text) => {
                let completion = complete(&text);
                Some(Msg::Completed(text, completion))
            }
            Effect::Suggest(source) => copy_of(&source).map(Msg::Suggested),
            Effect::Recall(source, world) => {
                self.model = file(&source);
                if let Some(path) = &self.model {
                    self.memory.note_opened(path);
                }
                let session = self.memory.session(&key(&source), &world.original.sha256)?;
                Some(Msg::Recalled(source, session))
            }
            Effect::Keep(source, session) => {
                self.keep(&source, session.as_ref());
                None
            }
            _ => None,
        }
    }

    /// Every model that can be chosen, one after another.
    pub fn list(memory: &Memory, given: &[PathBuf], each: &mut dyn FnMut(Entry)) {
        entries(given, Path::new(FOLDER), &memory.recent(), each);
    }

    fn keep(&self, source: &Source, session: Option<&crate::app::memory::Session>) {
        match session {
            // What cannot be kept is lost with the program, as everything is that was not written.
            Some(session) => drop(self.memory.keep(&key(source), session)),
            None => self.memory.forget(&key(source)),
        }
    }

    fn write(&self, path: &Path, text: &str, replace: bool) -> Written {
        let path = from_home(path);
        if self.is_model(&path) {
            return Written::Failed(format!("{} is the model itself; choose another name", path.display()));
        }
        if !replace && path.is_file() {
            return Written::Taken(path);
        }
        match write_whole(&path, text, replace) {
            Ok(()) => Written::Done(path),
            Err(error) => Written::Failed(format!("{error:#}")),
        }
    }

    fn record(&self, source: &Source, world: &World, addition: &Addition, path: &Path, replace: bool) -> Written {
        let model = file(source);
        let files: Box<dyn Files> = match &model {
            Some(model) => Box::new(folder_of(model)),
            None => Box::new(NoFiles),
        };
        let text = match with_scenario(text_of(&world.original), addition, files.as_ref()) {
            Ok(text) => text,
            Err(refusal) => return Written::Failed(refusal.to_string()),
        };
        let written = self.write(path, &text, replace);
        let Written::Done(path) = written else { return written };
        let is_apart = model.is_some_and(|model| real_folder(&model) != real_folder(&path));
        let needs_tables = is_apart && !world.original.tables.is_empty();
        Written::Recorded { path, scenario: addition.name.clone(), needs_tables }
    }

    fn is_model(&self, path: &Path) -> bool {
        let real = |path: &Path| std::fs::canonicalize(path).ok();
        self.model.as_ref().is_some_and(|model| real(model).is_some_and(|model| real(path) == Some(model)))
    }
}

/// The file of a model, where it has one.
pub fn file(source: &Source) -> Option<PathBuf> {
    match source {
        Source::File(path) => Some(from_home(path)),
        Source::Compiled(_) => None,
    }
}

/// What the work on a model is kept under; one that is compiled in has a place that no file can have.
fn key(source: &Source) -> PathBuf {
    match source {
        Source::File(path) => from_home(path),
        Source::Compiled(index) => {
            Path::new("/dev/null/compiled in").join(COMPILED.get(*index).map_or("", |model| model.name))
        }
    }
}

/// A free name for a copy: beside the file; of one that is compiled in, in the working directory.
fn copy_of(source: &Source) -> Option<PathBuf> {
    match source {
        Source::File(path) => name_for_copy(&from_home(path)),
        Source::Compiled(index) => name_for_copy(Path::new(Path::new(COMPILED.get(*index)?.name).file_name()?)),
    }
}

fn real_folder(path: &Path) -> Option<PathBuf> {
    let folder = path.parent().filter(|folder| !folder.as_os_str().is_empty()).unwrap_or(Path::new("."));
    std::fs::canonicalize(folder).ok()
}
