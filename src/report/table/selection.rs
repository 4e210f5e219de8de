//! Which columns are shown: those asked for, or what a format shows by default.

use crate::diag::nearest::nearest;

use super::Table;
use super::columns::{Column, Shown, columns};

/// Columns in the order in which they are shown.
#[derive(Clone, Debug)]
pub struct Selection(Vec<&'static Column>);

/// A name that no column has.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct UnknownColumn {
    /// The name.
    pub id: String,
    /// The nearest that there is.
    pub nearest: Option<&'static str>,
}

/// Says that all columns are wanted.
const ALL: &str = "all";

impl Selection {
    /// Reads ids with commas between, `all` for every one of them. `id` is always first, and `proven` is shown whether
    /// asked for or not, so that no number stands without what is proved of it; a column named twice is shown once.
    ///
    /// # Errors
    /// The first name that no column has.
    pub fn read(list: &str) -> Result<Self, UnknownColumn> {
        let mut chosen: Vec<&'static Column> = columns().filter(|column| column.id == "id").collect();
        for name in list.split(',').map(str::trim).filter(|name| !name.is_empty()) {
            let found: Vec<_> = columns().filter(|column| name == ALL || column.id == name).collect();
            if found.is_empty() {
                let known = columns().map(|column| column.id).chain([ALL]);
                return Err(UnknownColumn { id: name.to_owned(), nearest: nearest(name, known) });
            }
            chosen.extend(found);
        }
        chosen.extend(columns().filter(|column| column.id == "proven"));
        let mut once: Vec<&'static Column> = Vec::new();
        for column in chosen {
            if once.iter().all(|other| other.id != column.id) {
                once.push(column);
            }
        }
        Ok(Self(once))
    }
}

impl Table<'_> {
    /// The columns asked for, or those that are shown by default at one of these places.
    pub(super) fn columns(&self, default: &[Shown]) -> Vec<&'static Column> {
        match self.columns {
            Some(Selection(chosen)) => chosen.clone(),
            None => columns().filter(|column| default.contains(&column.shown)).collect(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lists_are_read_in_order() {
        let check = |list: &str, expected: &[&str]| {
            let ids = Selection::read(list).map(|chosen| chosen.0.iter().map(|column| column.id).collect::<Vec<_>>());
            assert_eq!(ids.as_deref(), Ok(expected), "{list}");
        };
        check("period,state", &["id", "period", "state", "proven"]);
        check(" proven , id,period,,period", &["id", "proven", "period"]);
        check("", &["id", "proven"]);
        let all: Vec<&str> = columns().map(|column| column.id).collect();
        check("all", &all);
        assert_eq!(all.first(), Some(&"id"));
    }

    #[test]
    fn unknown_names_are_said_with_the_nearest() {
        let check = |list: &str, id: &str, nearest| {
            let unknown = UnknownColumn { id: id.to_owned(), nearest };
            assert_eq!(Selection::read(list).err(), Some(unknown));
        };
        check("id,preiod", "preiod", Some("period"));
        check("Stable", "Stable", Some("stable"));
        check("zzzzzz", "zzzzzz", None);
        check("everything", "everything", None);
    }
}
