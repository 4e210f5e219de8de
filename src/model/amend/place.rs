//! Where a new scenario goes into the text: after the last one, in the style of those that are there.
//!
//! Only bytes are added, but where an explicit null stands for no scenarios: it gives way. Comments stay where they are;
//! one that is as far in as the scenarios and follows the last of them belongs to them. Start at [`edits`].

use super::syntax::{Document, Kind, Node};
use super::write::{Part, lines, pair};
use crate::diag::Span;
use crate::model::events::Style;

/// Bytes that give way, usually none, and what takes their place.
#[derive(Debug, PartialEq, Eq)]
pub(super) struct Edit {
    pub(super) span: Span,
    pub(super) text: String,
}

impl Edit {
    fn insert(at: usize, text: impl Into<String>) -> Self {
        Self { span: Span::new(at, at), text: text.into() }
    }
}

/// What is to be added: the entries of `scenarios`, the first of them perhaps the one that was there unwritten.
pub(super) type Entries = [(String, Part)];

/// The changes that add a scenario, in the order of the text; else why there is no place for it, as it reads after
/// "because". `unwritten` are the scenarios that are there although the file writes none.
pub(super) fn edits(text: &str, document: &Document, new: &Entries, unwritten: &Entries) -> Result<Vec<Edit>, String> {
    let root = &document.root;
    let Kind::Mapping { flow, entries } = &root.kind else { return Err("the file is no map".into()) };
    let all = [unwritten, new].concat();
    let margin = entries.first().map_or(0, |(key, _)| margin(text, key.span.start));
    let below = || block(&all, margin + step(text, root), step(text, root));
    let Some((_, scenarios)) = root.get("scenarios") else {
        if *flow {
            return within_flow(text, root, &format!("scenarios: {}", brackets(&all)));
        }
        let section = std::iter::once(format!("{}scenarios:", " ".repeat(margin))).chain(below());
        return Ok(vec![at_line(text, document.end, &section.collect::<Vec<_>>())]);
    };
    let end = scenarios.span.end;
    match &scenarios.kind {
        Kind::Mapping { flow: true, .. } => within_flow(text, scenarios, &pairs(new)),
        Kind::Mapping { flow: false, entries } => after_last(text, scenarios, entries, new),
        Kind::Scalar { value, style: Style::Plain } if !value.is_empty() => {
            Ok(vec![Edit { span: Span::new(end - value.len(), end), text: brackets(&all) }])
        }
        Kind::Scalar { style: Style::Plain, .. } if *flow => {
            let gap = if text[..end].ends_with(char::is_whitespace) { "" } else { " " };
            Ok(vec![Edit::insert(end, format!("{gap}{}", brackets(&all)))])
        }
        Kind::Scalar { style: Style::Plain, .. } => Ok(vec![at_line(text, line_end(text, end), &below())]),
        Kind::Alias => Err("its \"scenarios\" are written as an alias".into()),
        Kind::Scalar { .. } | Kind::Sequence { .. } => Err("its \"scenarios\" are no map".into()),
    }
}

fn pairs(entries: &Entries) -> String {
    entries.iter().map(|(name, part)| pair(name, part)).collect::<Vec<_>>().join(", ")
}

fn brackets(entries: &Entries) -> String {
    format!("{{{}}}", pairs(entries))
}

fn block(entries: &Entries, margin: usize, step: usize) -> Vec<String> {
    entries.iter().flat_map(|(name, part)| lines(name, part, margin, step)).collect()
}

/// After the last entry of a block map, and the comments that belong to it.
fn after_last(text: &str, map: &Node, entries: &[(Node, Node)], new: &Entries) -> Result<Vec<Edit>, String> {
    let Some((key, _)) = entries.first() else { return Err("its \"scenarios\" are empty".into()) };
    let indent = margin(text, key.span.start);
    let last = map.last();
    let ended = map.ends_in_block_scalar() && text[..last].ends_with('\n');
    let rest = text[last..].split('\n').next().unwrap_or_default().trim();
    if !ended && !rest.is_empty() && !rest.starts_with('#') {
        return Err("something follows its last scenario on the same line".into());
    }
    let end = if ended { last } else { line_end(text, last) };
    let end = past_comments(text, end, indent);
    let step = entries.iter().find_map(|(_, value)| inner_step(text, value, indent)).unwrap_or(2);
    Ok(vec![at_line(text, end, &block(new, indent, step))])
}

