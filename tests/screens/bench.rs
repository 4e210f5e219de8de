//! A bench to try screens on: the state, tasks done at once, what is shown as text, and what was asked of the outside.
//!
//! [`Bench::open`] reads a shipped model, [`Bench::of`] one from a text. [`Bench::press`] takes keys as they are written on a
//! keyboard, `"vv<Down>.<Esc>"`. Where a test is about what happens while work is under way, [`Bench::hold`] puts tasks off
//! until [`Bench::work`]. Searches of the same text are done once for all tests.
#![allow(dead_code, reason = "each file uses its own part")]

use std::collections::VecDeque;
use std::path::{Path, PathBuf};

use restpoint::app::{App, Depth, Effect, JobId, Key, Msg, Size, Source, Task, update};
use restpoint::report::sketch::Style;
use restpoint::shell::tasks::{Means, perform};
use restpoint::shell::workers::Threads;
use restpoint::ui;
use tempfile::TempDir;

/// The interface without a terminal.
pub(crate) struct Bench {
    pub(crate) app: App,
    /// What was asked of the outside and is no task, the last at the end; [`Bench::taken`] empties it.
    pub(crate) asked: Vec<Effect>,
    /// Tasks that are put off.
    waiting: VecDeque<(JobId, Task)>,
    is_held: bool,
    /// Where a model that was given as text lies.
    folder: Option<TempDir>,
}

/// The sizes that screens are tried at: the smallest, the usual one, a large one.
pub(crate) const SIZES: [[u16; 2]; 3] = [[60, 20], [80, 24], [200, 50]];

impl Bench {
    /// No model is open: the chooser.
    pub(crate) fn empty() -> Self {
        let app = App::new(size(SIZES[1]), Style::Unicode, Depth::None);
        Self { app, asked: Vec::new(), waiting: VecDeque::new(), is_held: false, folder: None }
    }

    /// The model of that name in `scenarios`, read and searched, at 80×24.
    pub(crate) fn open(name: &str) -> Self {
        Self::empty().with(&shipped(name))
    }

    /// The model with that text, read and searched.
    pub(crate) fn of(yaml: &str) -> Self {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("m.yaml");
        std::fs::write(&path, yaml).unwrap();
        let mut bench = Self::empty();
        bench.folder = Some(folder);
        bench.with(&path)
    }

    /// Opens a model.
    pub(crate) fn with(mut self, path: &Path) -> Self {
        self.app.edition += 1;
        self.app.reading = Some((Source::File(path.to_path_buf()), self.app.edition));
        self.tell(Msg::Resumed);
        self
    }

    /// The folder of a model that was given as text.
    pub(crate) fn folder(&self) -> &Path {
        self.folder.as_ref().expect("a model given as text").path()
    }

    /// Columns and rows.
    pub(crate) fn at(mut self, columns_rows: [u16; 2]) -> Self {
        self.tell(Msg::Resized(size(columns_rows)));
        self
    }

    /// Only ASCII.
    pub(crate) fn ascii(mut self) -> Self {
        self.app.style = Style::Ascii;
        self.tell(Msg::Resumed);
        self
    }

    /// Something happens; what it asks for is done, and what that asks for.
    pub(crate) fn tell(&mut self, msg: Msg) {
        let mut effects: VecDeque<Effect> = update(&mut self.app, msg).into();
        while let Some(effect) = effects.pop_front() {
            match effect {
                Effect::Ask(id, task) if self.is_held => self.waiting.push_back((id, task)),
                Effect::Ask(id, task) => effects.extend(self.done(id, task)),
                Effect::Stop(id) => self.waiting.retain(|(other, _)| *other != id),
                Effect::Redraw => {}
                other => self.asked.push(other),
            }
        }
    }

    fn done(&mut self, id: JobId, task: Task) -> Vec<Effect> {
        let means = Means { threads: Threads::new(1), stop: &|| false, observer: &|_| {} };
        update(&mut self.app, Msg::Answered(id, perform(task, &means)))
    }

