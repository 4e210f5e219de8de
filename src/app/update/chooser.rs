//! Choosing a model.

use std::path::PathBuf;

use crate::app::catalogue::Entry;
use crate::app::{App, Effect, Screen, Source};

/// The models are listed when they are first needed, and anew whenever the chooser is turned to.
pub(super) fn list(app: &mut App) -> Option<Effect> {
    let chooser = &mut app.chooser;
    if app.screen != Screen::Chooser || chooser.listing > 0 || app.reading.is_some() {
        return None;
    }
    app.edition += 1;
    chooser.listing = app.edition;
    chooser.is_listing = true;
    chooser.entries.clear();
    let given = match app.study.as_ref().map(|study| &study.source) {
        Some(Source::File(path)) => vec![path.clone()],
        _ => Vec::new(),
    };
    Some(Effect::List(chooser.listing, given))
}

/// A model was found.
pub(super) fn listed(app: &mut App, listing: u64, entry: Entry) {
    if app.chooser.listing == listing {
        app.chooser.entries.push(entry);
    }
}

/// There are no more.
pub(super) fn all_listed(app: &mut App, listing: u64) {
    if app.chooser.listing == listing {
        app.chooser.is_listing = false;
    }
}

/// Opens the model that is selected.
pub(super) fn open_chosen(app: &mut App) {
    if let Some(entry) = app.chooser.entries.get(app.chooser.chosen) {
        let source = entry.source.clone();
        open(app, source);
    }
}

/// Opens the model of a path that was typed.
pub(super) fn open_path(app: &mut App, path: PathBuf) {
    open(app, Source::File(path));
}

fn open(app: &mut App, source: Source) {
    app.notice = None;
    app.edition += 1;
    app.reading = Some((source, app.edition));
}