/// Past the comment lines that follow and are at least as far in, with the empty lines between them.
fn past_comments(text: &str, from: usize, indent: usize) -> usize {
    let (mut end, mut at) = (from, from);
    for line in text[from..].split_inclusive('\n') {
        let content = line.trim_start_matches(' ');
        at += line.len();
        if content.starts_with('#') && line.len() - content.len() >= indent {
            end = at;
        } else if !content.trim().is_empty() {
            break;
        }
    }
    end
}

/// Lines put in at the beginning of a line, or at the end of a text that has no last line break.
fn at_line(text: &str, at: usize, lines: &[String]) -> Edit {
    let newline = newline(text);
    let joined = lines.join(newline);
    if at == 0 || text[..at].ends_with('\n') {
        Edit::insert(at, format!("{joined}{newline}"))
    } else {
        Edit::insert(at, format!("{newline}{joined}"))
    }
}

/// Inside the closing bracket of a flow map: on a line of its own where its last entry has one, else on the same line.
fn within_flow(text: &str, map: &Node, new: &str) -> Result<Vec<Edit>, String> {
    let Kind::Mapping { entries, .. } = &map.kind else { return Err("it is no map".into()) };
    let Some((key, value)) = entries.last() else {
        // A flow map that is empty begins with its bracket or an anchor.
        let open = text[map.span.start..map.span.end].rfind('{').ok_or("it is no map")?;
        return Ok(vec![Edit::insert(map.span.start + open + 1, new)]);
    };
    let last = key.last().max(value.last());
    let comma = comma(text, last);
    let after = comma.unwrap_or(last);
    let rest = text[after..].split_inclusive('\n').next().unwrap_or_default();
    let remark = rest.trim_start_matches([' ', '\t']);
    let own_line = rest.ends_with('\n') && (remark.trim().is_empty() || remark.starts_with('#'));
    // A colon right before a comma would be taken for part of the name.
    let separator = if text[..last].ends_with(':') { " ," } else { "," };
    if !own_line {
        return Ok(match comma {
            Some(comma) => vec![Edit::insert(comma, format!(" {new},"))],
            None => vec![Edit::insert(last, format!("{separator} {new}"))],
        });
    }
    let margin = " ".repeat(indent(text, key.span.start).max(1));
    let trailing = if comma.is_some() { "," } else { "" };
    let line = Edit::insert(after + rest.len(), format!("{margin}{new}{trailing}{}", newline(text)));
    Ok(if comma.is_some() { vec![line] } else { vec![Edit::insert(last, separator), line] })
}

/// One past the comma that follows an entry of a flow map, over blanks, line breaks and comments.
fn comma(text: &str, from: usize) -> Option<usize> {
    let mut at = from;
    loop {
        let rest = text[at..].trim_start();
        at = text.len() - rest.len();
        if rest.starts_with('#') {
            at = line_end(text, at);
        } else {
            return rest.starts_with(',').then_some(at + 1);
        }
    }
}

/// One past the break of the line that a byte stands in.
fn line_end(text: &str, at: usize) -> usize {
    text[at..].find('\n').map_or(text.len(), |found| at + found + 1)
}

/// Spaces at the beginning of the line that a byte stands in.
fn indent(text: &str, at: usize) -> usize {
    let start = text[..at].rfind('\n').map_or(0, |found| found + 1);
    text[start..].bytes().take_while(|&b| b == b' ').count()
}

/// How far in the keys of a block map stand, by one of them: a question mark before it is where it begins.
fn margin(text: &str, key: usize) -> usize {
    let start = text[..key].rfind('\n').map_or(0, |found| found + 1);
    let before = text[start..key].trim_end();
    before.strip_suffix('?').unwrap_or(&text[start..key]).chars().count()
}

/// How much further in the file writes what belongs to a key; 2 where it does not show.
fn step(text: &str, root: &Node) -> usize {
    let Kind::Mapping { flow: false, entries } = &root.kind else { return 2 };
    let outer = entries.first().map_or(0, |(key, _)| margin(text, key.span.start));
    entries.iter().find_map(|(_, value)| inner_step(text, value, outer)).unwrap_or(2)
}

fn inner_step(text: &str, value: &Node, outer: usize) -> Option<usize> {
    let Kind::Mapping { flow: false, entries } = &value.kind else { return None };
    let inner = margin(text, entries.first()?.0.span.start);
    inner.checked_sub(outer).filter(|&step| step > 0)
}

/// The line break that the file uses.
fn newline(text: &str) -> &'static str {
    let first = text.find('\n');
    if first.is_some_and(|at| text[..at].ends_with('\r')) { "\r\n" } else { "\n" }
}
