//! Does what the state asks for, outside.

use super::labour::Labour;
use super::{Event, Events};
use crate::app::{Effect, JobId, Msg};
use crate::shell::files::write_whole;

/// All that is outside.
pub(super) struct Outside {
    labour: Labour,
    events: Events,
}

impl Outside {
    pub(super) fn new(labour: Labour, events: Events) -> Self {
        Self { labour, events }
    }

    pub(super) fn awaits_quick(&self) -> bool {
        self.labour.awaits_quick()
    }

    pub(super) fn answered(&mut self, id: JobId) {
        self.labour.answered(id);
    }

    pub(super) fn perform(&mut self, effect: Effect) {
        match effect {
            Effect::Ask(id, task) => self.labour.ask(id, task),
            Effect::Stop(id) => self.labour.stop(id),
            Effect::Write { path, text, replace } => {
                let written = write_whole(&path, &text, replace).map(|()| path).map_err(|error| format!("{error:#}"));
                let _ = self.events.send(Event::Msg(Msg::Written(written)));
            }
            // The loop does these itself.
            Effect::Redraw | Effect::Suspend | Effect::Leave => {}
            Effect::Watch(..) | Effect::Keep(..) => {}
        }
    }
}
