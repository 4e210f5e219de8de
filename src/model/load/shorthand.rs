//! The section `shorthand`: named formulas in any order, put into one in which each uses only earlier ones.

use std::collections::BTreeMap;

use super::desk::{Desk, Fields, is_null};
use super::names::{Names, Scope};
use crate::expr::ast::ExprKind;
use crate::model::messages::Message;
use crate::model::tree::Entry;
use crate::model::{Name, Shorthand, ShorthandId};

/// Declares the names of the section; the formulas may use each other in any order.
pub(super) fn declare<'n>(desk: &mut Desk<'_>, fields: &Fields<'n>, names: &mut Names) -> &'n [Entry] {
    let Some(node) = fields.get("shorthand").filter(|node| !is_null(node)) else { return &[] };
    let help = "write names and formulas, for example {intake: a*S/(1 + a*h*S)}";
    let Some(entries) = desk.map(node, "\"shorthand\"", "a map from names to formulas", help) else {
        names.incomplete = true;
        return &[];
    };
    for (index, entry) in entries.iter().enumerate() {
        names.declare(desk, &entry.key, entry.key_at, Name::Shorthand(ShorthandId(index)));
    }
    entries
}

/// The formulas, sorted; the names are renumbered to match. Circles are reported.
pub(super) fn read(desk: &mut Desk<'_>, entries: &[Entry], names: &mut Names) -> Vec<Shorthand> {
    let found: Vec<Shorthand> = entries
        .iter()
        .filter_map(|entry| {
            let formula = names.formula(desk, &entry.value, &format!("\"{}\"", entry.key), Scope::Everything)?;
            Some(Shorthand { name: entry.key.clone(), at: entry.key_at, formula })
        })
        .collect();
    let order = sorted(desk, &found);
    let mut slots: Vec<Option<Shorthand>> = found.into_iter().map(Some).collect();
    let sorted: Vec<Shorthand> = order.into_iter().filter_map(|index| slots[index].take()).collect();
    for (index, shorthand) in sorted.iter().enumerate() {
        names.renumber(&shorthand.name, Name::Shorthand(ShorthandId(index)));
    }
    sorted
}

#[derive(Clone, Copy, PartialEq)]
enum State {
    Unseen,
    /// On the path that is being followed.
    Open,
    Done,
}

/// An order in which each formula uses only earlier ones, near to the file's; depth-first, with the path kept in a list,
/// so that no chain is too long for the stack.
fn sorted(desk: &mut Desk<'_>, found: &[Shorthand]) -> Vec<usize> {
    let index: BTreeMap<&str, usize> = found.iter().enumerate().map(|(i, one)| (one.name.as_str(), i)).collect();
    let uses: Vec<Vec<usize>> = found.iter().map(|one| used(one, &index)).collect();
    let mut state = vec![State::Unseen; found.len()];
    let mut order = Vec::with_capacity(found.len());
    for start in 0..found.len() {
        // Each element of the path: a formula, and how many of those it uses were followed.
        let mut path = if state[start] == State::Unseen { vec![(start, 0)] } else { Vec::new() };
        while let Some((here, followed)) = path.last_mut() {
            let here = *here;
            state[here] = State::Open;
            let Some(&next) = uses[here].get(*followed) else {
                state[here] = State::Done;
                order.push(here);
                path.pop();
                continue;
            };
            *followed += 1;
            match state[next] {
                State::Unseen => path.push((next, 0)),
                State::Open => report(desk, found, &path, next),
                State::Done => {}
            }
        }
    }
    order
}

fn used(shorthand: &Shorthand, index: &BTreeMap<&str, usize>) -> Vec<usize> {
    let mut found = Vec::new();
    shorthand.formula.expr.walk(&mut |part| {
        if let ExprKind::Name(name) = &part.kind
            && let Some(&other) = index.get(name.as_str())
            && !found.contains(&other)
        {
            found.push(other);
        }
    });
    found
}

fn report(desk: &mut Desk<'_>, found: &[Shorthand], path: &[(usize, usize)], back_to: usize) {
    let circle = path.iter().map(|&(index, _)| index).skip_while(|&index| index != back_to);
    let mut circle: Vec<&str> = circle.map(|index| found[index].name.as_str()).collect();
    circle.push(found[back_to].name.as_str());
    let shorthand = &found[back_to];
    desk.say(Message::Cycle, shorthand.at, &[&shorthand.name, &circle.join(" → ")]);
}
