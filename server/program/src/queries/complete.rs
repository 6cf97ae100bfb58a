//! What can be written at a place: names, and annotations with their fields.

use grammar::TextSize;

use crate::{FileId, Program, Symbol, SymbolKind};

/// One thing that can be written.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Completion {
    /// What is written.
    pub text: String,
    /// What it stands for; `None` for a word of an annotation.
    pub kind: Option<SymbolKind>,
    /// One line about it.
    pub detail: String,
}

/// The annotations of the claim language: name, example of their fields.
const ANNOTATIONS: [(&str, &str); 9] = [
    ("cantle.dense", "cantle.dense M within 1e-8: the gate stands for the matrix M"),
    ("cantle.encodes", "cantle.encodes M ancilla 3 scale 4.0 within 1e-8: scale × corner is M"),
    ("cantle.equals", "cantle.equals G within 1e-9: equals the gate or matrix G"),
    ("cantle.clean", "cantle.clean a, b: these operands start and end in |0⟩"),
    ("cantle.budget", "cantle.budget cx 400, depth 900, ancilla 4: upper bounds"),
    ("cantle.matrix", "cantle.matrix unitary: the literal has this property"),
    ("cantle.sample", "cantle.sample theta = 0.3: a value to show the gate at"),
    ("cantle.allow", "cantle.allow lint-name: silences this lint here"),
    ("cantle.matrix hermitian", "cantle.matrix hermitian: the literal equals its adjoint"),
];

/// What can be written at an offset of the main file. The client narrows the
/// list down to what has been typed so far.
pub fn complete(program: &Program, offset: TextSize) -> Vec<Completion> {
    let Some(file) = program.file(FileId::MAIN) else { return Vec::new() };
    let before = file.text.get(..usize::from(offset)).unwrap_or_default();
    let line = before.rsplit(['\n', '\r']).next().unwrap_or_default().trim_start();
    match line.strip_prefix('@') {
        Some(annotation) if annotation.contains(char::is_whitespace) => {
            names(program, offset, |symbol| {
                matches!(symbol.kind, SymbolKind::Matrix | SymbolKind::Gate)
                    && symbol.file != FileId::STANDARD
            })
        }
        Some(_) => annotations(),
        None => names(program, offset, |_| true),
    }
}

fn annotations() -> Vec<Completion> {
    let completion = |&(text, detail): &(&str, &str)| Completion {
        text: text.to_owned(),
        kind: None,
        detail: detail.to_owned(),
    };
    ANNOTATIONS.iter().map(completion).collect()
}

/// The names that `fit`: global ones, and those local to the definition
/// around the offset.
fn names(program: &Program, offset: TextSize, fit: impl Fn(&Symbol) -> bool) -> Vec<Completion> {
    let around = program.symbols().iter().find(|symbol| {
        matches!(symbol.kind, SymbolKind::Gate | SymbolKind::Subroutine)
            && symbol.file == FileId::MAIN
            && symbol.range.contains_inclusive(offset)
    });
    let visible = |symbol: &&Symbol| match symbol.kind {
        SymbolKind::Parameter | SymbolKind::Operand | SymbolKind::LoopVariable => {
            around.is_some_and(|around| around.range.contains_range(symbol.range))
        }
        _ => true,
    };
    let mut found: Vec<Completion> = program
        .symbols()
        .iter()
        .filter(visible)
        .filter(|symbol| fit(symbol) && !symbol.name.is_empty())
        .map(|symbol| Completion {
            text: symbol.name.clone(),
            kind: Some(symbol.kind),
            detail: symbol.detail.clone(),
        })
        .collect();
    found.sort_by(|a, b| a.text.cmp(&b.text));
    found.dedup_by(|a, b| a.text == b.text);
    found
}
