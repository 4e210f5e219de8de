//! Parameters that are not known for sure: draws of them, and how far what is counted over draws can be trusted.
//!
//! [`draw`] says what each draw is, [`interval`] how sure a share, a mean or a quantile over draws is, [`indices`] which
//! parameter an outcome hangs on. What becomes of the model under a draw is not asked here.

pub mod draw;
pub mod indices;
pub mod interval;
