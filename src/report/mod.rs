//! What is shown of a model and its results, as text and as data; no terminal, no files.
//!
//! [`check`] says what was understood of a model file, [`table`] what equilibria its scenarios have, [`sketch`] draws their
//! direction field, [`compare`] puts scenarios side by side, [`course`] shows what happens after a knock, [`interactions`]
//! who acts on whom, [`rows`] saves these two, [`progress`] says how far a search has come, [`kinds`] is how each kind of equilibrium is written, [`grid`] holds what is drawn in cells, `layout`
//! direction field, [`compare`] puts scenarios side by side, [`response`] shows how equilibria answer to a control,
//! [`course`] what happens after a knock, [`interactions`] who acts on whom, [`rows`] saves these two, [`kinds`] is how each
//! kind of equilibrium is written, [`grid`] holds what is drawn in cells, `layout`
//! breaks lines.

pub mod check;
pub mod compare;
pub mod course;
pub mod grid;
pub mod interactions;
pub mod kinds;
mod layout;
pub mod progress;
pub mod response;
pub mod rows;
pub mod sketch;
pub mod table;
