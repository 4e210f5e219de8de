//! Any bytes as a model file: no panic, no hang, every message placed inside the text, and a sound model assembles.
#![no_main]

use libfuzzer_sys::fuzz_target;
use restpoint::diag::render::render;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;
use restpoint::model::units::check_units;

fuzz_target!(|bytes: &[u8]| {
    let (model, sources, found) = load("fuzz.yaml", bytes, &NoFiles);
    for diagnostic in &found {
        let text = render(diagnostic, &sources, false);
        assert!(text.contains("fuzz.yaml:"), "no place in {text}");
        assert!(!text.chars().any(|c| c.is_control() && c != '\n'), "control characters in {text:?}");
    }
    assert_eq!(model.is_none(), !found.is_empty(), "a model or messages, not both or neither");
    let Some(model) = model else { return };
    let _ = check_units(&model);
    if let Ok(mut system) = System::new(&model, &[]) {
        let _ = system.bounds(&model);
    }
});
