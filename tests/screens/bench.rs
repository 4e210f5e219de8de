//! A bench to try screens on: the state, tasks done at once, what is shown as text, and what was asked of the outside.
//!
//! Errands are run at once too, on real files; what is kept between runs is kept in a folder of the bench's own.
//! [`Bench::open`] reads a shipped model, [`Bench::of`] one from a text. [`Bench::press`] takes keys as they are written on a
//! keyboard, `"vv<Down>.<Esc>"`. Where a test is about what happens while work is under way, [`Bench::hold`] puts tasks off
//! until [`Bench::work`].
#![allow(dead_code, reason = "each file uses its own part")]

use std::collections::VecDeque;
use std::path::{Path, PathBuf};
use std::rc::Rc;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Color, Modifier};
use restpoint::app::{App, Depth, Effect, JobId, Key, Msg, Size, Source, Task, Written, update};
use restpoint::report::sketch::Style;
use restpoint::shell::errands::Errands;
use restpoint::shell::memory::Memory;
use restpoint::shell::tasks::{Means, perform};
use restpoint::shell::workers::Threads;
use restpoint::ui;
use tempfile::TempDir;

/// The interface without a terminal.
pub(crate) struct Bench {
    pub(crate) app: App,
    /// What was asked of the outside and is no task, the last at the end; [`Bench::taken`] empties it.
    pub(crate) asked: Vec<Effect>,
    /// Whether files may be written; else every one is refused.
    pub(crate) writes: bool,
    errands: Errands,
    memory: Memory,
    /// Where what is kept between runs lies.
    state: Rc<TempDir>,
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
        Self::remembering(Rc::new(tempfile::tempdir().unwrap()))
    }

    /// The same, with what was kept in a folder.
    fn remembering(state: Rc<TempDir>) -> Self {
        let app = App::new(size(SIZES[1]), Style::Unicode, Depth::None);
        let memory = Memory::at(state.path().to_path_buf());
        let errands = Errands::new(memory.clone());
        let (asked, waiting) = (Vec::new(), VecDeque::new());
        Self { app, asked, writes: true, errands, memory, state, waiting, is_held: false, folder: None }
    }

    /// The program is left and started again: nothing is known but what was kept.
    pub(crate) fn restarted(&self) -> Self {
        Self::remembering(Rc::clone(&self.state))
    }

    /// The model of that name in `scenarios`, read and searched, at 80×24.
    pub(crate) fn open(name: &str) -> Self {
        Self::empty().with(&shipped(name))
    }

    /// The model with that text, read and searched.
    pub(crate) fn of(yaml: &str) -> Self {
        Self::empty().reading(yaml)
    }

    /// Opens the model with that text.
    pub(crate) fn reading(mut self, yaml: &str) -> Self {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("m.yaml");
        std::fs::write(&path, yaml).unwrap();
        self.folder = Some(folder);
        self.with(&path)
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
        let effects = update(&mut self.app, msg);
        self.perform(effects);
    }

    fn perform(&mut self, effects: Vec<Effect>) {
        let mut effects = VecDeque::from(effects);
        while let Some(effect) = effects.pop_front() {
            match effect {
                Effect::Ask(id, task) if self.is_held => self.waiting.push_back((id, task)),
                Effect::Ask(id, task) => effects.extend(self.done(id, task)),
                Effect::Stop(id) => self.waiting.retain(|(other, _)| *other != id),
                Effect::Redraw => {}
                other => effects.extend(self.outside(other)),
            }
        }
    }

    fn done(&mut self, id: JobId, task: Task) -> Vec<Effect> {
        let means = Means { threads: Threads::new(1), stop: &|| false, observer: &|_| {}, told: &|_| {} };
        update(&mut self.app, Msg::Answered(id, perform(task, &means)))
    }

    /// What is no task: errands are run, the rest is only noted.
    fn outside(&mut self, effect: Effect) -> Vec<Effect> {
        self.asked.push(effect.clone());
        let mut answers = Vec::new();
        match effect {
            Effect::Write { .. } | Effect::WriteScreen { .. } | Effect::Record { .. } if !self.writes => {
                answers.push(Msg::Written(Written::Failed("nothing may be written here".to_owned())));
            }
            Effect::WriteScreen { path, replace } => {
                let text = self.text();
                answers.extend(self.errands.run(Effect::Write { path, text, replace }));
            }
            Effect::List(listing, given) => {
                Errands::list(&self.memory, &given, &mut |entry| answers.push(Msg::Listed(listing, entry)));
                answers.push(Msg::AllListed(listing));
            }
            errand => answers.extend(self.errands.run(errand)),
        }
        answers.into_iter().flat_map(|answer| update(&mut self.app, answer)).collect()
    }

    /// Puts off tasks from now on.
    pub(crate) fn hold(&mut self) {
        self.is_held = true;
    }

    /// Does the task that was put off first; what it leads to is put off too.
    pub(crate) fn work_once(&mut self) {
        if let Some((id, task)) = self.waiting.pop_front() {
            let effects = self.done(id, task);
            self.perform(effects);
        }
    }

    /// Does the tasks that were put off, and no longer puts off any.
    pub(crate) fn work(&mut self) {
        self.is_held = false;
        while let Some((id, task)) = self.waiting.pop_front() {
            let effects = self.done(id, task);
            self.perform(effects);
        }
    }

    /// How many tasks are put off.
    pub(crate) fn waiting(&self) -> usize {
        self.waiting.len()
    }

    /// Does one of the tasks that are put off; what it asks for is put off.
    pub(crate) fn do_one(&mut self, place: usize) {
        let Some((id, task)) = self.waiting.remove(place) else { return };
        let means = Means { threads: Threads::new(1), stop: &|| false, observer: &|_| {}, told: &|_| {} };
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

    /// Pastes a text.
    pub(crate) fn paste(&mut self, text: &str) {
        self.tell(Msg::Pasted(text.to_owned()));
    }

    /// What is shown.
    pub(crate) fn text(&self) -> String {
        ui::text(&self.app)
    }

    /// What each run of characters looks like that is not plain: row, columns, colour, attributes.
    pub(crate) fn looks(&self) -> String {
        let area = Rect::new(0, 0, self.app.size.columns, self.app.size.rows);
        let mut buffer = Buffer::empty(area);
        ui::view(&self.app, &mut buffer);
        // A blank looks like whatever it stands between.
        let look = |x: u16, y: u16| {
            let cell = &buffer[(x, y)];
            let is_blank = cell.symbol() == " " && !cell.modifier.contains(Modifier::REVERSED);
            (!is_blank).then_some((cell.fg, cell.modifier))
        };
        let mut lines = String::new();
        for y in 0..area.height {
            let mut runs: Vec<(u16, u16, (Color, Modifier))> = Vec::new();
            for x in 0..area.width {
                match (look(x, y), runs.last_mut()) {
                    (None, _) => {}
                    (Some(look), Some((_, end, last))) if *last == look => *end = x,
                    (Some(look), _) => runs.push((x, x, look)),
                }
            }
            runs.retain(|(.., look)| *look != (Color::Reset, Modifier::empty()));
            let run = |(from, to, (colour, modifier)): &(u16, u16, (Color, Modifier))| {
                let colour = if *colour == Color::Reset { String::new() } else { format!(" {colour}") };
                let modifier = if modifier.is_empty() { String::new() } else { format!(" {modifier:?}") };
                format!("{from}-{to}{colour}{modifier}")
            };
            if !runs.is_empty() {
                lines = format!("{lines}{y}: {}\n", runs.iter().map(run).collect::<Vec<_>>().join(", "));
            }
        }
        lines
    }

    /// Colours.
    pub(crate) fn coloured(mut self) -> Self {
        self.app.depth = Depth::Many;
        self
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
