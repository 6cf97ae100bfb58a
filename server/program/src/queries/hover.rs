//! What stands at a place: a gate and its operator, a matrix, a claim, a
//! register.

use grammar::{TextRange, TextSize};
use operator::counts::Counts;
use operator::{Budget, Matrix, norm, portrait};

use super::call::about_call;
use super::claims::{about_gate, about_matrix, verdict};
use super::grid::{complex, error, grid, number};
use super::view::{View, at_values, view};
use crate::{Claim, FileId, GateDef, MatrixDef, Program, Subject, Symbol, SymbolKind};

/// Largest matrix written out: past it lines no longer fit a window.
pub(super) const MAX_SHOWN: usize = 8;

/// ‖M†M − I‖ and ‖M − M†‖ (relative to ‖M‖) up to which a matrix is called
/// unitary or Hermitian: entries typed with nine decimals still are.
const NEARLY: f64 = 1e-8;

/// What to show about a place.
#[derive(Debug, Clone, PartialEq)]
pub struct Hover {
    /// The bytes of the main file it is about.
    pub range: TextRange,
    /// What to show, from top to bottom.
    pub blocks: Vec<Block>,
}

/// A part of a hover.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Block {
    /// Source text.
    Source(String),
    /// A paragraph; backquotes mark names.
    Text(String),
    /// Lines whose columns are aligned.
    Grid(String),
}

/// What to show about an offset of the main file; `None` where nothing is.
/// Whatever the arithmetic cannot give is said instead.
pub fn hover(program: &Program, offset: TextSize, budget: &Budget) -> Option<Hover> {
    if let Some((id, range)) = program.symbol_at(FileId::MAIN, offset) {
        let symbol = program.symbol(id)?;
        let mut blocks = about_symbol(program, symbol, budget);
        if symbol.kind == SymbolKind::Gate {
            blocks.extend(about_call(program, offset, budget));
        }
        return Some(Hover { range, blocks });
    }
    let here = |file: FileId, range: TextRange| file == FileId::MAIN && range.contains(offset);
    if let Some(claim) = program.claims().iter().find(|claim| here(claim.file, claim.range)) {
        let blocks = about_claim(program, claim, budget);
        return Some(Hover { range: claim.range, blocks });
    }
    if let Some(gate) = program.gates().iter().position(|gate| {
        here(gate.file, TextRange::new(gate.range.start().min(gate.head_end), gate.head_end))
    }) {
        let range = program.gates()[gate].name_range;
        return Some(Hover { range, blocks: about_gate_at(program, gate, budget) });
    }
    let in_literal = |m: &MatrixDef| m.literal_range.is_some_and(|range| here(m.file, range));
    let index = program.matrices().iter().position(in_literal)?;
    let matrix = &program.matrices()[index];
    let mut blocks = entry_at(matrix, offset).map(Block::Text).into_iter().collect::<Vec<_>>();
    blocks.extend(about_matrix_at(program, index, budget));
    Some(Hover { range: matrix.literal_range?, blocks })
}

fn about_symbol(program: &Program, symbol: &Symbol, budget: &Budget) -> Vec<Block> {
    let gate =
        |gate: &GateDef| program.symbol(gate.symbol).is_some_and(|s| std::ptr::eq(s, symbol));
    let matrix = |m: &MatrixDef| program.symbol(m.symbol).is_some_and(|s| std::ptr::eq(s, symbol));
    if let Some(index) = program.gates().iter().position(gate) {
        return about_gate_at(program, index, budget);
    }
    if let Some(index) = program.matrices().iter().position(matrix) {
        return about_matrix_at(program, index, budget);
    }
    let mut blocks = vec![Block::Source(symbol.detail.clone())];
    if symbol.kind == SymbolKind::Qubit {
        blocks.extend(about_register(program, &symbol.name));
    }
    blocks
}

/// Which qubits of the program's operator a register is.
fn about_register(program: &Program, name: &str) -> Option<Block> {
    let lowered = program.program_circuit().ok()?;
    let own = |wire: &&String| {
        wire.strip_prefix(name).is_some_and(|rest| rest.is_empty() || rest.starts_with('['))
    };
    let count = lowered.wire_names.iter().filter(own).count();
    let first = lowered.wire_names.iter().position(|wire| own(&wire))?;
    let total = lowered.wire_names.len();
    let place = match count {
        1 => format!("qubit {first}"),
        _ => format!("qubits {first} to {}", first + count - 1),
    };
    Some(Block::Text(format!(
        "{place} of the program's {total}, in the order of declaration; \
         qubit 0 is the most significant bit of the program's operator"
    )))
}

fn about_claim(program: &Program, claim: &Claim, budget: &Budget) -> Vec<Block> {
    let measured = program.measure(claim, budget);
    let mut blocks = vec![Block::Text(verdict(claim, &measured))];
    blocks.extend(match claim.subject {
        Subject::Gate(index) => about_gate_at(program, index, budget),
        Subject::Matrix(index) => about_matrix_at(program, index, budget),
        Subject::Block(_) | Subject::Subroutine(_) => Vec::new(),
    });
    // The gate lists its claims itself.
    let own = Block::Text(verdict(claim, &measured));
    let mut first = true;
    blocks.retain(|block| *block != own || std::mem::replace(&mut first, false));
    blocks
}

