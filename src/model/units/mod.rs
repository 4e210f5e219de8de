//! Units of measurement: reading them, and checking that a model's formulas are consistent in them.
//!
//! [`read`](read()) reads one unit, [`check_units`] checks a model: every sum, comparison, function and rate, by its
//! syntax tree. A parameter without a unit is an unknown, solved for where the formulas determine it; what they do not
//! determine stays silent. Nothing here changes a value: units never convert, they only warn. A new unit is a row of
//! [`known`]; a new function needs its rule in [`infer`].

mod known;
mod read;
mod unit;

pub use read::{Malformed, read};
pub use unit::{Agreement, Unit, compare};