    /// Puts off tasks from now on.
    pub(crate) fn hold(&mut self) {
        self.is_held = true;
    }

    /// Does the tasks that were put off, and no longer puts off any.
    pub(crate) fn work(&mut self) {
        self.is_held = false;
        while let Some((id, task)) = self.waiting.pop_front() {
            for effect in self.done(id, task) {
                match effect {
                    Effect::Ask(id, task) => self.waiting.push_back((id, task)),
                    Effect::Stop(id) => self.waiting.retain(|(other, _)| *other != id),
                    Effect::Redraw => {}
                    other => self.asked.push(other),
                }
            }
        }
    }

    /// How many tasks are put off.
    pub(crate) fn waiting(&self) -> usize {
        self.waiting.len()
    }

    /// Does one of the tasks that are put off; what it asks for is put off.
    pub(crate) fn do_one(&mut self, place: usize) {
        let Some((id, task)) = self.waiting.remove(place) else { return };
        let means = Means { threads: Threads::new(1), stop: &|| false, observer: &|_| {} };
        self.tell(Msg::Answered(id, perform(task, &means)));
    }

    /// What was asked of the outside since the last time.
    pub(crate) fn taken(&mut self) -> Vec<Effect> {
        std::mem::take(&mut self.asked)
    }

    /// Strikes keys: characters stand for themselves, others have their names in angles, as help names them.
    pub(crate) fn press(&mut self, keys: &str) {
        for key in keys_of(keys) {
            self.tell(Msg::Struck(key));
        }
    }

    /// What is shown.
    pub(crate) fn text(&self) -> String {
        ui::text(&self.app)
    }

    /// A line of what is shown.
    pub(crate) fn line(&self, row: usize) -> String {
        self.text().lines().nth(row).unwrap_or_default().to_owned()
    }

    /// The line on what has happened, above the line of keys.
    pub(crate) fn status(&self) -> String {
        let text = self.text();
        text.lines().rev().nth(1).unwrap_or_default().to_owned()
    }

    /// Fails with the whole screen unless it has every one of these.
    #[track_caller]
    pub(crate) fn shows(&self, texts: &[&str]) {
        let shown = self.text();
        for text in texts {
            assert!(shown.contains(text), "no \"{text}\" in\n{shown}");
        }
    }

    /// Fails with the whole screen if it has any of these.
    #[track_caller]
    pub(crate) fn hides(&self, texts: &[&str]) {
        let shown = self.text();
        for text in texts {
            assert!(!shown.contains(text), "\"{text}\" in\n{shown}");
        }
    }
}

/// A model in `scenarios`.
pub(crate) fn shipped(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios").join(format!("{name}.yaml"))
}

pub(crate) fn size([columns, rows]: [u16; 2]) -> Size {
    Size { columns, rows }
}

/// Keys with a name; `<` itself is written `<<>`.
const NAMED: &[Key] = &[
    Key::Up,
    Key::Down,
    Key::Left,
    Key::Right,
    Key::Enter,
    Key::Escape,
    Key::Tab,
    Key::Backspace,
    Key::Delete,
    Key::Home,
    Key::End,
    Key::PageUp,
    Key::PageDown,
    Key::Interrupt,
    Key::Suspend,
    Key::Redraw,
    Key::Char(' '),
    Key::Char('<'),
];

fn keys_of(text: &str) -> Vec<Key> {
    let mut keys = Vec::new();
    let mut rest = text;
    while let Some(c) = rest.chars().next() {
        let (key, length) = match rest.strip_prefix('<').and_then(|name| name.split_once('>')) {
            Some((name, _)) => {
                let key = NAMED.iter().find(|key| key.name() == name);
                (*key.unwrap_or_else(|| panic!("no key <{name}>")), name.len() + 2)
            }
            None => (Key::Char(c), c.len_utf8()),
        };
        keys.push(key);
        rest = &rest[length..];
    }
    keys
}
