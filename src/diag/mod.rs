//! Places in source texts, and messages about them.
//!
//! Everything that is wrong with a file is a [`Diagnostic`]: where, what, what was expected, what to do. Nothing here
//! prints; [`render`](render::render) makes text. To report something new, build a [`Diagnostic`] where it is found.

pub mod cleanse;
pub mod nearest;
pub mod render;
pub(crate) mod wording;

/// A half-open range of bytes in one text.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Default, PartialOrd, Ord)]
pub struct Span {
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

impl Span {
    /// The range from `start` up to, not including, `end`.
    pub const fn new(start: usize, end: usize) -> Self {
        Self { start, end }
    }

    /// The smallest range that holds both.
    #[must_use]
    pub fn to(self, other: Self) -> Self {
        Self { start: self.start.min(other.start), end: self.end.max(other.end) }
    }
}

/// One of the texts in [`Sources`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Default, PartialOrd, Ord)]
pub struct SourceId(pub usize);

/// A range of bytes in one of the sources.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Default, PartialOrd, Ord)]
pub struct Location {
    /// Which text.
    pub source: SourceId,
    /// Where in it.
    pub span: Span,
}

/// A text that was read, under the name that messages call it by.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Source {
    /// What messages call it: the path as given, or `standard input`.
    pub name: String,
    /// The text itself.
    pub text: String,
}

/// The texts that a model was read from: the model file first, then its tables.
#[derive(Clone, Debug, PartialEq, Eq, Default)]
pub struct Sources(Vec<Source>);

impl Sources {
    /// Adds a text and returns its id.
    pub fn add(&mut self, name: impl Into<String>, text: impl Into<String>) -> SourceId {
        self.0.push(Source { name: name.into(), text: text.into() });
        SourceId(self.0.len() - 1)
    }

    /// The text with this id, if there is one.
    pub fn get(&self, id: SourceId) -> Option<&Source> {
        self.0.get(id.0)
    }
}

/// How bad it is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Severity {
    /// The file cannot be used as it stands.
    Error,
    /// The file can be used, but something looks wrong.
    Warning,
}

/// One thing that is wrong, or looks wrong, in a source.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// How bad it is.
    pub severity: Severity,
    /// Where.
    pub at: Location,
    /// What is wrong, as one plain sentence without a full stop; values in double quotes.
    pub message: String,
    /// What was expected there, as it reads after "expected"; shown beside the caret. May be empty.
    pub expected: String,
    /// What to do about it. May be empty.
    pub help: String,
    /// Other places that matter, each with a few words.
    pub related: Vec<(Location, String)>,
}

impl Diagnostic {
    /// An error at a place, saying what is wrong.
    pub fn error(at: Location, message: impl Into<String>) -> Self {
        Self::new(Severity::Error, at, message.into())
    }

    /// A warning at a place, saying what looks wrong.
    pub fn warning(at: Location, message: impl Into<String>) -> Self {
        Self::new(Severity::Warning, at, message.into())
    }

    fn new(severity: Severity, at: Location, message: String) -> Self {
        Self { severity, at, message, expected: String::new(), help: String::new(), related: Vec::new() }
    }

    /// With what was expected there.
    #[must_use]
    pub fn expected(mut self, text: impl Into<String>) -> Self {
        self.expected = text.into();
        self
    }

    /// With what to do about it.
    #[must_use]
    pub fn help(mut self, text: impl Into<String>) -> Self {
        self.help = text.into();
        self
    }

    /// With another place that matters.
    #[must_use]
    pub fn related(mut self, at: Location, text: impl Into<String>) -> Self {
        self.related.push((at, text.into()));
        self
    }
}
