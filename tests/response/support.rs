//! Models from the text of a file.

use restpoint::diag::render::render;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;

use crate::common::text::Read;

/// Reads a model that is right.
pub(crate) fn read(text: &str) -> Read {
    let (model, sources, found) = load("model.yaml", text.as_bytes(), &NoFiles);
    let said: String = found.iter().map(|found| render(found, &sources, false)).collect();
    let model = model.unwrap_or_else(|| panic!("{said}\n{text}"));
    let system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{found:?}\n{text}"));
    Read { model, system }
}
