//! What a threshold means for the community, in a sentence: who is lost or can come in, what sets in, and how.
//!
//! Only what the arms of the threshold and the branches on the picture support is said, and that of states of rest: whether
//! a species lives on in a cycle is not looked at. Start at [`meaning`]; each kind of threshold has a function. To say
//! something of a new kind, add one, and rows to `tests/response_tables/meanings.rs`.

use crate::analysis::response::{Arm, Criticality, GapReason, Response, Threshold, ThresholdKind};
use crate::model::{Model, Role, SpeciesId};

use super::super::kinds;
use super::words::{community, listed, setting, with_article};

/// What sentences on one scenario's response need.
#[derive(Clone, Copy, Debug)]
pub struct Setting<'s> {
    /// The model.
    pub model: &'s Model,
    /// The response.
    pub response: &'s Response,
    /// Names of the scenario's equilibria.
    pub ids: &'s [String],
}

/// What the threshold means, without a full stop: `cod cannot persist at rest above E = 1.830`.
pub fn meaning(at: &Setting<'_>, threshold: &Threshold) -> String {
    let sentence = Sentence { at, threshold };
    if !threshold.arms.is_empty() && !threshold.arms.iter().any(|arm| arm.feasible) {
        return format!(
            "of no account at {}: an abundance is negative there, or outside the search box",
            sentence.here()
        );
    }
    match threshold.kind {
        ThresholdKind::Fold => sentence.fold(),
        ThresholdKind::Transcritical => sentence.transcritical(),
        ThresholdKind::Pitchfork => sentence.pitchfork(),
        ThresholdKind::Hopf => sentence.oscillation("cycles set in softly", "cycles"),
        ThresholdKind::PeriodDoubling => {
            sentence.oscillation("swings between two levels set in softly", "swings between two levels")
        }
        ThresholdKind::NeimarkSacker => sentence.oscillation("swings around the state set in softly", "swings"),
        ThresholdKind::BorderCollision => sentence.border(),
        ThresholdKind::Exit => sentence.exit(),
        ThresholdKind::Continuum => format!("at {} there is a whole line of states of rest", sentence.here()),
        kind @ (ThresholdKind::Cusp | ThresholdKind::BogdanovTakens | ThresholdKind::GeneralisedHopf) => {
            of_point(kind).to_owned()
        }
    }
}

/// What a point on the curves of a chart means; empty for what is no such point.
pub(super) fn of_point(kind: ThresholdKind) -> &'static str {
    match kind {
        ThresholdKind::Cusp => "two folds meet and end: around it a jump can be avoided",
        ThresholdKind::BogdanovTakens => "a fold meets a Hopf threshold, which ends there, and so do its cycles",
        ThresholdKind::GeneralisedHopf => "the onset of cycles turns from soft to hard",
        _ => "",
    }
}

struct Sentence<'s> {
    at: &'s Setting<'s>,
    threshold: &'s Threshold,
}

fn side(above: bool) -> &'static str {
    if above { "above" } else { "below" }
}

/// The side on which all of them lie, where there are any and they agree.
fn common_side<'a>(arms: impl IntoIterator<Item = &'a Arm>) -> Option<bool> {
    let mut arms = arms.into_iter();
    let first = arms.next()?.above;
    arms.all(|arm| arm.above == first).then_some(first)
}

