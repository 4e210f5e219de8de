//! A model together with what tells its files from all others.

use super::Model;

/// A model as it was read.
#[derive(Clone, Debug)]
pub struct Original {
    /// The checked model.
    pub model: Model,
    /// SHA-256 of the model file, in hexadecimal digits.
    pub sha256: String,
    /// Name and SHA-256 of each table that it names.
    pub tables: Vec<(String, String)>,
}
