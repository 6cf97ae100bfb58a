//! From a name to its declaration and to its uses.

use grammar::{TextRange, TextSize};

use crate::{FileId, Program};

/// A place in one of the files of a program.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Place {
    /// The file.
    pub file: FileId,
    /// The bytes.
    pub range: TextRange,
}

/// Where the name at an offset of the main file is declared; `None` for
/// what the language or its standard library declares.
pub fn definition(program: &Program, offset: TextSize) -> Option<Place> {
    let (id, _) = program.symbol_at(FileId::MAIN, offset)?;
    let symbol = program.symbol(id)?;
    let known = symbol.file != FileId::STANDARD;
    known.then_some(Place { file: symbol.file, range: symbol.name_range })
}

/// Every place where the name at an offset of the main file is written, in
/// the order of the text; its declaration only if asked for.
pub fn references(program: &Program, offset: TextSize, with_declaration: bool) -> Vec<Place> {
    let Some((id, _)) = program.symbol_at(FileId::MAIN, offset) else { return Vec::new() };
    let uses = program.references().iter().filter(|reference| reference.symbol == id);
    uses.filter(|reference| with_declaration || !reference.is_definition)
        .map(|reference| Place { file: reference.file, range: reference.range })
        .collect()
}
