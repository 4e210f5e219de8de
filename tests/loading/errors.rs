//! Every file in `tests/files/errors` says exactly what the text of the same name beside it says.
//!
//! To add one, write `NAME.yaml` (and the tables it names), and `NAME.txt` with what the program should say. Files are
//! called like the message that they provoke, with a word behind a dot where there are several.

#![expect(clippy::expect_used, reason = "a test that cannot read its own files has failed")]

use std::fs;
use std::path::{Path, PathBuf};

use restpoint::diag::render::render;
use restpoint::model::load::{Files, load};

struct Folder(PathBuf);

impl Files for Folder {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        fs::read(self.0.join(path)).map_err(|_| "there is no such file".to_owned())
    }
}

fn said(folder: &Path, file: &str) -> String {
    let bytes = fs::read(folder.join(file)).expect("a file of the folder");
    let (model, sources, found) = load(file, &bytes, &Folder(folder.to_owned()));
    assert_eq!(model.is_none(), !found.is_empty(), "{file}: a model exactly where nothing is wrong");
    found.iter().map(|diagnostic| render(diagnostic, &sources, false)).collect()
}

#[test]
fn every_file_says_what_it_should() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/files/errors");
    let mut names: Vec<String> = fs::read_dir(&folder)
        .expect("the folder")
        .filter_map(|entry| entry.ok()?.file_name().into_string().ok()?.strip_suffix(".yaml").map(str::to_owned))
        .collect();
    names.sort();
    let mut wrong = Vec::new();
    for name in &names {
        let said = said(&folder, &format!("{name}.yaml"));
        let expected = fs::read_to_string(folder.join(format!("{name}.txt"))).unwrap_or_default();
        if said != expected || said.is_empty() {
            wrong.push(format!("{name}: expected\n{expected}\nbut it says\n{said}"));
        }
    }
    assert!(wrong.is_empty(), "{} of {} files differ\n\n{}", wrong.len(), names.len(), wrong.join("\n"));
}
