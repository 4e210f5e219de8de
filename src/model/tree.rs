//! A YAML text as a tree of nodes, each with its place.
//!
//! Built from the event stream within the limits below, before anything is interpreted: no keys are known and no numbers
//! read here. Aliases are resolved by sharing, so that a small file cannot grow large in memory; what it would be written
//! out is counted all the same, because everything after this walks it. Start at [`Tree::read`].

use std::collections::HashMap;
use std::rc::Rc;

use unicode_normalization::UnicodeNormalization;

use super::events::{Event, Events, Style, What};
use super::findings::Findings;
use super::messages::Message;
use super::slips;
use crate::diag::cleanse::is_hostile;
use crate::diag::{Diagnostic, Location, SourceId, Span};

/// Maps and lists inside one another.
pub(super) const DEPTH_LIMIT: usize = 64;

/// Keys, values, maps and lists with all aliases written out.
pub(super) const NODE_LIMIT: usize = 100_000;

/// Bytes of keys and values with all aliases written out.
pub(super) const BYTE_LIMIT: usize = 4 << 20;

/// A value, a list or a map.
#[derive(Clone, Debug)]
pub(super) struct Node {
    pub(super) kind: Kind,
    pub(super) at: Location,
    size: Size,
}

#[derive(Clone, Debug)]
pub(super) enum Kind {
    Scalar(Scalar),
    Sequence(Vec<Rc<Node>>),
    Mapping(Vec<Entry>),
    /// Something that was reported and must not be read.
    Broken,
}

/// A single value as YAML unfolded it.
#[derive(Clone, Debug)]
pub(super) struct Scalar {
    pub(super) value: String,
    pub(super) style: Style,
}

impl Scalar {
    /// Whether no quotation marks and no block header stand around it.
    pub(super) fn is_plain(&self) -> bool {
        self.style == Style::Plain
    }
}

/// A key, composed as formulas read names (NFC), and its value.
#[derive(Clone, Debug)]
pub(super) struct Entry {
    pub(super) key: String,
    pub(super) key_at: Location,
    pub(super) value: Rc<Node>,
}

/// How much a node is with its aliases written out.
#[derive(Clone, Copy, Debug, Default)]
struct Size {
    nodes: usize,
    bytes: usize,
    depth: usize,
}

impl Size {
    fn add(&mut self, child: Self) {
        self.nodes = self.nodes.saturating_add(child.nodes);
        self.bytes = self.bytes.saturating_add(child.bytes);
        self.depth = self.depth.max(child.depth + 1);
    }
}

/// The tree of a text, and what was found wrong while it was built.
#[derive(Debug)]
pub(super) struct Tree {
    /// The document; `None` where the text holds none or was refused.
    pub(super) root: Option<Rc<Node>>,
    pub(super) findings: Findings,
}

impl Tree {
    /// Reads a text that holds no hostile characters and is not over-long. A limit passed or a fault of grammar ends the
    /// reading; duplicate keys and entries split by a comma do not.
    pub(super) fn read(text: &str, source: SourceId) -> Self {
        let mut builder =
            Builder { text, source, open: Vec::new(), anchors: HashMap::new(), root: None, found: Findings::default() };
        let ended = builder.run();
        let Builder { root, mut found, .. } = builder;
        match ended {
            Ok(()) => Self { root, findings: found },
            Err(fatal) => {
                found.report(*fatal);
                Self { root: None, findings: found }
            }
        }
    }
}

/// A map or list whose end has not come yet.
struct Open {
    anchor: Option<String>,
    start: usize,
    flow: bool,
    /// Keys and values alternate in a map.
    children: Vec<Rc<Node>>,
    mapping: bool,
    size: Size,
}

struct Builder<'t> {
    text: &'t str,
    source: SourceId,
    open: Vec<Open>,
    /// `None` while the anchored node is open.
    anchors: HashMap<String, Option<Rc<Node>>>,
    root: Option<Rc<Node>>,
    found: Findings,
}

