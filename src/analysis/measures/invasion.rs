//! Who can come in: growth when rare of what is absent.
//!
//! Where the rates have a derivative, the per-capita rate at absence (the row divided by its species) is the diagonal entry
//! of A, and the rest of the row is 0 unless somebody else feeds the species. So A has all that is needed, as long as the
//! rows of the absent are looked at for others who feed them.

use crate::model::{Model, SpeciesId};

use super::Group;
use super::setting::{Setting, leading_rate};

/// Per-capita growth of each absent species that is its own population: A_ii; for a map ln A_ii/T (Turelli 1978;
/// Chesson 2000). Per time unit.
///
/// `None` where others feed it, so that it has no rate of its own, and for a map where A_ii ≤ 0.
pub(super) fn of_species(model: &Model, setting: &Setting<'_>) -> Vec<(SpeciesId, Option<f64>)> {
    let grouped: Vec<usize> = groups(model).into_iter().flat_map(|(_, members)| members).collect();
    let is_absent = |i: &usize| !setting.present.contains(i) && !grouped.contains(i);
    (0..setting.n).filter(is_absent).map(|i| (SpeciesId(i), of_one(setting, i))).collect()
}

fn of_one(setting: &Setting<'_>, i: usize) -> Option<f64> {
    let own = setting.jacobian[i * setting.n + i];
    if !is_closed(setting, &[i]) {
        return None;
    }
    match setting.step {
        None => Some(own),
        Some(step) => Some(own.ln() / step).filter(|rate| rate.is_finite()),
    }
}

/// Populations of two or more species: their totals, and where all are absent the leading eigenvalue of their block of A.
pub(super) fn of_groups(model: &Model, state: &[f64], setting: Option<&Setting<'_>>) -> Vec<Group> {
    let group = |(name, members): (String, Vec<usize>)| Group {
        total: members.iter().map(|&i| state[i]).sum(),
        invasion: setting.and_then(|setting| of_group(setting, &members)),
        name,
        members: members.into_iter().map(SpeciesId).collect(),
    };
    groups(model).into_iter().map(group).collect()
}

fn of_group(setting: &Setting<'_>, members: &[usize]) -> Option<f64> {
    let is_absent = members.iter().all(|i| !setting.present.contains(i));
    let is_open = !is_absent || !is_closed(setting, members);
    if is_open { None } else { leading_rate(&setting.block(members), members.len(), setting.step) }
}

/// Whether nobody else feeds these.
fn is_closed(setting: &Setting<'_>, members: &[usize]) -> bool {
    let n = setting.n;
    let outside = |&j: &usize| !members.contains(&j);
    members.iter().all(|&i| (0..n).filter(outside).all(|j| setting.jacobian[i * n + j] == 0.0))
}

/// Names with two or more species under them, in the order of the first.
fn groups(model: &Model) -> Vec<(String, Vec<usize>)> {
    let mut groups: Vec<(String, Vec<usize>)> = Vec::new();
    for (i, species) in model.species.iter().enumerate() {
        let Some(name) = &species.population else { continue };
        match groups.iter_mut().find(|(known, _)| known == name) {
            Some((_, members)) => members.push(i),
            None => groups.push((name.clone(), vec![i])),
        }
    }
    groups.retain(|(_, members)| members.len() > 1);
    groups
}
