//! The drawing as text, with what its signs mean below.

use super::{View, drawing, mark, not_marked, signs};
use crate::report::layout::wrapped;
use crate::report::sketch::Size;
use crate::report::table::Page;

/// Columns by which what stands below is indented.
const INDENT: usize = 2;

/// A response in lines of at most the page's width, `rows` of them for the drawing; ends in a line break.
pub fn text(view: &View<'_>, rows: usize, page: &Page) -> String {
    let size = Size { columns: page.width, rows };
    let mut text = String::new();
    for line in drawing(view, size, page.style).lines(page.color) {
        text.push_str(&line);
        text.push('\n');
    }
    let signs: Vec<String> =
        signs(view, size, page.style).into_iter().map(|(sign, meaning)| format!("{sign} {meaning}  ")).collect();
    let below = wrapped(signs.iter().map(String::as_str), INDENT, INDENT, page.width);
    for line in format!("{:INDENT$}{below}", "").lines() {
        text.push_str(line.trim_end());
        text.push('\n');
    }
    let left_out = not_marked(view, size);
    if !left_out.is_empty() {
        let marks: Vec<String> = left_out.iter().map(|&rank| mark(rank).to_string()).collect();
        let said = format!("Thresholds outside the drawing, or in one cell with others: {}", marks.join(", "));
        text.push_str(&page.paragraph("", &said, INDENT));
    }
    text
}
