//! What each harvest yields at the equilibrium.

use crate::analysis::subject::Subject;
use crate::expr::graph::NodeId;
use crate::model::SpeciesId;
use crate::model::system::HarvestNodes;

use super::HarvestYield;
use super::values::Values;

/// The harvests of a scenario on one tape.
#[derive(Clone, Debug)]
pub(super) struct Harvests {
    values: Values,
}

impl Harvests {
    pub(super) fn new(subject: &Subject<'_>) -> Self {
        let nodes = subject.plan.harvests.iter().flat_map(nodes).collect();
        Self { values: Values::new(&subject.graph, nodes) }
    }

    /// What they take or count, and prices times amounts less cost; per time unit, for a map per step.
    pub(super) fn at(&self, subject: &mut Subject<'_>, state: &[f64]) -> Vec<HarvestYield> {
        let values = self.values.at(&mut subject.graph, &subject.plan.values, state);
        let mut values = values.into_iter();
        subject.plan.harvests.iter().map(|harvest| of(harvest, &mut values)).collect()
    }
}

/// In the order in which [`of`] reads them.
fn nodes(harvest: &HarvestNodes) -> impl Iterator<Item = NodeId> + '_ {
    let of = |pairs: &[(SpeciesId, NodeId)]| pairs.iter().map(|pair| pair.1).collect::<Vec<_>>();
    of(&harvest.amounts).into_iter().chain(of(&harvest.price)).chain(harvest.cost)
}

fn of(harvest: &HarvestNodes, values: &mut impl Iterator<Item = Option<f64>>) -> HarvestYield {
    let mut next = |_: &_| values.next().flatten();
    let amounts: Vec<Option<f64>> = harvest.amounts.iter().map(&mut next).collect();
    let prices: Vec<Option<f64>> = harvest.price.iter().map(&mut next).collect();
    let cost = harvest.cost.map(|_| values.next().flatten());
    let amount_of = |species: SpeciesId| -> Option<f64> {
        let of_it = harvest.amounts.iter().zip(&amounts).filter(|((taken, _), _)| *taken == species);
        of_it.map(|(_, amount)| *amount).sum()
    };
    let revenue = || -> Option<f64> {
        harvest.price.iter().zip(&prices).map(|(&(species, _), price)| Some((*price)? * amount_of(species)?)).sum()
    };
    let is_priced = !harvest.price.is_empty() || cost.is_some();
    let value = is_priced.then(|| Some(revenue()? - cost.unwrap_or(Some(0.0))?)).flatten();
    let known = harvest.amounts.iter().zip(&amounts).filter_map(|(&(species, _), amount)| Some((species, (*amount)?)));
    HarvestYield { name: harvest.name.clone(), amounts: known.collect(), value: value.filter(|x| x.is_finite()) }
}
