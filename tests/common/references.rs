//! Numbers that `tests/data/paths.py` made.

/// The value of a quantity of a model in `tests/data/paths.csv`.
pub fn reference(model: &str, quantity: &str) -> f64 {
    let line = include_str!("../data/paths.csv").lines().find_map(|line| {
        let mut parts = line.split(',');
        (parts.next() == Some(model) && parts.next() == Some(quantity)).then(|| parts.next())
    });
    line.flatten().and_then(|value| value.parse().ok()).unwrap_or_else(|| panic!("no {quantity} of {model}"))
}
