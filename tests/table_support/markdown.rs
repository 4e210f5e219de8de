//! What a reader of Markdown sees of a table.

use pulldown_cmark::{Event, Options, Parser, Tag, TagEnd};

/// Headings, and rows of cells of each table, as a reader of Markdown sees them.
pub fn read_markdown(text: &str) -> (Vec<String>, Vec<Vec<Vec<String>>>) {
    let (mut headings, mut tables, mut words) = (Vec::new(), Vec::<Vec<Vec<String>>>::new(), String::new());
    for event in Parser::new_ext(text, Options::ENABLE_TABLES | Options::ENABLE_STRIKETHROUGH) {
        match event {
            Event::Start(Tag::Table(_)) => tables.push(Vec::new()),
            Event::Start(Tag::TableHead | Tag::TableRow) => tables.last_mut().unwrap().push(Vec::new()),
            Event::Start(Tag::Heading { .. } | Tag::Paragraph | Tag::TableCell) => words.clear(),
            Event::End(TagEnd::Heading(_)) => headings.push(words.clone()),
            Event::End(TagEnd::TableCell) => tables.last_mut().unwrap().last_mut().unwrap().push(words.clone()),
            Event::Text(text) => words.push_str(&text),
            Event::Start(Tag::Strong | Tag::Emphasis) | Event::End(_) => {}
            other => panic!("{other:?} in {text}"),
        }
    }
    (headings, tables)
}