impl Sentence<'_> {
    /// The control's value with its name.
    fn here(&self) -> String {
        setting(self.at.model, self.at.response.control.parameter, self.threshold.at)
    }

    fn feasible(&self) -> impl Iterator<Item = &Arm> {
        self.threshold.arms.iter().filter(|arm| arm.feasible)
    }

    fn name(&self, species: SpeciesId) -> &str {
        self.at.model.species.get(species.0).map_or("", |species| &species.name)
    }

    /// Whether the present value of the control lies on that side.
    fn is_present_side(&self, above: bool) -> bool {
        let present = self.at.response.control.present;
        if above { present > self.threshold.at } else { present < self.threshold.at }
    }

    /// The state of an arm: who is there.
    fn state(&self, arm: &Arm) -> String {
        match community(self.at.model, &arm.present) {
            none if none == "no species" => "state without species".to_owned(),
            names => format!("state with {names}"),
        }
    }

    /// Whether some state of rest on the picture has a species anywhere on that side.
    fn is_seen(&self, species: usize, above: bool) -> bool {
        let control = &self.at.response.control;
        let close = CLOSE * (control.to - control.from) + self.threshold.error.abs();
        let is_beyond = |x: f64| if above { x > self.threshold.at + close } else { x < self.threshold.at - close };
        let has = |state: &[f64]| state.get(species).is_some_and(|&x| x > 0.0);
        let beside = self.feasible().any(|arm| arm.above == above && arm.present.get(species) == Some(&true));
        let points = self.at.response.branches.iter().flat_map(|branch| &branch.points);
        beside || points.into_iter().any(|point| point.feasible && is_beyond(point.at) && has(&point.state))
    }

    /// Whether the picture on that side may lack states for another reason than that branches meet.
    fn may_lack(&self, above: bool) -> bool {
        let is_there = |ends: [f64; 2]| if above { ends[1] > self.threshold.at } else { ends[0] < self.threshold.at };
        let gap =
            self.at.response.gaps.iter().any(|gap| gap.reason != GapReason::Meeting && is_there([gap.from, gap.to]));
        gap || self.at.response.undefined.iter().any(|(from, to, _)| is_there([*from, *to]))
    }

    /// Those present in the arm of whom there is no state of rest on that side, and what is to be said of them.
    fn losers(&self, arm: &Arm, above: bool) -> Option<String> {
        let species = self.at.model.species.iter().enumerate();
        let lost: Vec<&str> = species
            .filter(|(i, species)| {
                species.role == Role::Population && arm.present.get(*i) == Some(&true) && !self.is_seen(*i, above)
            })
            .map(|(_, species)| species.name.as_str())
            .collect();
        if lost.is_empty() {
            return None;
        }
        Some(self.never(&listed(&lost), above))
    }

    /// That nobody of that name has a state of rest on that side, as far as that is known.
    fn never(&self, lost: &str, above: bool) -> String {
        let (side, here) = (side(above), self.here());
        if self.may_lack(above) {
            format!("no state with {lost} was found {side} {here}")
        } else {
            format!("{lost} cannot persist at rest {side} {here}")
        }
    }
}

/// Points nearer to a threshold than this share of the range may be the threshold itself.
const CLOSE: f64 = 1e-9;

/// What a state that is not stable is called: a saddle where it is one.
fn unstable_word(arm: &Arm) -> String {
    let word = arm.kind.map(kinds::of).map(|look| look.word);
    word.map_or_else(|| "another state".to_owned(), with_article)
}

