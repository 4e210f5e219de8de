//! Lines of text: columns that line up, sums that break between terms.
//!
//! Widths are those of a terminal (UAX #11), not bytes or characters.

use unicode_width::UnicodeWidthStr;

use super::super::layout;

/// Width that every text of this report keeps to where its words allow.
pub(super) const WIDTH: usize = 80;

/// Words within [`WIDTH`], from column `start` on; further lines are indented by `indent`.
pub(super) fn wrapped<'w>(words: impl IntoIterator<Item = &'w str>, start: usize, indent: usize) -> String {
    layout::wrapped(words, start, indent, WIDTH)
}

/// A last column that begins further right than this has lines of its own for what does not fit.
const FARTHEST: usize = 44;

/// Columns that line up, two spaces apart and indented by two; columns that are empty in every row are left out. The last
/// one breaks between words, and goes under the second where little room is left.
pub(super) fn columns(rows: &[Vec<String>]) -> String {
    let count = rows.iter().map(Vec::len).max().unwrap_or(0);
    let width =
        |column: usize| rows.iter().filter_map(|row| row.get(column)).map(|cell| cell.width()).max().unwrap_or(0);
    let shown: Vec<(usize, usize)> =
        (0..count).map(|column| (column, width(column))).filter(|(_, width)| *width > 0).collect();
    let under_second = shown.first().map_or(0, |(_, width)| width + 6);
    let mut text = String::new();
    for row in rows {
        let mut line = String::from("  ");
        for (place, (column, width)) in shown.iter().enumerate() {
            let cell = row.get(*column).map_or("", String::as_str);
            if place + 1 == shown.len() {
                line = with_last(line.trim_end(), cell, line.width(), under_second);
            } else {
                line.push_str(cell);
                line.push_str(&" ".repeat(width.saturating_sub(cell.width()) + 2));
            }
        }
        text.push_str(line.trim_end());
        text.push('\n');
    }
    text
}

/// A line with its last cell at column `start`, or on lines of its own that are indented by `under`.
fn with_last(line: &str, cell: &str, start: usize, under: usize) -> String {
    let gap = " ".repeat(start.saturating_sub(line.width()));
    if start > FARTHEST && start + cell.width() > WIDTH {
        return format!("{line}\n{}{}", " ".repeat(under), wrapped(cell.split(' '), under, under));
    }
    format!("{line}{gap}{}", wrapped(cell.split(' '), start, start))
}

/// As [`columns`] with a line of headings, of which those over empty columns are left out; nothing where there is no row.
pub(super) fn headed(headings: &[&str], rows: &[Vec<String>]) -> String {
    if rows.is_empty() {
        return String::new();
    }
    let is_filled = |column: usize| rows.iter().any(|row| row.get(column).is_some_and(|cell| !cell.is_empty()));
    let heading = headings.iter().enumerate();
    let heading = heading.map(|(column, text)| if is_filled(column) { (*text).to_owned() } else { String::new() });
    let mut all = vec![heading.collect()];
    all.extend_from_slice(rows);
    columns(&all)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_line_up_and_empty_ones_go() {
        let rows = [
            vec!["K".to_owned(), String::new(), "900".to_owned()],
            vec!["αβ".to_owned(), String::new(), "1".to_owned()],
        ];
        assert_eq!(columns(&rows), "  K   900\n  αβ  1\n");
    }
}