type Step = Result<(), Box<Diagnostic>>;

impl Builder<'_> {
    fn run(&mut self) -> Step {
        for event in Events::new(self.text).into_iter().flatten() {
            match event {
                Ok(event) => self.event(event)?,
                Err(fault) => return Err(Box::new(slips::explain(self.text, self.source, &fault))),
            }
        }
        Ok(())
    }

    fn event(&mut self, event: Event) -> Step {
        let Event { what, anchor, tag, span } = event;
        if let Some(tag) = tag {
            let written = tag.strip_prefix("tag:yaml.org,2002:").map_or(tag.clone(), |short| format!("!!{short}"));
            return self.fail(Message::Tag, span, &[&written]);
        }
        match what {
            What::DocumentStart if self.root.is_some() => self.fail(Message::SecondDocument, span, &[]),
            What::Stream | What::DocumentStart | What::DocumentEnd => Ok(()),
            What::Alias(name) => self.alias(&name, span),
            What::Scalar { value, style } => self.scalar(Scalar { value, style }, anchor, span),
            What::SequenceStart { flow } => self.begin(anchor, span, flow, false),
            What::MappingStart { flow } => self.begin(anchor, span, flow, true),
            What::SequenceEnd | What::MappingEnd => self.end(span),
        }
    }

    fn fail(&self, message: Message, span: Span, values: &[&dyn std::fmt::Display]) -> Step {
        Err(Box::new(message.at(self.location(span), values)))
    }

    fn location(&self, span: Span) -> Location {
        Location { source: self.source, span }
    }

    fn alias(&mut self, name: &str, span: Span) -> Step {
        match self.anchors.get(name) {
            None => self.fail(Message::UnknownAlias, span, &[&name]),
            Some(None) => self.fail(Message::AliasInItself, span, &[&name]),
            Some(Some(node)) => self.place(Rc::clone(node), span),
        }
    }

    fn scalar(&mut self, scalar: Scalar, anchor: Option<String>, span: Span) -> Step {
        let at = self.location(span);
        let hidden = scalar.value.chars().find(|&c| c != '\n' && c != '\t' && is_hostile(c));
        let size = Size { nodes: 1, bytes: scalar.value.len(), depth: 0 };
        let kind = if let Some(c) = hidden {
            self.found.say(Message::HiddenInText, at, &[&name_of(c)]);
            Kind::Broken
        } else {
            Kind::Scalar(scalar)
        };
        let node = Rc::new(Node { kind, at, size });
        if let Some(anchor) = anchor {
            self.anchors.insert(anchor, Some(Rc::clone(&node)));
        }
        self.place(node, span)
    }

    fn begin(&mut self, anchor: Option<String>, span: Span, flow: bool, mapping: bool) -> Step {
        if self.open.len() >= DEPTH_LIMIT {
            return self.fail(Message::TooDeep, span, &[&DEPTH_LIMIT]);
        }
        if let Some(anchor) = &anchor {
            self.anchors.insert(anchor.clone(), None);
        }
        let size = Size { nodes: 1, bytes: 0, depth: 0 };
        self.open.push(Open { anchor, start: span.start, flow, children: Vec::new(), mapping, size });
        Ok(())
    }

    fn end(&mut self, span: Span) -> Step {
        let Some(open) = self.open.pop() else { return Ok(()) };
        let at = self.location(Span::new(open.start, span.end.max(open.start)));
        let kind = if open.mapping { self.mapping(&open)? } else { Kind::Sequence(open.children) };
        let node = Rc::new(Node { kind, at, size: open.size });
        if let Some(anchor) = open.anchor {
            self.anchors.insert(anchor, Some(Rc::clone(&node)));
        }
        self.place(node, span)
    }

    /// Hands a finished node to the map or list that is open, or makes it the root.
    fn place(&mut self, node: Rc<Node>, span: Span) -> Step {
        let Some(parent) = self.open.last_mut() else {
            self.root = Some(node);
            return Ok(());
        };
        parent.size.add(node.size);
        parent.children.push(node);
        let size = parent.size;
        if size.nodes > NODE_LIMIT || size.bytes > BYTE_LIMIT {
            return self.fail(Message::TooManyNodes, span, &[&NODE_LIMIT, &BYTE_LIMIT]);
        }
        if self.open.len() + size.depth > DEPTH_LIMIT + 1 {
            return self.fail(Message::TooDeep, span, &[&DEPTH_LIMIT]);
        }
        Ok(())
    }

    fn mapping(&mut self, open: &Open) -> Result<Kind, Box<Diagnostic>> {
        let mut entries: Vec<Entry> = Vec::with_capacity(open.children.len() / 2);
        let mut seen: HashMap<String, Location> = HashMap::new();
        let mut split = false;
        for pair in open.children.chunks_exact(2) {
            let [key, value] = [&pair[0], &pair[1]];
            let Some(text) = self.key(key)? else { continue };
            let text = normal(text);
            if open.flow && slips::stands_alone(self.text, key, value) {
                // The third part of a formula with two commas was reported with the first two.
                if !split {
                    split = self.alone(&mut entries, key, text);
                }
                continue;
            }
            split = false;
            if let Some(first) = seen.get(&text) {
                self.found.twice(key.at, &text, *first);
                continue;
            }
            seen.insert(text.clone(), key.at);
            entries.push(Entry { key: text, key_at: key.at, value: Rc::clone(value) });
        }
        Ok(Kind::Mapping(entries))
    }

    /// Reports a key without a value. True where it belongs to the value before it, which then must not be read; else it
    /// is kept, so that what it declares is known.
    fn alone(&mut self, entries: &mut Vec<Entry>, key: &Node, text: String) -> bool {
        let broken = |at| Rc::new(Node { kind: Kind::Broken, at, size: Size::default() });
        let split = slips::split(self.text, entries.last(), key, &text);
        if let (Some(diagnostic), Some(previous)) = (split, entries.last_mut()) {
            self.found.report(diagnostic);
            previous.value = broken(previous.value.at);
            return true;
        }
        if let Some((name, value)) = slips::joined(key) {
            self.found.say(Message::ColonSpace, key.at, &[&text, &name, &value]);
            let at = Location { span: Span::new(key.at.span.end - value.len(), key.at.span.end), ..key.at };
            let kind = Kind::Scalar(Scalar { value: value.to_owned(), style: Style::Plain });
            entries.push(Entry {
                key: normal(name),
                key_at: key.at,
                value: Rc::new(Node { kind, at, size: key.size }),
            });
            return false;
        }
        self.found.say(Message::KeyAlone, key.at, &[&text]);
        entries.push(Entry { key: text, key_at: key.at, value: broken(key.at) });
        false
    }

    /// The text of a key; `None` where it was reported.
    fn key<'n>(&mut self, key: &'n Node) -> Result<Option<&'n str>, Box<Diagnostic>> {
        match &key.kind {
            Kind::Scalar(scalar) if scalar.value == "<<" && scalar.style == Style::Plain => {
                Err(Box::new(Message::MergeKey.at(key.at, &[])))
            }
            Kind::Scalar(scalar) if !scalar.value.is_empty() => Ok(Some(&scalar.value)),
            Kind::Broken => Ok(None),
            _ => {
                self.found.say(Message::KeyNotText, key.at, &[]);
                Ok(None)
            }
        }
    }
}

/// A name as formulas read it: composed (NFC), so that the same letters are the same name however they were typed.
pub(super) fn normal(name: &str) -> String {
    if name.is_ascii() { name.to_owned() } else { name.nfc().collect() }
}

/// A character that cannot be shown, as its code point.
pub(super) fn name_of(c: char) -> String {
    format!("U+{:04X}", u32::from(c))
}
