//! What the headings of measures mean, for those that are shown and have a number: a table is read by people who did not
//! make it.

use crate::analysis::assess::Assessed;
use crate::analysis::measures::Measures;

use super::Table;
use super::columns::{Shown, has_sums};

/// A heading that is explained below a table.
struct Entry {
    /// The column.
    id: &'static str,
    word: &'static str,
    meaning: &'static str,
    /// Whether a row has anything under the heading.
    used: fn(&Measures) -> bool,
    heading: Heading,
}

/// Whether the word is above the column in every table.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Heading {
    Always,
    /// Not where the column was asked for, and so is shown in full.
    Unasked,
}

static ENTRIES: &[Entry] = &[
    Entry {
        id: "return_time",
        word: "return time",
        meaning: "how long until a small knock has faded to 37 %, in the long run.",
        used: |measures| measures.return_time.is_some(),
        heading: Heading::Always,
    },
    Entry {
        id: "period",
        word: "period",
        meaning: "from peak to peak, where the state swings on its way back or away.",
        used: |measures| measures.period.is_some(),
        heading: Heading::Always,
    },
    Entry {
        id: "peak_amplification",
        word: "surge",
        meaning: "how many times its size a small knock can grow to before it fades, at most, and after how long; it hangs \
                  on the units in which abundances are compared.",
        used: |measures| measures.amplification.is_some(),
        heading: Heading::Always,
    },
    Entry {
        id: "invasion",
        word: "can come in",
        meaning: "who is absent and grows when rare; with a question mark where the rate is 0.",
        used: |measures| !measures.invasion.is_empty() || measures.groups.iter().any(|group| group.invasion.is_some()),
        heading: Heading::Unasked,
    },
];

const SUMS: (&str, &str) =
    ("total", "of all species whose yield is in this unit; --columns yield shows each, and so do csv and json.");

/// Words and meanings for the measures that the table shows.
pub(super) fn used(table: &Table<'_>) -> Vec<(&'static str, &'static str)> {
    let shown = table.columns(&[Shown::Everywhere]);
    let is_shown = |id: &str| shown.iter().any(|column| column.id == id);
    let solved = table.scenes.iter().filter_map(|scene| scene.outcome.as_ref().ok());
    let rows: Vec<&Assessed> = solved.flat_map(|solved| &solved.assessment.equilibria).collect();
    let is_above = |entry: &Entry| is_shown(entry.id) && (entry.heading == Heading::Always || table.columns.is_none());
    let is_used = |entry: &&Entry| is_above(entry) && rows.iter().any(|row| (entry.used)(&row.measures));
    let entries = ENTRIES.iter().filter(is_used).map(|entry| (entry.word, entry.meaning));
    entries.chain((!rows.is_empty() && has_sums(table)).then_some(SUMS)).collect()
}
