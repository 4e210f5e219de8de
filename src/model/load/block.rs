//! The section `lotka_volterra`, inline or from files.
//!
//! [`open`] comes before the species are counted, because files may bring species along; [`Raw::read`] after all names
//! are known.

use super::desk::{Desk, Fields};
use super::keys::BLOCK;
use super::matrix::{self, SymbolTable};
use super::names::{Names, Scope, Written};
use super::species::{SPECIES_LIMIT, bare};
use super::table::{Cell, Table};
use crate::diag::Location;
use crate::model::messages::{Message, digits};
use crate::model::tree::{Entry as Pair, Kind, Node};
use crate::model::{Block, Entry, Placed, Species};

const SCOPE: Scope = Scope::Parameters("entries of a Lotka–Volterra block");

/// A block whose entries are not read yet.
pub(super) struct Raw<'n> {
    at: Location,
    growth: Source<'n>,
    matrix: Source<'n>,
    upper: Option<Placed<f64>>,
}

/// Where entries come from.
enum Source<'n> {
    Inline(&'n [Pair]),
    File(SymbolTable),
    /// Nothing that could be read.
    Lost,
}

/// Finds the block and reads its files. Where a file cannot be read, the names are incomplete from then on.
pub(super) fn open<'n>(desk: &mut Desk<'_>, fields: &Fields<'n>, names: &mut Names) -> Option<Raw<'n>> {
    let entry = fields.entry("lotka_volterra")?;
    let fields = desk.fields(&entry.value, &BLOCK, "the Lotka–Volterra block", entry.key_at)?;
    let growth = fields.get("growth").map_or(Source::Lost, |node| source(desk, node, "\"growth\"", matrix::growth));
    let matrix = fields.get("matrix").map_or(Source::Lost, |node| source(desk, node, "\"matrix\"", matrix::matrix));
    let upper = fields.get("upper").and_then(|node| {
        let value = desk.positive(node, "\"upper\"")?;
        Some(Placed { value, at: node.at })
    });
    names.incomplete |= matches!(growth, Source::Lost) || matches!(matrix, Source::Lost);
    if let (Source::File(growth), Source::File(matrix)) = (&growth, &matrix) {
        same_species(desk, growth, matrix);
    }
    Some(Raw { at: entry.key_at, growth, matrix, upper })
}

type Read = fn(&mut Desk<'_>, &str, Location) -> Option<SymbolTable>;

fn source<'n>(desk: &mut Desk<'_>, node: &'n Node, name: &str, read: Read) -> Source<'n> {
    let what = "a map from symbols, or the name of a CSV file";
    match &node.kind {
        Kind::Mapping(entries) => Source::Inline(entries),
        Kind::Scalar(_) => desk
            .line(node, name, what)
            .and_then(|path| read(desk, &path.value, path.at))
            .map_or(Source::Lost, Source::File),
        Kind::Sequence(_) => {
            desk.say(
                Message::NotAMap,
                node.at,
                &[&name, &what, &"write for example {H: 0.8, P: -0.2}, or a file's name"],
            );
            Source::Lost
        }
        Kind::Broken => Source::Lost,
    }
}

fn same_species(desk: &mut Desk<'_>, growth: &SymbolTable, matrix: &SymbolTable) {
    let lacks =
        |table: &SymbolTable, symbol: &Placed<String>| !table.symbols.iter().any(|one| one.value == symbol.value);
    for symbol in matrix.symbols.iter().filter(|symbol| lacks(growth, symbol)) {
        desk.say(Message::GrowthMissing, symbol.at, &[&symbol.value]);
    }
    for symbol in growth.symbols.iter().filter(|symbol| lacks(matrix, symbol)) {
        desk.say(Message::MatrixMissing, symbol.at, &[&symbol.value]);
    }
}

impl Raw<'_> {
    /// Adds the species that only the files know, and gives every species of the block its upper side where it has none.
    pub(super) fn complete(&self, desk: &mut Desk<'_>, names: &mut Names, species: &mut Vec<Species>) {
        for part in [&self.growth, &self.matrix] {
            let Source::File(file) = part else { continue };
            for symbol in file.symbols.iter().filter(|symbol| !symbol.value.is_empty()) {
                if names.get(&symbol.value).is_none() {
                    names.declare_species(desk, &symbol.value, &symbol.value, symbol.at);
                    species.push(bare(&symbol.value, symbol.value.clone(), symbol.at, None));
                }
            }
        }
        let Some(upper) = &self.upper else { return };
        for one in species.iter_mut().filter(|one| one.upper.is_none() && self.names(&one.symbol)) {
            one.upper = Some(upper.value);
            if upper.value <= one.lower {
                desk.say(Message::UpperBelowLower, upper.at, &[&digits(upper.value), &digits(one.lower)]);
            }
        }
    }

    fn names(&self, symbol: &str) -> bool {
        [&self.growth, &self.matrix].into_iter().any(|part| match part {
            Source::Inline(entries) => entries.iter().any(|entry| entry.key == symbol),
            Source::File(file) => file.symbols.iter().any(|one| one.value == symbol),
            Source::Lost => false,
        })
    }

    /// The block with all entries, absent ones 0.
    pub(super) fn read(&self, desk: &mut Desk<'_>, names: &Names, species: usize) -> Option<Block> {
        // A matrix that is too large to be held was reported; do not try to hold it.
        if species > SPECIES_LIMIT {
            return None;
        }
        let mut growth = vec![Entry::Number(0.0); species];
        match &self.growth {
            Source::Inline(entries) => row(desk, names, entries, &mut growth),
            Source::File(file) => {
                for (symbol, cells) in file.symbols.iter().zip(&file.cells) {
                    let at = names.species(desk, &symbol.value, symbol.at);
                    let entry = cells.first().and_then(|&cell| cell_entry(desk, names, &file.table, cell));
                    if let (Some(at), Some(entry)) = (at, entry) {
                        growth[at.0] = entry;
                    }
                }
            }
            Source::Lost => {}
        }
        let mut matrix = vec![Entry::Number(0.0); species * species];
        match &self.matrix {
            Source::Inline(entries) => {
                for entry in *entries {
                    let help = "write symbols and numbers, for example {H: -0.001, P: -0.02}";
                    let inner = desk.map(&entry.value, &format!("\"{}\"", entry.key), "a map from symbols", help);
                    let at = names.species(desk, &entry.key, entry.key_at);
                    if let (Some(at), Some(inner)) = (at, inner) {
                        row(desk, names, inner, &mut matrix[at.0 * species..(at.0 + 1) * species]);
                    }
                }
            }
            Source::File(file) => square(desk, names, file, species, &mut matrix),
            Source::Lost => {}
        }
        Some(Block { at: self.at, growth, matrix })
    }
}

