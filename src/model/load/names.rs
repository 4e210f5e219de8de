//! Names and formulas: what can be used where, and what was probably meant.
//!
//! [`Names`] collects what the file declares; then every formula and every inner key is resolved against it. Nothing is
//! evaluated. Start at [`Names::declare`] and [`Names::formula`].

use std::collections::BTreeMap;

use super::desk::Desk;
use crate::diag::nearest::nearest;
use crate::diag::{Diagnostic, Location, Span};
use crate::expr::ast::{Builtin, Expr, ExprKind};
use crate::expr::lex::is_identifier;
use crate::expr::parse::parse;
use crate::model::messages::{Message, digits};
use crate::model::tree::{Entry, Kind, Node, normal};
use crate::model::yaml::Typed;
use crate::model::{Formula, Name, ParameterId, SpeciesId, Term, follow};

/// Everything that formulas and inner keys can name.
#[derive(Default)]
pub(super) struct Names {
    declared: BTreeMap<String, (Name, Location)>,
    /// Long names of species, each with its symbol.
    long: BTreeMap<String, String>,
    /// Symbols in species order.
    symbols: Vec<String>,
    /// Part of the declarations could not be read, so that a name that is missing proves nothing.
    pub(super) incomplete: bool,
}

/// What a formula may use.
#[derive(Clone, Copy)]
pub(super) enum Scope {
    Everything,
    /// Parameters alone; the words say whose formulas these are.
    Parameters(&'static str),
}

/// A formula's text and where it comes from.
pub(super) struct Written {
    pub(super) text: String,
    pub(super) at: Location,
    pub(super) origin: Vec<u32>,
}

/// A name of letters, digits and underscores that resembles the text.
pub(super) fn as_symbol(text: &str) -> String {
    let letters: String = normal(text).chars().map(|c| if is_identifier(&format!("a{c}")) { c } else { '_' }).collect();
    let letters = letters.trim_matches('_');
    if is_identifier(letters) { letters.to_owned() } else { format!("x{letters}") }
}

impl Names {
    /// Declares a name; a name that cannot be used is reported, and kept so that its uses are not reported as well.
    pub(super) fn declare(&mut self, desk: &mut Desk<'_>, name: &str, at: Location, stands_for: Name) {
        let name = normal(name);
        if !is_identifier(&name) {
            desk.say(Message::NotASymbol, at, &[&name, &format!("write for example {}", as_symbol(&name))]);
        } else if Builtin::by_name(&name).is_some() {
            desk.say(Message::FunctionName, at, &[&name]);
        }
        if let Some((_, first)) = self.declared.get(&name) {
            desk.say_both(Message::NameTaken, at, &[&name], (*first, "first here"));
            return;
        }
        self.declared.insert(name, (stands_for, at));
    }

    /// Declares a species' symbol together with its long name.
    pub(super) fn declare_species(&mut self, desk: &mut Desk<'_>, long: &str, symbol: &str, at: Location) {
        let id = SpeciesId(self.symbols.len());
        self.declare(desk, symbol, at, Name::Species(id));
        self.symbols.push(normal(symbol));
        if long != symbol {
            self.long.insert(long.to_owned(), normal(symbol));
        }
    }

    /// What a declared name stands for from now on.
    pub(super) fn renumber(&mut self, name: &str, stands_for: Name) {
        if let Some((old, _)) = self.declared.get_mut(name) {
            *old = stands_for;
        }
    }

    pub(super) fn get(&self, name: &str) -> Option<Name> {
        self.declared.get(&normal(name)).map(|(name, _)| *name)
    }

    /// Name by name, what it stands for.
    pub(super) fn into_map(self) -> BTreeMap<String, Name> {
        self.declared.into_iter().map(|(name, (stands_for, _))| (name, stands_for)).collect()
    }

    fn describe(name: Name) -> &'static str {
        match name {
            Name::Species(_) => "a species",
            Name::Parameter(_) => "a parameter",
            Name::Shorthand(_) => "a shorthand",
        }
    }

