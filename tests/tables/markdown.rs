//! Markdown as a reader that is not ours shows it; objects to anything that a name must not make of it.
#![allow(
    dead_code,
    unreachable_pub,
    missing_docs,
    clippy::panic,
    clippy::unwrap_used,
    reason = "a test fails by panicking"
)]

use pulldown_cmark::{Event, Options, Parser, Tag, TagEnd};

/// Markdown as a reader of it sees it.
#[derive(Default)]
pub struct Seen {
    pub headings: Vec<String>,
    /// Each table: rows of cells, the headings first.
    pub tables: Vec<Vec<Vec<String>>>,
    pub paragraphs: Vec<String>,
}

pub fn read(text: &str) -> Seen {
    let mut seen = Seen::default();
    let mut words = String::new();
    for event in Parser::new_ext(text, Options::ENABLE_TABLES | Options::ENABLE_STRIKETHROUGH) {
        match event {
            Event::Start(Tag::Table(_)) => seen.tables.push(Vec::new()),
            Event::Start(Tag::TableHead | Tag::TableRow) => seen.tables.last_mut().unwrap().push(Vec::new()),
            Event::Start(Tag::Heading { .. } | Tag::Paragraph | Tag::TableCell) => words.clear(),
            Event::End(TagEnd::Heading(_)) => seen.headings.push(words.clone()),
            Event::End(TagEnd::Paragraph) => seen.paragraphs.push(words.clone()),
            Event::End(TagEnd::TableCell) => seen.tables.last_mut().unwrap().last_mut().unwrap().push(words.clone()),
            Event::Text(text) => words.push_str(&text),
            Event::Start(Tag::Strong | Tag::Emphasis)
            | Event::End(TagEnd::Strong | TagEnd::Emphasis | TagEnd::Table | TagEnd::TableHead | TagEnd::TableRow) => {}
            other => panic!("{other:?} in {text}"),
        }
    }
    seen
}