/// Entries of a map into the row of a species.
fn row(desk: &mut Desk<'_>, names: &Names, entries: &[Pair], into: &mut [Entry]) {
    for entry in entries {
        let species = names.species(desk, &entry.key, entry.key_at);
        let formula = names.formula(desk, &entry.value, &format!("\"{}\"", entry.key), SCOPE);
        if let (Some(species), Some(formula)) = (species, formula) {
            into[species.0] = entry_of(formula);
        }
    }
}

fn square(desk: &mut Desk<'_>, names: &Names, file: &SymbolTable, species: usize, into: &mut [Entry]) {
    let mut resolve = |symbol: &Placed<String>| names.species(desk, &symbol.value, symbol.at);
    let columns: Vec<_> = file.columns.iter().map(&mut resolve).collect();
    let rows: Vec<_> = file.symbols.iter().map(&mut resolve).collect();
    for (row, cells) in rows.iter().zip(&file.cells) {
        for (column, &cell) in columns.iter().zip(cells) {
            let entry = cell_entry(desk, names, &file.table, cell);
            if let (Some(row), Some(column), Some(entry)) = (row, column, entry) {
                into[row.0 * species + column.0] = entry;
            }
        }
    }
}

fn entry_of(formula: crate::model::Formula) -> Entry {
    use crate::expr::ast::ExprKind;
    match &formula.expr.kind {
        ExprKind::Number(value) => Entry::Number(*value),
        ExprKind::Neg(inner) => match inner.kind {
            ExprKind::Number(value) => Entry::Number(-value),
            _ => Entry::Formula(Box::new(formula)),
        },
        _ => Entry::Formula(Box::new(formula)),
    }
}

/// A number, or a formula of parameters.
fn cell_entry(desk: &mut Desk<'_>, names: &Names, table: &Table, cell: Cell) -> Option<Entry> {
    let (text, start) = table.text(desk, cell);
    let at = table.at(cell);
    if text.is_empty() {
        desk.say(Message::CellEmpty, at, &[&"a number or a formula of parameters"]);
        return None;
    }
    if let Ok(value) = text.parse::<f64>() {
        if value.is_finite() {
            return Some(Entry::Number(value));
        }
        let text = text.into_owned();
        desk.say(Message::CellNotFinite, at, &[&text]);
        return None;
    }
    let origin = start.map(|start| (start..=start + text.len()).filter_map(|byte| u32::try_from(byte).ok()).collect());
    let written = Written { text: text.into_owned(), at, origin: origin.unwrap_or_default() };
    names.written(desk, written, SCOPE).map(entry_of)
}