    /// The species that a key or value names by its symbol.
    pub(super) fn species(&self, desk: &mut Desk<'_>, symbol: &str, at: Location) -> Option<SpeciesId> {
        let symbols = self.symbols.join(", ");
        match self.get(symbol) {
            Some(Name::Species(id)) => return Some(id),
            Some(other) => desk.say(Message::NotASpecies, at, &[&symbol, &Self::describe(other), &symbols]),
            None if self.incomplete || self.symbols.is_empty() => desk.unsure(),
            None => {
                let near = desk.nearest(symbol, self.symbols.iter().map(String::as_str));
                match (self.long.get(symbol), near) {
                    (Some(meant), _) => desk.say(Message::LongName, at, &[&symbol, meant]),
                    (None, Some(near)) => desk.say(Message::UnknownSpeciesNear, at, &[&symbol, &near]),
                    (None, None) => desk.say(Message::UnknownSpecies, at, &[&symbol, &symbols]),
                }
            }
        }
        None
    }

    /// The parameter that a key or value names.
    pub(super) fn parameter(&self, desk: &mut Desk<'_>, name: &str, at: Location) -> Option<ParameterId> {
        match self.get(name) {
            Some(Name::Parameter(id)) => return Some(id),
            Some(other) => desk.say(Message::NotAParameter, at, &[&name, &Self::describe(other)]),
            None if self.incomplete => desk.unsure(),
            None => match desk.nearest(name, self.parameters()) {
                Some(near) => desk.say(Message::UnknownParameterNear, at, &[&name, &near]),
                None => desk.say(Message::UnknownParameter, at, &[&name]),
            },
        }
        None
    }

    fn parameters(&self) -> impl Iterator<Item = &str> {
        let is_parameter = |name: &Name| matches!(name, Name::Parameter(_));
        self.declared.iter().filter(move |(_, (name, _))| is_parameter(name)).map(|(name, _)| name.as_str())
    }

    /// One formula for each species that a map names.
    pub(super) fn terms(&self, desk: &mut Desk<'_>, node: &Node, name: &str, example: &str) -> Option<Vec<Term>> {
        let help = format!("write symbols and formulas, for example {example}");
        let entries = desk.map(node, name, "a map from symbols to formulas", &help)?;
        if entries.is_empty() {
            desk.say(Message::NoEntries, node.at, &[&name, &help]);
        }
        Some(entries.iter().filter_map(|entry| self.term(desk, entry)).collect())
    }

    fn term(&self, desk: &mut Desk<'_>, entry: &Entry) -> Option<Term> {
        let species = self.species(desk, &entry.key, entry.key_at);
        let name = format!("\"{}\"", entry.key);
        let formula = self.formula(desk, &entry.value, &name, Scope::Everything);
        Some(Term { species: species?, key_at: entry.key_at, formula: formula? })
    }

    /// The formula that a single value holds. `name` is what messages call it.
    pub(super) fn formula(&self, desk: &mut Desk<'_>, node: &Node, name: &str, scope: Scope) -> Option<Formula> {
        let typed = desk.scalar(node, name, "a formula")?;
        let Kind::Scalar(scalar) = &node.kind else { return None };
        if matches!(typed, Typed::Number(value) if !value.is_finite()) {
            desk.say(Message::NotFinite, node.at, &[&name, &scalar.value]);
            return None;
        }
        let source = desk.sources.get(node.at.source).map_or("", |source| source.text.as_str());
        let origin = follow::origin(source, node.at.span, scalar.style, &scalar.value);
        self.written(desk, Written { text: scalar.value.clone(), at: node.at, origin }, scope)
    }

    /// Reads and checks a formula; `None` after saying all that is wrong with it.
    pub(super) fn written(&self, desk: &mut Desk<'_>, written: Written, scope: Scope) -> Option<Formula> {
        let (expr, slips) = parse(&written.text);
        let formula = Formula { text: written.text, expr, at: written.at, origin: written.origin };
        let mut found: Vec<Diagnostic> = slips
            .into_iter()
            .map(|slip| {
                Diagnostic::error(formula.locate(slip.span), slip.message).expected(slip.expected).help(slip.help)
            })
            .collect();
        let mut seen: Vec<&str> = Vec::new();
        let mut unsure = false;
        let hurry = desk.is_full();
        formula.expr.walk(&mut |part| match &part.kind {
            ExprKind::Name(name) if !seen.contains(&name.as_str()) => {
                seen.push(name);
                unsure |= self.incomplete && !self.declared.contains_key(name);
                found.extend(self.misused(name, formula.locate(part.span), scope, hurry));
            }
            ExprKind::Call(Builtin::Ramp | Builtin::Clamp, arguments) => {
                found.extend(bounds_reversed(&formula, part, arguments));
            }
            _ => {}
        });
        if !found.is_empty() && !unsure {
            found.extend(self.hidden_time(&formula, &seen));
        }
        if unsure {
            desk.unsure();
        }
        let sound = found.is_empty() && !unsure;
        for diagnostic in found {
            desk.report(diagnostic);
        }
        sound.then_some(formula)
    }

