//! The names that the main file declares, for an overview of it.

use grammar::TextRange;

use crate::{FileId, Program, Symbol, SymbolKind};

/// A declared name of the main file.
#[derive(Debug, Clone, PartialEq)]
pub struct OutlineItem {
    /// The name; never empty.
    pub name: String,
    /// What it stands for.
    pub kind: SymbolKind,
    /// The declaration in one line.
    pub detail: String,
    /// The whole declaration.
    pub range: TextRange,
    /// The name in it; lies inside `range`.
    pub name_range: TextRange,
}

/// What the main file declares outside the bodies of gates and subroutines,
/// in the order of the text.
pub fn outline(program: &Program) -> Vec<OutlineItem> {
    let own = |symbol: &&Symbol| {
        symbol.file == FileId::MAIN
            && !symbol.name.is_empty()
            && symbol.range.contains_range(symbol.name_range)
    };
    let symbols: Vec<&Symbol> = program.symbols().iter().filter(own).collect();
    let bodies: Vec<TextRange> = symbols
        .iter()
        .filter(|symbol| matches!(symbol.kind, SymbolKind::Gate | SymbolKind::Subroutine))
        .map(|symbol| symbol.range)
        .collect();
    let is_inner = |symbol: &Symbol| {
        bodies.iter().any(|&body| body != symbol.range && body.contains_range(symbol.range))
            || matches!(
                symbol.kind,
                SymbolKind::Parameter | SymbolKind::Operand | SymbolKind::LoopVariable
            )
    };
    let mut items: Vec<OutlineItem> = symbols
        .into_iter()
        .filter(|symbol| !is_inner(symbol))
        .map(|symbol| OutlineItem {
            name: symbol.name.clone(),
            kind: symbol.kind,
            detail: symbol.detail.clone(),
            range: symbol.range,
            name_range: symbol.name_range,
        })
        .collect();
    items.sort_by_key(|item| item.name_range.start());
    items
}
