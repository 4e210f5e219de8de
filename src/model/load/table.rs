//! CSV tables with the place of every cell.
//!
//! Cells are parted by commas, rows by line breaks; a cell in double quotes may hold commas, and a doubled quotation
//! mark stands for one (RFC 4180, without breaks inside cells). The first row is a heading. What the cells mean is for
//! `matrix` and `draws`. Start at [`open`].

use std::borrow::Cow;

use super::desk::Desk;
use crate::diag::{Location, SourceId, Span};
use crate::model::messages::Message;

/// Bytes of a table: a thousand species, or a hundred thousand draws of a dozen parameters.
const TABLE_LIMIT: usize = 16 << 20;

/// A cell without the blanks around it; quotation marks belong to its span.
#[derive(Clone, Copy, Debug)]
pub(super) struct Cell {
    pub(super) span: Span,
    quoted: bool,
}

/// A file's rows, all as long as the heading.
pub(super) struct Table {
    pub(super) source: SourceId,
    /// What the model file calls it.
    pub(super) path: String,
    pub(super) heading: Vec<Cell>,
    pub(super) rows: Vec<Vec<Cell>>,
    /// Whether no row was left out.
    pub(super) whole: bool,
}

/// How a table is read.
pub(super) struct Form {
    /// What one row is, for messages.
    pub(super) row: &'static str,
    /// What to do about a row of another length.
    pub(super) advice: &'static str,
}

impl Table {
    pub(super) fn at(&self, cell: Cell) -> Location {
        Location { source: self.source, span: cell.span }
    }

    /// The cell's text; its first byte in the source where it is written there as it is.
    pub(super) fn text<'d>(&self, desk: &'d Desk<'_>, cell: Cell) -> (Cow<'d, str>, Option<usize>) {
        let source = desk.sources.get(self.source).map_or("", |source| source.text.as_str());
        let raw = source.get(cell.span.start..cell.span.end).unwrap_or_default();
        if !cell.quoted {
            return (Cow::Borrowed(raw), Some(cell.span.start));
        }
        let inner = raw.get(1..raw.len().saturating_sub(1)).unwrap_or_default();
        if inner.contains('"') {
            return (Cow::Owned(inner.replace("\"\"", "\"")), None);
        }
        (Cow::Borrowed(inner), Some(cell.span.start + 1))
    }
}

/// Reads the file that a value of the model names. `None` after saying why it cannot be used; rows of another length
/// than the heading are reported and left out.
pub(super) fn open(desk: &mut Desk<'_>, path: &str, at: Location, form: &Form) -> Option<Table> {
    let bytes = match desk.files.read(path, TABLE_LIMIT) {
        Ok(bytes) if bytes.len() <= TABLE_LIMIT => bytes,
        Ok(bytes) => {
            desk.say(Message::FileTooLarge, at, &[&bytes.len(), &TABLE_LIMIT]);
            return None;
        }
        Err(reason) => {
            desk.say(Message::Unreadable, at, &[&path, &reason]);
            return None;
        }
    };
    let source = decoded(desk, path, bytes)?;
    let text = desk.sources.get(source).map_or("", |source| source.text.as_str());
    match split(text) {
        Ok(rows) => checked(desk, rows, source, path, form),
        Err(quote) => {
            desk.say(Message::QuoteInTable, Location { source, span: quote }, &[]);
            None
        }
    }
}

fn decoded(desk: &mut Desk<'_>, path: &str, bytes: Vec<u8>) -> Option<SourceId> {
    match String::from_utf8(bytes) {
        Ok(text) => {
            let text = text.strip_prefix('\u{feff}').map(str::to_owned).unwrap_or(text);
            Some(desk.sources.add(path, text))
        }
        Err(error) => {
            let start = error.utf8_error().valid_up_to();
            let source = desk.sources.add(path, String::from_utf8_lossy(error.as_bytes()).into_owned());
            let span = Span::new(start, start + char::REPLACEMENT_CHARACTER.len_utf8());
            desk.say(Message::NotUtf8, Location { source, span }, &[]);
            None
        }
    }
}

