//! What is kept between runs, as plain data.

/// What was tried on a model and not saved.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Session {
    /// SHA-256 of the model file.
    pub sha256: String,
    /// The scenario that the values are set over.
    pub scenario: String,
    /// The values, by name.
    pub values: Vec<(String, f64)>,
    /// What they were before, the last at the end.
    pub undo: Vec<Vec<(String, f64)>>,
    /// What was taken back, the last at the end.
    pub redo: Vec<Vec<(String, f64)>>,
}
