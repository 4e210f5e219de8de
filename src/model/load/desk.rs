//! What every section needs while a file is read: the text, the messages so far, and readers of plain values.
//!
//! A reader returns `None` after it has said what is wrong; callers go on with the rest, so that all errors are found in
//! one run. Names and formulas are `names`' business. To read a new kind of plain value, add a method here.

use std::fmt::Display;
use std::rc::Rc;

use super::Files;
use super::keys::{Key, Table};
use crate::diag::nearest::nearest;
use crate::diag::{Diagnostic, Location, Sources};
use crate::model::Placed;
use crate::model::findings::Findings;
use crate::model::messages::{Message, digits};
use crate::model::tree::{Entry, Kind, Node};
use crate::model::yaml::Typed;

/// The reading of one model file.
pub(super) struct Desk<'f> {
    pub(super) files: &'f dyn Files,
    pub(super) sources: Sources,
    findings: Findings,
    /// Something was passed over that an error already reported may have caused.
    doubt: bool,
}

/// The entries of a map of a known kind.
pub(super) struct Fields<'n> {
    entries: &'n [Entry],
    pub(super) at: Location,
}

impl<'n> Fields<'n> {
    pub(super) fn entry(&self, name: &str) -> Option<&'n Entry> {
        self.entries.iter().find(|entry| entry.key == name)
    }

    pub(super) fn get(&self, name: &str) -> Option<&'n Node> {
        self.entry(name).map(|entry| entry.value.as_ref())
    }
}

impl<'f> Desk<'f> {
    pub(super) fn new(files: &'f dyn Files, sources: Sources, findings: Findings) -> Self {
        Self { files, sources, findings, doubt: false }
    }

    /// Whether nothing was wrong and nothing was passed over.
    pub(super) fn is_clean(&self) -> bool {
        self.findings.is_empty() && !self.doubt
    }

    /// Notes that a name was left unjudged, because part of the declarations could not be read.
    pub(super) fn unsure(&mut self) {
        self.doubt = true;
    }

    pub(super) fn say(&mut self, message: Message, at: Location, values: &[&dyn Display]) {
        self.findings.say(message, at, values);
    }

    /// As [`say`](Self::say), with the place of the other of two things that cannot both be.
    pub(super) fn say_both(
        &mut self,
        message: Message,
        at: Location,
        values: &[&dyn Display],
        other: (Location, &str),
    ) {
        self.findings.report(message.at(at, values).related(other.0, other.1));
    }

    pub(super) fn report(&mut self, diagnostic: Diagnostic) {
        self.findings.report(diagnostic);
    }

