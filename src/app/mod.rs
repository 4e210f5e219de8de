//! The interface without a terminal: its state, what the user wants, what has to be done outside.
//!
//! [`App`] is plain data. [`keymap`] turns a key into an [`Action`], [`update()`] alone changes the state and says in
//! [`Effect`]s what is to be done outside, `ui` draws a shared reference. What takes time is a [`Task`]: after every change
//! [`wants`](wants::wants) says what the screen needs, and the [`Desk`] asks for what is neither known nor under way and
//! stops what nobody needs any more. To add a screen: a [`Screen`], its keys, its file in `screens`, its tasks in `wants`,
//! its drawing in `ui`.

pub mod action;
pub mod behind;
pub mod beside;
pub mod catalogue;
pub mod desk;
pub mod geometry;
pub mod interactions;
pub mod key;
pub mod keymap;
pub mod knock;
pub mod memory;
pub mod response;
pub mod saved;
pub mod sketch;
pub mod study;
pub mod task;
pub mod trial;
mod update;
pub mod wants;

use std::path::PathBuf;
use std::sync::Arc;

use crate::diag::{Diagnostic, Sources};
use crate::model::Original;
use crate::model::amend::Addition;
use crate::report::sketch::Style;

pub use action::Action;
pub use desk::{Desk, JobId};
pub use geometry::Size;
pub use key::Key;
pub use study::Study;
pub use task::{Answer, Task};
pub use update::update;

/// What is shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Screen {
    /// Which model?
    Chooser,
    /// Which steady states, and what is each like?
    Equilibria,
    /// What changes from one scenario to another?
    SideBySide,
    /// Who acts on whom?
    Interactions,
    /// What happens after a knock?
    Knock,
    /// What if a value were another?
    Values,
    /// What becomes of the steady states as a control varies, and where is the edge?
    Response,
}

/// How many colours a terminal can show. Colour only repeats what signs and words say.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Depth {
    /// None: bold, faint and reversed only.
    None,
    /// The eight of old.
    Eight,
    /// 256.
    Many,
    /// Any.
    Any,
}

/// What lies over the screen.
#[derive(Clone, Debug, PartialEq)]
pub enum Dialog {
    /// The keys of the screen below.
    Help {
        /// Lines scrolled past.
        from: usize,
    },
    /// Something to be read: what is wrong with a file.
    Message {
        /// Its heading.
        title: String,
        /// Its lines, harmless.
        lines: Vec<String>,
        /// Lines scrolled past.
        from: usize,
    },
    /// A text that is being typed.
    Entry(Entry),
}

/// A text that is being typed, and what for.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// What for.
    pub purpose: Purpose,
    /// The text so far.
    pub text: String,
    /// Bytes before the cursor, on a border of characters.
    pub cursor: usize,
    /// What is wrong with it, or what it could go on as.
    pub hint: String,
    /// Whether the text is a suggestion: what is typed takes its place.
    pub suggested: bool,
    /// The text as it was when its file was found to be there already: taken once more, it replaces the file.
    pub replaces: Option<String>,
}

/// What a typed text is for.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Purpose {
    /// The path of a model to open.
    Open,
    /// The value of the parameter that is selected.
    Value,
    /// The file that the table behind the screen is written to.
    Write,
    /// The file that the screen is written to as text.
    WriteScreen,
    /// The name of the new scenario.
    Record,
    /// The file that the copy with a new scenario of this name is written to.
    RecordTo(String),
}

/// What is being moved with the arrows.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Hold {
    /// The point.
    Point,
    /// The window of the sketch.
    Window,
}

/// One line about what has happened.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Notice {
    /// What.
    pub text: String,
    /// Whether it went wrong.
    pub is_fault: bool,
}

/// Everything that the interface knows.
#[derive(Clone, Debug)]
pub struct App {
    /// Of the terminal.
    pub size: Size,
    /// Which characters it can show.
    pub style: Style,
    /// How many colours it can show.
    pub depth: Depth,
    /// What is shown.
    pub screen: Screen,
    /// What lies over it.
    pub dialog: Option<Dialog>,
    /// What was typed and is being written: it comes back where that fails.
    pub sent: Option<Entry>,
    /// A free name for a copy of the model file.
    pub suggestion: Option<PathBuf>,
    /// Models to choose from.
    pub chooser: Chooser,
    /// The model that is open.
    pub study: Option<Study>,
    /// The model that is being read.
    pub reading: Option<(Source, u64)>,
    /// The last number that was given to a reading or to tried values.
    pub edition: u64,
    /// What is known, and what is under way.
    pub desk: Desk,
    /// What has happened last.
    pub notice: Option<Notice>,
    /// Seconds that the search of one scenario may take.
    pub budget: f64,
    /// Parameters that are set for the whole session, by name, over file and scenario.
    pub set: Vec<(String, f64)>,
    /// The only scenarios that are shown, by name; all where there are none.
    pub only: Vec<String>,
    /// The copy that was recorded last, and its new scenario.
    pub copy: Option<(PathBuf, String)>,
}

/// Models to choose from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Chooser {
    /// In the order shown.
    pub entries: Vec<catalogue::Entry>,
    /// The one that is selected.
    pub chosen: usize,
    /// The first that is shown.
    pub from: usize,
    /// The last number that was given to a listing; 0 before the first.
    pub listing: u64,
    /// Whether that listing goes on.
    pub is_listing: bool,
}