impl Sentence<'_> {
    fn fold(&self) -> String {
        let here = self.here();
        let Some(above) = common_side(self.feasible()) else { return format!("a branch turns back at {here}") };
        let stable = self.feasible().find(|arm| arm.stable == Some(true));
        let Some(arm) = stable.or_else(|| self.feasible().next()) else { return String::new() };
        let partner = self.feasible().find(|other| !std::ptr::eq(*other, arm));
        if !self.is_present_side(above) {
            let which = if stable.is_some() { ", one stable," } else { ", none of them stable," };
            let count = if partner.is_some() { "two states" } else { "a state" };
            let which = if partner.is_some() || stable.is_none() { which } else { "" };
            return format!("{count}{which} appear{} {} {here}", if partner.is_some() { "" } else { "s" }, side(above));
        }
        let meets = partner.map_or_else(|| "turns back".to_owned(), |other| format!("meets {}", unstable_word(other)));
        let gone = side(!above);
        match (stable, self.losers(arm, !above)) {
            (Some(_), Some(lost)) => format!("{lost}: the {} {meets} and is gone", self.state(arm)),
            (Some(_), None) => {
                format!(
                    "the {} {meets} and is gone {gone} {here}: the community jumps elsewhere (hard)",
                    self.state(arm)
                )
            }
            (None, Some(lost)) => format!("{lost}: the {}, not stable, {meets} and is gone", self.state(arm)),
            (None, None) => format!("the {}, not stable, {meets} and is gone {gone} {here}", self.state(arm)),
        }
    }

    fn transcritical(&self) -> String {
        let here = self.here();
        let crossing = || format!("two branches cross at {here} and exchange stability");
        let Some(species) = self.threshold.species else { return crossing() };
        let name = self.name(species);
        let has = |arm: &&Arm| arm.present.get(species.0) == Some(&true);
        let with: Vec<&Arm> = self.feasible().filter(has).collect();
        let Some(above) = common_side(with.iter().copied()) else { return crossing() };
        let [own, beyond] = [above, !above]
            .map(|above| self.feasible().find(|arm| !has(arm) && arm.above == above).and_then(|arm| arm.stable));
        let (here_side, other_side) = (side(above), side(!above));
        match (with.first().and_then(|arm| arm.stable), own, beyond) {
            (Some(true), ..) if !self.is_present_side(above) => format!("{name} can invade {here_side} {here}"),
            (Some(true), ..) => {
                let lost = with.first().and_then(|arm| self.losers(arm, !above));
                match lost {
                    Some(lost) if lost == self.never(name, !above) => format!("{lost}: it dwindles to 0 there"),
                    Some(lost) => format!("{lost}: {name} dwindles to 0 there"),
                    None => format!("{name} dwindles to 0 at {here}"),
                }
            }
            (_, Some(true), Some(false)) => format!(
                "{name} can invade {other_side} {here}, and there is no state near to settle in: the community jumps \
                 elsewhere (hard)"
            ),
            _ => format!("a state with {name}, not stable, is there {here_side} {here}"),
        }
    }

    fn pitchfork(&self) -> String {
        let here = self.here();
        match (self.unstable_side(), self.threshold.criticality) {
            (Some(above), Some(Criticality::Soft)) => {
                format!("{} {here} the state gives way softly to two stable ones beside it", side(above))
            }
            (Some(above), Some(Criticality::Hard)) => {
                format!("{} {here} the state is not stable and the community jumps elsewhere (hard)", side(above))
            }
            _ => format!("two states part from one at {here}"),
        }
    }

    /// The side on which a state is not stable that is stable on the other.
    fn unstable_side(&self) -> Option<bool> {
        let any =
            |above: bool, stable: bool| self.feasible().any(|arm| arm.above == above && arm.stable == Some(stable));
        [true, false].into_iter().find(|&above| any(above, false) && any(!above, true) && !any(!above, false))
    }

    /// A pair of eigenvalues, or a multiplier −1, becomes critical.
    fn oscillation(&self, softly: &str, what: &str) -> String {
        let here = self.here();
        let Some(above) = self.unstable_side() else {
            return format!("{what} are born at {here} around a state that is stable on neither side");
        };
        let there = side(above);
        match self.threshold.criticality {
            Some(Criticality::Soft) => format!("{softly} {there} {here}"),
            Some(Criticality::Hard) => {
                let other = side(!above);
                format!(
                    "{there} {here} the state is not stable and the community jumps elsewhere (hard); {other} it, \
                     {what} that are not stable surround it"
                )
            }
            None => format!("{there} {here} the state is not stable: {what} are born, softly or not is undecided"),
        }
    }

    fn border(&self) -> String {
        let here = self.here();
        let kink = match &self.threshold.kink {
            Some([one, other]) => format!("the kink where {one} = {other}"),
            None => "a kink".to_owned(),
        };
        let arms: Vec<&Arm> = self.feasible().collect();
        match (common_side(arms.iter().copied()), arms.len()) {
            (Some(above), 2..) => {
                let stable = arms.iter().filter(|arm| arm.stable == Some(true)).count();
                let which = ["none of them stable", "one stable", "both stable"][stable.min(2)];
                let lost = arms.first().and_then(|arm| self.losers(arm, !above));
                match lost.filter(|_| self.is_present_side(above)) {
                    Some(lost) => format!("{lost}: two states, {which}, meet at {kink} and are gone"),
                    None => format!("two states, {which}, appear {} {here} at {kink}", side(above)),
                }
            }
            (Some(above), _) => format!("the state is gone {} {here}, at {kink}", side(!above)),
            (None, _) => self.across(&arms, &kink),
        }
    }

    /// A state on either side of a kink.
    fn across(&self, arms: &[&Arm], kink: &str) -> String {
        let here = self.here();
        let on = |above: bool| arms.iter().find(|arm| arm.above == above);
        let (Some(below), Some(above)) = (on(false), on(true)) else {
            return format!("the state meets {kink} at {here}");
        };
        if let Some(unstable) = self.unstable_side() {
            return format!("the state is not stable {} {here}, beyond {kink}", side(unstable));
        }
        match (below.kind, above.kind) {
            (Some(one), Some(other)) if one != other => {
                let [one, other] = [one, other].map(|kind| kinds::of(kind).word);
                format!("the type changes from {one} to {other} at {here}, at {kink}")
            }
            _ => format!("the state passes {kink} at {here}; its type stays"),
        }
    }

    fn exit(&self) -> String {
        let here = self.here();
        let (Some(species), Some(above)) = (self.threshold.species, common_side(self.feasible())) else {
            return format!("a state leaves the search box at {here}, or an abundance becomes negative");
        };
        let (name, gone) = (self.name(species), side(!above));
        let largest = self.at.response.branches.iter().flat_map(|branch| &branch.points);
        let largest =
            largest.filter_map(|point| point.state.get(species.0)).fold(0.0, |most: f64, x| most.max(x.abs()));
        let is_zero = self.threshold.state.get(species.0).is_some_and(|x| x.abs() <= CLOSE * largest);
        if !is_zero {
            return format!("{name} leaves the search box {gone} {here}: nothing is said of the state there");
        }
        let lost = self.feasible().next().and_then(|arm| self.losers(arm, !above));
        match lost.filter(|_| self.is_present_side(above)) {
            Some(lost) => format!("{lost}: {name} reaches 0 and would be negative"),
            None => format!("{name} reaches 0 at {here}; {gone} it the state would be negative"),
        }
    }
}
