//! What the columns are, for `--columns help`: made from the one list of them.

use super::super::layout::paragraph;
use super::columns::{Column, Shown, columns};

/// Columns of the text.
const WIDTH: usize = 80;

/// Every column with its unit, its meaning and where it is shown; ends in a line break.
pub fn guide() -> String {
    let mut text = paragraph("", HEAD, 0, WIDTH);
    for column in columns() {
        text.push('\n');
        text.push_str(&paragraph("", &title(column), 2, WIDTH));
        text.push_str(&paragraph("", &format!("{}.", column.help), 6, WIDTH));
    }
    text.push('\n');
    text + &paragraph("", TAIL, 0, WIDTH)
}

const HEAD: &str = "--columns takes names of columns with commas between, in the order in which they are to be shown, or \
     all. Name, [unit], and where a column is shown without being asked for:";

const TAIL: &str = "id always comes first, and proven is always shown. Text, Markdown and LaTeX round numbers and leave out \
     columns that are empty in every row; CSV and JSON have exact numbers. CSV has a field for each number: state S, \
     yield HARVEST S, net_effects S<-C (of C on S), covariance S:C.";

fn title(column: &Column) -> String {
    let shown = match column.shown {
        Shown::Everywhere => "in all formats",
        Shown::Files => "in CSV and JSON",
        Shown::Json => "in JSON",
    };
    format!("{} [{}], {shown}", column.id, column.unit.meaning())
}