/// Where a model comes from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Source {
    /// A file.
    File(PathBuf),
    /// One that is compiled in, by its place in the list of those.
    Compiled(usize),
}

/// What came of reading a model.
#[derive(Clone, Debug)]
pub enum Read {
    /// A sound model, ready to be searched.
    Ready(Arc<study::World>),
    /// Everything that is wrong with it.
    Wrong(Sources, Vec<Diagnostic>),
    /// It could not be read at all, and why.
    Unreadable(String),
}

/// What can happen.
#[derive(Clone, Debug)]
pub enum Msg {
    /// A key was struck.
    Struck(Key),
    /// A text was pasted.
    Pasted(String),
    /// The terminal has another size.
    Resized(Size),
    /// A job is done.
    Answered(JobId, Answer),
    /// A job has found something, and goes on.
    Partly(JobId, Answer),
    /// A search has come further: faces and boxes in all.
    Advanced(JobId, crate::analysis::equilibria::Progress),
    /// A file was written, or was not.
    Written(Written),
    /// What a typed path could become.
    Completed(String, catalogue::Completion),
    /// A free name for a copy of the model file.
    Suggested(PathBuf),
    /// A model that can be chosen, of a listing.
    Listed(u64, catalogue::Entry),
    /// There are no more.
    AllListed(u64),
    /// What was tried on a model before and is in no file.
    Recalled(Source, memory::Session),
    /// Something that the user should know of the outside.
    Remarked(String),
    /// The model file, or a table that it names, is another than it was.
    Changed,
    /// The program goes on after a pause.
    Resumed,
}

/// What came of writing a file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Written {
    /// It is there.
    Done(PathBuf),
    /// The copy of a model is there.
    Recorded {
        /// Where.
        path: PathBuf,
        /// Its new scenario.
        scenario: String,
        /// Whether the model names tables that are not beside the copy.
        needs_tables: bool,
    },
    /// There was a file of that name already; it was left as it is.
    Taken(PathBuf),
    /// It could not be written, and why.
    Failed(String),
}

/// What is to be done outside.
#[derive(Clone, Debug)]
pub enum Effect {
    /// A job; its answer is a [`Msg::Answered`].
    Ask(JobId, Task),
    /// A job is to end soon; where it is awaited still, it answers with what it has.
    Stop(JobId),
    /// Writes a text to a file; to one that is there only where it may be replaced.
    Write {
        /// Where.
        path: PathBuf,
        /// What.
        text: String,
        /// Whether a file that is there may be replaced.
        replace: bool,
    },
    /// Writes the present screen as text.
    WriteScreen {
        /// Where.
        path: PathBuf,
        /// Whether a file that is there may be replaced.
        replace: bool,
    },
    /// Writes a copy of a model file with one more scenario.
    Record {
        /// Where the model comes from.
        source: Source,
        /// The model.
        world: Arc<study::World>,
        /// The scenario.
        addition: Addition,
        /// Where the copy goes.
        path: PathBuf,
        /// Whether a file that is there may be replaced.
        replace: bool,
    },
    /// Completes a path.
    Complete(String),
    /// Finds a free name for a copy of a model file.
    Suggest(Source),
    /// Lists the models that can be chosen, beginning with those given; the number comes back with each.
    List(u64, Vec<PathBuf>),
    /// Notes that a model was opened, and brings back what was tried on it before.
    Recall(Source, Arc<study::World>),
    /// From now on says when this model changes.
    Watch(Source, Arc<study::World>),
    /// Keeps what was tried and not saved; nothing to keep where there is nothing.
    Keep(Source, Option<memory::Session>),
    /// Draws all anew.
    Redraw,
    /// Gives the terminal back and stops the process until it goes on.
    Suspend,
    /// Leaves the program.
    Leave,
}

impl App {
    /// Before anything is known: the chooser, or where a model was named, its equilibria.
    pub fn new(size: Size, style: Style, depth: Depth) -> Self {
        Self {
            size,
            style,
            depth,
            screen: Screen::Chooser,
            dialog: None,
            sent: None,
            suggestion: None,
            copy: None,
            chooser: Chooser::default(),
            study: None,
            reading: None,
            edition: 0,
            desk: Desk::default(),
            notice: None,
            budget: 10.0,
            set: Vec::new(),
            only: Vec::new(),
        }
    }

    /// What is being moved, where the screen has a sketch.
    pub fn hold(&self) -> Option<Hold> {
        let study = self.study.as_ref()?;
        matches!(self.screen, Screen::Equilibria | Screen::SideBySide | Screen::Values)
            .then_some(study.sketch.hold)
            .flatten()
    }

    /// Says something on the line below.
    pub fn say(&mut self, text: impl Into<String>) {
        self.notice = Some(Notice { text: text.into(), is_fault: false });
    }

    /// Says on the line below what went wrong.
    pub fn complain(&mut self, text: impl Into<String>) {
        self.notice = Some(Notice { text: text.into(), is_fault: true });
    }
}

impl std::fmt::Display for Source {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Source::File(path) => write!(formatter, "{}", path.display()),
            Source::Compiled(_) => write!(formatter, "compiled in"),
        }
    }
}

/// The text of a model's file, as it was read.
pub fn text_of(original: &Original) -> &str {
    original.model.sources.get(crate::diag::SourceId(0)).map_or("", |source| &source.text)
}
