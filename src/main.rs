//! The restpoint program.

fn main() {}
