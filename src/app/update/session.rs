//! What was tried and is in no file: kept outside after every change, offered when the same model is opened again.

use super::reread::found;
use super::values::change;
use crate::app::memory::{Session, Values};
use crate::app::study::TriedSet;
use crate::app::{App, Effect, Source, Study};
use crate::model::ParameterId;

/// What is to be kept, where that is another than what is kept already.
pub(super) fn keep(app: &mut App) -> Option<Effect> {
    let study = app.study.as_mut()?;
    let is_written = study.tried.recorded == study.tried.edition;
    // Written to a file, it is kept there.
    let mark = if is_written { 0 } else { study.tried.edition };
    if study.tried.kept == mark {
        return None;
    }
    study.tried.kept = mark;
    let session = if is_written { None } else { session(study) };
    Some(Effect::Keep(study.source.clone(), session))
}

fn session(study: &Study) -> Option<Session> {
    let tried = &study.tried;
    if tried.now.values.is_empty() {
        return None;
    }
    let base = tried.now.base;
    // A session is of one scenario: what was tried over others before is not part of it.
    let same = |sets: &[TriedSet]| {
        let latest = sets.iter().rev().take_while(|set| set.base == base);
        let mut kept: Vec<Values> = latest.map(|set| named(study, set)).collect();
        kept.reverse();
        kept
    };
    Some(Session {
        sha256: study.world.original.sha256.clone(),
        scenario: study.model().scenarios.get(base)?.name.clone(),
        values: named(study, &tried.now),
        undo: same(&tried.undo),
        redo: same(&tried.redo),
        selected: study.name_of_chosen(),
        screen: None,
    })
}

fn named(study: &Study, set: &TriedSet) -> Values {
    let name = |&(id, value): &(ParameterId, f64)| Some((study.model().parameters.get(id.0)?.name.clone(), value));
    set.values.iter().filter_map(name).collect()
}

/// What was tried last time is offered, unless something is tried already.
pub(super) fn recalled(app: &mut App, source: &Source, session: Session) {
    let Some(study) = app.study.as_mut().filter(|study| study.source == *source) else { return };
    let is_new = study.tried.now.values.is_empty() && study.tried.undo.is_empty();
    if is_new && !set(study, &session.scenario, &session.values).is_none_or(|set| set.values.is_empty()) {
        study.offer = Some(session);
    }
}

/// What was offered, which then is no more.
pub(super) fn offered(study: &mut Study) -> Option<TriedSet> {
    let session = study.offer.take()?;
    set(study, &session.scenario, &session.values)
}

fn set(study: &Study, scenario: &str, values: &Values) -> Option<TriedSet> {
    let base = study.model().scenario(scenario)?;
    Some(TriedSet { base, values: found(study.model(), values.iter().cloned()) })
}

/// Tries again what was tried last time.
pub(super) fn take_up(app: &mut App) {
    let Some(study) = &mut app.study else { return };
    let Some(session) = study.offer.take() else {
        app.say("nothing is left of last time");
        return;
    };
    let all = |sets: &[Values]| sets.iter().filter_map(|values| set(study, &session.scenario, values)).collect();
    let (undo, redo): (Vec<TriedSet>, Vec<TriedSet>) = (all(&session.undo), all(&session.redo));
    let Some(now) = set(study, &session.scenario, &session.values) else { return };
    if let Some(slot) = study.slots.iter().position(|slot| slot.scenario == now.base) {
        study.current = slot;
    }
    study.choose_named(session.selected.as_deref());
    change(app, now);
    if let Some(study) = &mut app.study {
        // Where there was no way back then, back is to the scenario as it is.
        if !undo.is_empty() {
            study.tried.undo = undo;
        }
        study.tried.redo = redo;
    }
    app.say("taken up from last time");
}