/// Everything about the gate at a position of [`Program::gates`].
fn about_gate_at(program: &Program, index: usize, budget: &Budget) -> Vec<Block> {
    let gate = &program.gates()[index];
    let mut blocks = vec![Block::Source(signature(gate))];
    if let Some(stand_in) = &gate.stand_in {
        let tolerance = error(stand_in.tolerance);
        blocks.push(Block::Text(format!(
            "Stand-in for `{}`: to be replaced by a circuit within {tolerance}",
            stand_in.matrix
        )));
        blocks.extend(stand_in.matrix_index.into_iter().flat_map(|at| shape(program, at)));
    }
    let claims = about_gate(program, index);
    blocks.extend(
        claims
            .filter(|_| gate.stand_in.is_none())
            .map(|claim| Block::Text(verdict(claim, &program.measure(claim, budget)))),
    );
    match view(program, index, budget) {
        Ok(view) => blocks.extend(seen(gate, &view)),
        Err(reason) => blocks.push(Block::Text(format!("Operator not shown: {reason}"))),
    }
    blocks
}

/// The operator of a gate, its cost, and how to read them.
fn seen(gate: &GateDef, view: &View) -> Vec<Block> {
    let mut blocks = Vec::new();
    match &view.operator {
        Ok(matrix) => {
            blocks.push(Block::Text(title(view, matrix)));
            if matrix.rows() <= MAX_SHOWN {
                blocks.push(Block::Grid(grid(matrix)));
            }
            blocks.push(Block::Text(convention(gate, view)));
        }
        Err(reason) => blocks.push(Block::Text(format!("Operator not shown: {reason}"))),
    }
    blocks.extend(view.counts.as_ref().map(|counts| Block::Text(cost(counts))));
    blocks
}

fn title(view: &View, matrix: &Matrix) -> String {
    let (rows, cols) = (matrix.rows(), matrix.cols());
    let mut at = at_values(&view.at);
    if view.chosen {
        at += " (`@cantle.sample` sets other values)";
    }
    match view.encoding {
        Some((_, 0)) | None => format!("Operator{at}: {}", portrait::portrait(matrix)),
        Some((scale, _)) => {
            format!("Encoded matrix{at} (scale {} × corner, {rows}×{cols})", number(scale))
        }
    }
}

/// How rows and columns are counted.
fn convention(gate: &GateDef, view: &View) -> String {
    let skipped = view.encoding.map_or(0, |(_, ancillas)| ancillas);
    match gate.operands.get(skipped) {
        Some(first) => {
            format!("Rows and columns in operand order: `{first}` is the most significant bit")
        }
        None => "A number: the gate has no operands left".to_owned(),
    }
}

fn cost(counts: &Counts) -> String {
    let cx = counts.cx.map_or("not known (a stand-in is inside)".to_owned(), |cx| cx.to_string());
    format!(
        "Cost: CX {cx} · one-qubit {} · two-qubit {} · larger {} · depth {} (two-qubit {})",
        counts.one_qubit,
        counts.two_qubit,
        counts.multi_qubit,
        counts.depth,
        counts.two_qubit_depth
    )
}

fn signature(gate: &GateDef) -> String {
    let params = if gate.params.is_empty() {
        String::new()
    } else {
        format!("({})", gate.params.join(", "))
    };
    format!("gate {}{params} {}", gate.name, gate.operands.join(", ")).trim_end().to_owned()
}

/// Everything about the matrix at a position of [`Program::matrices`].
fn about_matrix_at(program: &Program, index: usize, budget: &Budget) -> Vec<Block> {
    let definition = &program.matrices()[index];
    let (name, rows, cols) = (&definition.name, definition.rows, definition.cols);
    let mut blocks = vec![Block::Text(format!("`{name}`, a {rows}×{cols} matrix"))];
    blocks.extend(shape(program, index));
    blocks.extend(
        about_matrix(program, index)
            .map(|claim| Block::Text(verdict(claim, &program.measure(claim, budget)))),
    );
    if let Some(matrix) = &definition.matrix
        && rows.max(cols) <= MAX_SHOWN
    {
        blocks.push(Block::Grid(grid(matrix)));
    }
    blocks
}

/// Norm and structure of a matrix in one line.
fn shape(program: &Program, index: usize) -> Option<Block> {
    let matrix = program.matrices().get(index)?.matrix.as_ref()?;
    let size = norm::spectral(matrix).ok()?;
    let mut facts = vec![format!("‖M‖ = {}", number(size))];
    if matrix.is_square() {
        let from_unitary = norm::unitarity_error(matrix).ok()?;
        let unitary = if from_unitary <= NEARLY { "unitary" } else { "not unitary" };
        facts.push(format!("{unitary} (‖M†M − I‖ = {})", error(from_unitary)));
        let from_hermitian = norm::hermiticity_error(matrix).ok()?;
        if from_hermitian <= NEARLY * size {
            facts.push("Hermitian".to_owned());
        }
    }
    Some(Block::Text(facts.join(" · ")))
}

/// The entry of a literal at an offset.
fn entry_at(matrix: &MatrixDef, offset: TextSize) -> Option<String> {
    let values = matrix.matrix.as_ref()?;
    let places = (0..matrix.rows).flat_map(|r| (0..matrix.cols).map(move |c| (r, c)));
    let here = |&(r, c): &(usize, usize)| {
        matrix.entry_range(r, c).is_some_and(|range| range.contains_inclusive(offset))
    };
    let (r, c) = places.into_iter().find(here)?;
    Some(format!("Entry ({r}, {c}) = {}", complex(values[(r, c)])))
}