    /// The candidate that was probably meant; not asked for where no more advice is shown.
    pub(super) fn nearest<'c>(&self, word: &str, candidates: impl IntoIterator<Item = &'c str>) -> Option<&'c str> {
        if self.is_full() { None } else { nearest(word, candidates) }
    }

    pub(super) fn is_full(&self) -> bool {
        self.findings.is_full()
    }

    /// The texts, and everything that was said, in the order of the file.
    pub(super) fn finish(self) -> (Sources, Vec<Diagnostic>) {
        (self.sources, self.findings.into_sorted())
    }

    /// A map with the keys of a table; an empty value is an empty map. `name` is what messages call it.
    pub(super) fn fields<'n>(&mut self, node: &'n Node, table: &Table, name: &str, at: Location) -> Option<Fields<'n>> {
        let entries = if is_null(node) { &[][..] } else { self.mapping(node, name, table)? };
        for entry in entries {
            if !table.keys.iter().any(|key| key.name == entry.key) {
                self.unknown_key(entry, table);
            }
        }
        for key in table.keys.iter().filter(|key| key.required) {
            if !entries.iter().any(|entry| entry.key == key.name) {
                self.say(Message::MissingKey, at, &[&name, &key.name, &key.what, &key.example]);
            }
        }
        Some(Fields { entries, at })
    }

    fn unknown_key(&mut self, entry: &Entry, table: &Table) {
        let near = self.nearest(&entry.key, table.keys.iter().map(|key| key.name));
        if let Some(Key { name, what, .. }) = near.and_then(|near| table.keys.iter().find(|key| key.name == near)) {
            self.say(Message::UnknownKeyNear, entry.key_at, &[&table.name, &entry.key, name, what]);
            return;
        }
        let names: Vec<&str> = table.keys.iter().map(|key| key.name).collect();
        let names =
            if names.is_empty() { "an empty map: {}".to_owned() } else { format!("one of {}", names.join(", ")) };
        self.say(Message::UnknownKey, entry.key_at, &[&table.name, &entry.key, &names]);
    }

    fn mapping<'n>(&mut self, node: &'n Node, name: &str, table: &Table) -> Option<&'n [Entry]> {
        let needed: Vec<&str> = table.keys.iter().filter(|key| key.required).map(|key| key.example).collect();
        let first = || table.keys.first().map_or("", |key| key.example).to_owned();
        let example = if needed.is_empty() { first() } else { needed.join(", ") };
        self.map(node, name, table.form, &format!("write for example {{{example}}}"))
    }

    /// A map whose keys are names of the user's own.
    pub(super) fn map<'n>(&mut self, node: &'n Node, name: &str, what: &str, help: &str) -> Option<&'n [Entry]> {
        match &node.kind {
            Kind::Mapping(entries) => Some(entries),
            Kind::Broken => None,
            _ => {
                self.say(Message::NotAMap, node.at, &[&name, &what, &help]);
                None
            }
        }
    }

    /// The elements of a list.
    pub(super) fn list<'n>(&mut self, node: &'n Node, name: &str, what: &str) -> Option<&'n [Rc<Node>]> {
        match &node.kind {
            Kind::Sequence(nodes) => Some(nodes),
            Kind::Broken => None,
            _ => {
                self.say(Message::NotAList, node.at, &[&name, &what]);
                None
            }
        }
    }

    /// A single value that is not empty.
    pub(super) fn scalar<'n>(&mut self, node: &'n Node, name: &str, what: &str) -> Option<Typed<'n>> {
        match &node.kind {
            Kind::Scalar(scalar) => match scalar.typed() {
                Typed::Null => {
                    let message = if self.is_before_comment(node) { Message::MissingComment } else { Message::Missing };
                    self.say(message, node.at, &[&name, &what]);
                    None
                }
                typed => Some(typed),
            },
            Kind::Broken => None,
            Kind::Sequence(_) | Kind::Mapping(_) => {
                self.say(Message::NotOneValue, node.at, &[&name, &what]);
                None
            }
        }
    }

    /// Whether a comment follows on the line where a value is missing.
    fn is_before_comment(&self, node: &Node) -> bool {
        let source = self.sources.get(node.at.source).map_or("", |source| source.text.as_str());
        source.get(node.at.span.end..).is_some_and(|rest| rest.trim_start_matches([' ', '\t']).starts_with('#'))
    }

    /// Any single value as the text that was written.
    pub(super) fn text(&mut self, node: &Node, name: &str, what: &str) -> Option<Placed<String>> {
        self.scalar(node, name, what)?;
        let Kind::Scalar(scalar) = &node.kind else { return None };
        let text = scalar.value.trim();
        if text.is_empty() {
            self.say(Message::Blank, node.at, &[&name, &what]);
            return None;
        }
        Some(Placed { value: text.to_owned(), at: node.at })
    }

    /// A text of one line.
    pub(super) fn line(&mut self, node: &Node, name: &str, what: &str) -> Option<Placed<String>> {
        let text = self.text(node, name, what)?;
        if text.value.contains('\n') {
            self.say(Message::SeveralLines, node.at, &[&name]);
            return None;
        }
        Some(text)
    }

    /// An optional text.
    pub(super) fn note(&mut self, fields: &Fields<'_>) -> Option<String> {
        let node = fields.get("note")?;
        self.text(node, "\"note\"", "a text").map(|text| text.value)
    }

    /// A finite number.
    pub(super) fn number(&mut self, node: &Node, name: &str) -> Option<f64> {
        match self.scalar(node, name, "a number")? {
            Typed::Number(value) if value.is_finite() => Some(value),
            Typed::Number(_) => {
                let Kind::Scalar(scalar) = &node.kind else { return None };
                self.say(Message::NotFinite, node.at, &[&name, &scalar.value]);
                None
            }
            Typed::Text(text) => {
                let plain = matches!(&node.kind, Kind::Scalar(scalar) if scalar.is_plain());
                let (message, advice) = super::numbers::why_not_a_number(text, plain);
                self.say(message, node.at, &[&name, &text, &advice]);
                None
            }
            Typed::Bool(value) => {
                self.say(Message::NotANumber, node.at, &[&name, &value]);
                None
            }
            Typed::Null => None,
        }
    }

    /// A number above zero.
    pub(super) fn positive(&mut self, node: &Node, name: &str) -> Option<f64> {
        let value = self.number(node, name)?;
        if value > 0.0 {
            return Some(value);
        }
        self.say(Message::NotPositive, node.at, &[&name, &digits(value)]);
        None
    }

    /// A number that is not negative.
    pub(super) fn not_negative(&mut self, node: &Node, name: &str) -> Option<f64> {
        let value = self.number(node, name)?;
        if value >= 0.0 {
            return Some(value);
        }
        self.say(Message::Negative, node.at, &[&name, &digits(value)]);
        None
    }

    /// Two numbers in a list.
    pub(super) fn pair(&mut self, node: &Node, name: &str) -> Option<[f64; 2]> {
        let what = "two numbers, low then high";
        let nodes = self.list(node, name, what)?;
        let [low, high] = nodes else {
            let advice = "two numbers in brackets, with decimal points: [0.5, 1.5]";
            self.say(Message::NotAPair, node.at, &[&name, &what, &advice]);
            return None;
        };
        let (low, high) = (self.number(low, name), self.number(high, name));
        Some([low?, high?])
    }

    /// True or false.
    pub(super) fn flag(&mut self, node: &Node, name: &str) -> Option<bool> {
        if let Typed::Bool(value) = self.scalar(node, name, "true or false")? {
            return Some(value);
        }
        let Kind::Scalar(scalar) = &node.kind else { return None };
        self.say(Message::NotAFlag, node.at, &[&name, &scalar.value]);
        None
    }

    /// One of a few words, as its index.
    pub(super) fn word(&mut self, node: &Node, name: &str, words: &[&str]) -> Option<usize> {
        let choices = words.join(" or ");
        let text = self.text(node, name, &choices)?;
        let found = words.iter().position(|&word| word == text.value);
        if found.is_none() {
            self.say(Message::NotAWord, node.at, &[&name, &text.value, &choices]);
        }
        found
    }
}

/// Whether nothing stands there.
pub(super) fn is_null(node: &Node) -> bool {
    matches!(&node.kind, Kind::Scalar(scalar) if scalar.typed() == Typed::Null)
}