    /// The time in a part of the formula that could not be read, most often as `sin(2*pi*t)`.
    fn hidden_time(&self, formula: &Formula, seen: &[&str]) -> Option<Diagnostic> {
        let mut unknown =
            ["t", "time"].into_iter().filter(|word| !seen.contains(word) && !self.declared.contains_key(*word));
        let (start, word) = unknown.find_map(|word| Some((whole_word(&formula.text, word)?, word)))?;
        let at = formula.locate(Span::new(start, start + word.len()));
        Some(Message::TimeInFormula.at(at, &[&word]))
    }

    /// What is wrong with the use of a name. In a hurry, where it is to be counted only, the cause is not looked for.
    fn misused(&self, name: &str, at: Location, scope: Scope, hurry: bool) -> Option<Diagnostic> {
        match (self.declared.get(name), scope) {
            (Some(_), Scope::Everything) | (Some((Name::Parameter(_), _)), _) => None,
            (Some((other, _)), Scope::Parameters(whose)) => {
                Some(Message::ParametersOnly.at(at, &[&name, &Self::describe(*other), &whose]))
            }
            (None, _) if self.incomplete => None,
            (None, _) if hurry => Some(Message::UnknownName.at(at, &[&name])),
            (None, _) => Some(self.unknown(name, at)),
        }
    }

    /// What to say of a name that nothing bears: the likeliest cause first.
    fn unknown(&self, name: &str, at: Location) -> Diagnostic {
        if let Some(symbol) = self.long.get(name) {
            return Message::LongName.at(at, &[&name, symbol]);
        }
        if let Some(near) = self.declared.keys().find(|known| known.to_lowercase() == name.to_lowercase()) {
            return Message::NameCase.at(at, &[&name, near]);
        }
        match name {
            "t" | "time" => return Message::TimeInFormula.at(at, &[&name]),
            "pi" | "π" => return Message::Constant.at(at, &[&name, &std::f64::consts::PI]),
            "e" => return Message::Constant.at(at, &[&name, &std::f64::consts::E]),
            _ if Builtin::by_name(name).is_some() => return Message::FunctionAlone.at(at, &[&name]),
            _ => {}
        }
        match nearest(name, self.declared.keys().map(String::as_str)) {
            Some(near) => Message::UnknownNameNear.at(at, &[&name, &near]),
            None => Message::UnknownName.at(at, &[&name]),
        }
    }
}

/// Where a word stands by itself.
fn whole_word(text: &str, word: &str) -> Option<usize> {
    let joins = |c: char| c.is_ascii_digit() || is_identifier(c.encode_utf8(&mut [0; 4]));
    let mut places = text.match_indices(word).map(|(start, _)| start);
    places.find(|&start| !text[..start].ends_with(joins) && !text[start + word.len()..].starts_with(joins))
}

/// Bounds that are plain numbers and in the wrong order; those of other kinds are for the lint to weigh.
fn bounds_reversed(formula: &Formula, call: &Expr, arguments: &[Expr]) -> Option<Diagnostic> {
    let [_, low, high] = arguments else { return None };
    let (lo, hi) = (literal(low)?, literal(high)?);
    let ExprKind::Call(builtin, _) = call.kind else { return None };
    (lo >= hi).then(|| {
        let at = formula.locate(low.span.to(high.span));
        Message::BoundsReversed.at(at, &[&digits(lo), &digits(hi), &builtin.row().name])
    })
}

fn literal(expr: &Expr) -> Option<f64> {
    match &expr.kind {
        ExprKind::Number(value) => Some(*value),
        ExprKind::Neg(inner) => literal(inner).map(|value| -value),
        _ => None,
    }
}
