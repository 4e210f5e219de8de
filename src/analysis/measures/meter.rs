//! All quantities at one equilibrium, from what a scenario's equilibria share.

use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::analysis::subject::Subject;

use super::elasticity::Slopes;
use super::setting::Setting;
use super::yields::Harvests;
use super::{Measures, amplification, elasticity, invasion, leading, press, reactivity, stochastic};

/// What the equilibria of one scenario share: its harvests, and how its rows move with its parameters, as tapes.
#[derive(Clone, Debug)]
pub struct Meter {
    harvests: Harvests,
    slopes: Slopes,
}

impl Meter {
    /// Prepares a scenario; its graph gains the derivatives with respect to its parameters.
    pub fn new(subject: &mut Subject<'_>) -> Self {
        let slopes = Slopes::new(subject);
        Self { harvests: Harvests::new(subject), slopes }
    }

    /// Everything at one equilibrium of the scenario that the meter was made for; without a linearisation yields and totals
    /// only. Once `stop` says so, what takes long is left `None`.
    ///
    /// # Panics
    /// If equilibrium, linearisation and subject are not of one order.
    pub fn measure(
        &self,
        subject: &mut Subject<'_>,
        equilibrium: &Equilibrium,
        linear: Option<&Linearisation>,
        stop: &dyn Fn() -> bool,
    ) -> Measures {
        assert_eq!(equilibrium.state.len(), subject.species(), "an equilibrium of this subject");
        let setting = linear.map(|linear| Setting::new(equilibrium, linear, subject.step()));
        let mut measures = match &setting {
            Some(setting) => self.linear(subject, setting, stop),
            None => Measures::default(),
        };
        measures.groups = invasion::of_groups(subject.model, &equilibrium.state, setting.as_ref());
        measures.yields = self.harvests.at(subject, &equilibrium.state);
        measures
    }

    fn linear(&self, subject: &Subject<'_>, setting: &Setting<'_>, stop: &dyn Fn() -> bool) -> Measures {
        let mut measures = Measures {
            reactivity: reactivity::absolute(setting),
            reactivity_proportional: reactivity::proportional(setting),
            reactivity_present: reactivity::of_present(setting),
            amplification: amplification::of_all(setting, stop),
            amplification_present: amplification::of_present(setting, stop),
            invasion: invasion::of_species(subject.model, setting),
            net_effects: press::net_effects(setting, stop),
            elasticities: elasticity::of(&self.slopes, subject, setting, stop),
            ..Measures::default()
        };
        leading::fill(&mut measures, setting);
        stochastic::fill(&mut measures, setting, stop);
        measures
    }
}

/// Everything at one equilibrium; see [`Meter`], which serves several of one scenario faster.
///
/// # Panics
/// If equilibrium, linearisation and subject are not of one order.
pub fn measure(
    subject: &mut Subject<'_>,
    equilibrium: &Equilibrium,
    linear: Option<&Linearisation>,
    stop: &dyn Fn() -> bool,
) -> Measures {
    Meter::new(subject).measure(subject, equilibrium, linear, stop)
}
