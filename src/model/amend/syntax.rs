//! A model file's text as nodes with the bytes that each takes, aliases left as they are written.
//!
//! `tree` shares the node that an alias names, and with it the place; here a node says where it stands itself. Nothing is
//! checked: the text has been read by `load` before, within all limits. Start at [`read`].

use crate::diag::Span;
use crate::model::events::{Events, Style, What};
use crate::model::tree::{DEPTH_LIMIT, normal};

/// A value, a list, a map or an alias, with all that stands between its first and its last byte.
#[derive(Debug)]
pub(super) struct Node {
    pub(super) kind: Kind,
    /// Anchor included.
    pub(super) span: Span,
}

#[derive(Debug)]
pub(super) enum Kind {
    Scalar { value: String, style: Style },
    Alias,
    Sequence { flow: bool, items: Vec<Node> },
    Mapping { flow: bool, entries: Vec<(Node, Node)> },
}

/// A whole text.
#[derive(Debug)]
pub(super) struct Document {
    pub(super) root: Node,
    /// Where the document ends: at its end mark, or the end of the text.
    pub(super) end: usize,
}

impl Node {
    /// The value of a key, composed as the loader reads it.
    pub(super) fn get(&self, name: &str) -> Option<&(Node, Node)> {
        let Kind::Mapping { entries, .. } = &self.kind else { return None };
        entries.iter().find(|(key, _)| matches!(&key.kind, Kind::Scalar { value, .. } if normal(value) == name))
    }

    /// One past the last byte that it takes. A block map ends, for the parser, only where the next thing begins.
    pub(super) fn last(&self) -> usize {
        match &self.kind {
            Kind::Mapping { flow: false, entries } => {
                entries.last().map_or(self.span.end, |(key, value)| key.last().max(value.last()))
            }
            Kind::Sequence { flow: false, items } => items.last().map_or(self.span.end, Node::last),
            _ => self.span.end,
        }
    }

    /// Whether its last line is the last of a block scalar, whose breaks are part of it.
    pub(super) fn ends_in_block_scalar(&self) -> bool {
        match &self.kind {
            Kind::Scalar { style, .. } => matches!(style, Style::Literal | Style::Folded),
            Kind::Mapping { flow: false, entries } => {
                entries.last().is_some_and(|(_, value)| value.ends_in_block_scalar())
            }
            Kind::Sequence { flow: false, items } => items.last().is_some_and(Node::ends_in_block_scalar),
            _ => false,
        }
    }
}

/// A map or list whose end has not come yet.
struct Open {
    start: usize,
    flow: bool,
    mapping: bool,
    children: Vec<Node>,
}

impl Open {
    fn close(self, end: usize) -> Node {
        let flow = self.flow;
        let kind = if self.mapping {
            let mut entries = Vec::with_capacity(self.children.len() / 2);
            let mut children = self.children.into_iter();
            while let (Some(key), Some(value)) = (children.next(), children.next()) {
                entries.push((key, value));
            }
            Kind::Mapping { flow, entries }
        } else {
            Kind::Sequence { flow, items: self.children }
        };
        Node { kind, span: Span::new(self.start, end) }
    }
}

/// The only document of a text; `None` where the parser stops early or there is none.
pub(super) fn read(text: &str) -> Option<Document> {
    let mut open: Vec<Open> = Vec::new();
    let (mut root, mut end) = (None, text.len());
    for event in Events::new(text)? {
        let event = event.ok()?;
        let span = event.span;
        let node = match event.what {
            What::SequenceStart { flow } | What::MappingStart { flow } if open.len() < DEPTH_LIMIT => {
                let mapping = matches!(event.what, What::MappingStart { .. });
                open.push(Open { start: span.start, flow, mapping, children: Vec::new() });
                continue;
            }
            What::SequenceStart { .. } | What::MappingStart { .. } => return None,
            What::SequenceEnd | What::MappingEnd => open.pop()?.close(span.end),
            What::Scalar { value, style } => Node { kind: Kind::Scalar { value, style }, span },
            What::Alias(_) => Node { kind: Kind::Alias, span },
            What::DocumentEnd => {
                end = span.start;
                continue;
            }
            What::DocumentStart | What::Stream => continue,
        };
        match open.last_mut() {
            Some(parent) => parent.children.push(node),
            None => root = Some(node),
        }
    }
    Some(Document { root: root?, end })
}