fn checked(desk: &mut Desk<'_>, rows: Vec<Vec<Cell>>, source: SourceId, path: &str, form: &Form) -> Option<Table> {
    let mut rows = rows.into_iter();
    let start = Location { source, span: Span::default() };
    let Some(heading) = rows.next() else {
        desk.say(Message::TableEmpty, start, &[&form.row]);
        return None;
    };
    let mut table = Table { source, path: path.to_owned(), heading, rows: Vec::new(), whole: true };
    if let [only] = table.heading.as_slice() {
        let foreign = [(";", "semicolons"), ("\t", "tabs")];
        let (text, _) = table.text(desk, *only);
        if let Some((_, name)) = foreign.iter().find(|(mark, _)| text.contains(mark)) {
            desk.say(Message::TableSemicolons, table.at(*only), &[name]);
            return None;
        }
    }
    let width = table.heading.len();
    for row in rows {
        if row.len() == width {
            table.rows.push(row);
        } else if let (Some(first), Some(last)) = (row.first(), row.last()) {
            table.whole = false;
            let at = Location { source, span: first.span.to(last.span) };
            desk.say(Message::Ragged, at, &[&row.len(), &width, &form.advice]);
        }
    }
    if table.rows.is_empty() && table.whole {
        desk.say(Message::TableEmpty, start, &[&form.row]);
        return None;
    }
    Some(table)
}

/// All rows that are not blank; else the quotation that is not closed properly.
fn split(text: &str) -> Result<Vec<Vec<Cell>>, Span> {
    let mut rows = Vec::new();
    let mut start = 0;
    for line in text.split_inclusive('\n') {
        let content = line.trim_end_matches(['\n', '\r']);
        if !content.trim().is_empty() {
            rows.push(cells(content, start)?);
        }
        start += line.len();
    }
    Ok(rows)
}

fn cells(line: &str, start: usize) -> Result<Vec<Cell>, Span> {
    let mut found = Vec::new();
    let mut from = 0;
    loop {
        let (cell, end) = cell(line, from, start)?;
        found.push(cell);
        if end >= line.len() {
            return Ok(found);
        }
        from = end + 1;
    }
}

/// The cell that begins at a byte of the line, and the byte of the comma after it or the line's end.
fn cell(line: &str, from: usize, start: usize) -> Result<(Cell, usize), Span> {
    let rest = &line[from..];
    let blanks = rest.len() - rest.trim_start_matches([' ', '\t']).len();
    let body = &rest[blanks..];
    if let Some(inner) = body.strip_prefix('"') {
        let opened = Span::new(start + from + blanks, start + from + blanks + 1);
        let length = closing(inner).ok_or(opened)? + 2;
        let after = &body[length..];
        let comma = after.find(',').unwrap_or(after.len());
        if !after[..comma].trim().is_empty() {
            return Err(opened);
        }
        let span = Span::new(opened.start, opened.start + length);
        return Ok((Cell { span, quoted: true }, from + blanks + length + comma));
    }
    let comma = rest.find(',').unwrap_or(rest.len());
    let text = rest[..comma].trim();
    let lead = if text.is_empty() { 0 } else { rest.len() - rest.trim_start().len() };
    let first = start + from + lead;
    Ok((Cell { span: Span::new(first, first + text.len()), quoted: false }, from + comma))
}

/// The byte of the quotation mark that closes, doubled ones passed over.
fn closing(inner: &str) -> Option<usize> {
    let mut from = 0;
    loop {
        let quote = from + inner[from..].find('"')?;
        if inner[quote + 1..].starts_with('"') {
            from = quote + 2;
        } else {
            return Some(quote);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(text: &str, expected: &[&[&str]]) {
        let rows = split(text).expect("closed quotations");
        let found: Vec<Vec<&str>> =
            rows.iter().map(|row| row.iter().map(|cell| &text[cell.span.start..cell.span.end]).collect()).collect();
        assert_eq!(found, expected, "{text:?}");
    }

    #[test]
    fn cells_are_found_where_they_stand() {
        check("a,b\n1,2\n", &[&["a", "b"], &["1", "2"]]);
        check(" a , b\r\n\r\n1,\t2 ", &[&["a", "b"], &["1", "2"]]);
        check(",a,\n", &[&["", "a", ""]]);
        check("\"max(a, b)\" ,\"\"\"\"\n", &[&["\"max(a, b)\"", "\"\"\"\""]]);
        check("é,魚\n", &[&["é", "魚"]]);
        check("", &[]);
    }

    #[test]
    fn an_open_quotation_is_placed() {
        for (text, start) in [("a\n1,\"b\n", 4), ("\"a\"b,c\n", 0)] {
            assert_eq!(split(text).expect_err("open"), Span::new(start, start + 1), "{text}");
        }
    }
}
