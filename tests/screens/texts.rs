//! Screens against the texts that they are to show, and what they write. `RENEW_SCREENS=1` writes the texts anew instead of
//! comparing them: read what has changed before it is committed.

use std::fs;
use std::path::Path;

use crate::bench::Bench;

/// Fails with the whole screen unless it is as the file of that name in `tests/files/screens` has it.
#[track_caller]
pub(crate) fn looks_as(bench: &Bench, name: &str) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/files/screens").join(format!("{name}.txt"));
    compare(&path, &bench.text(), name);
}

/// The same with what each run of characters looks like, below the text.
#[track_caller]
pub(crate) fn looks_in_colour_as(bench: &Bench, name: &str) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/files/screens").join(format!("{name}.txt"));
    compare(&path, &format!("{}{}", bench.text(), bench.looks()), name);
}

#[track_caller]
fn compare(path: &Path, shown: &str, name: &str) {
    if std::env::var_os("RENEW_SCREENS").is_some() {
        fs::write(path, shown).unwrap();
    }
    let expected = fs::read_to_string(path).unwrap_or_default();
    assert!(shown == expected, "{name} is not as expected, but\n{shown}");
}

/// Writes what is behind the screen to a file of that name in the bench's folder; what is then in it.
#[track_caller]
pub(crate) fn written(bench: &mut Bench, name: &str) -> String {
    let path = bench.folder().join(name);
    bench.press("w");
    bench.paste(path.to_str().unwrap());
    bench.press("<Enter>");
    bench.shows(&["written to "]);
    fs::read_to_string(path).unwrap()
}
