//! The public facts about a program: gates, matrices, claims, circuits.

use std::sync::Arc;

use grammar::{TextRange, TextSize};
use operator::success::Success;
use operator::{Circuit, Matrix};

use crate::{FileId, SymbolId};

/// A gate defined in a file or built in.
#[derive(Debug, Clone)]
pub struct GateDef {
    /// The gate's name.
    pub name: String,
    /// Its symbol.
    pub symbol: SymbolId,
    /// Where it is defined; [`FileId::STANDARD`] for a built-in one.
    pub file: FileId,
    /// The whole definition with its annotations; empty for a built-in one.
    pub range: TextRange,
    /// The name in the definition.
    pub name_range: TextRange,
    /// The end of the head, before the white space that leads to the body.
    pub head_end: TextSize,
    /// The body with its braces.
    pub body_range: Option<TextRange>,
    /// Names of the classical parameters.
    pub params: Vec<String>,
    /// Names of the operands, the first the most significant.
    pub operands: Vec<String>,
    /// The matrix this gate stands for, if it has `@cantle.dense` and an
    /// empty body.
    pub stand_in: Option<StandIn>,
    /// Positions in [`crate::Program::claims`] of what is claimed of it.
    pub claims: Vec<usize>,
    /// Values for the parameters from `@cantle.sample`.
    pub samples: Vec<(String, f64)>,
    /// Whether the language or its standard library defines it.
    pub builtin: bool,
}

/// What a stand-in gate stands for.
#[derive(Debug, Clone)]
pub struct StandIn {
    /// Name of the matrix.
    pub matrix: String,
    /// Position in [`crate::Program::matrices`]; none if there is no such matrix.
    pub matrix_index: Option<usize>,
    /// The error allowed to its replacement, in spectral norm.
    pub tolerance: f64,
    /// The tolerance as written, if it was.
    pub tolerance_text: Option<String>,
    /// The annotation.
    pub range: TextRange,
}

/// Where the entries of a matrix come from.
#[derive(Debug, Clone, PartialEq)]
pub enum MatrixSource {
    /// An array literal.
    Literal,
    /// `@cantle.matrix pauli …`
    Pauli,
    /// `@cantle.matrix bands …`
    Bands,
    /// `@cantle.matrix from "…"`: named, not read yet.
    File(String),
    /// Nothing gives entries.
    None,
}

/// A two-dimensional array of numbers.
#[derive(Debug, Clone)]
pub struct MatrixDef {
    /// The array's name.
    pub name: String,
    /// Its symbol.
    pub symbol: SymbolId,
    /// Where it is declared.
    pub file: FileId,
    /// The name in the declaration.
    pub name_range: TextRange,
    /// The whole declaration with its annotations.
    pub range: TextRange,
    /// The literal with its braces.
    pub literal_range: Option<TextRange>,
    /// Rows as declared, or as the literal has them.
    pub rows: usize,
    /// Columns as declared, or as the literal has them.
    pub cols: usize,
    /// Where the entries come from.
    pub source: MatrixSource,
    /// The entries, if every one is known and finite and the sizes agree.
    pub matrix: Option<Arc<Matrix>>,
    /// Whether a claim or a stand-in uses it as an operator.
    pub used_as_operator: bool,
    /// Whether the declared entries are complex.
    pub complex: bool,
    pub(crate) entry_ranges: Vec<Vec<TextRange>>,
}

impl MatrixDef {
    /// The bytes of the entry at (`row`, `col`) of the literal.
    pub fn entry_range(&self, row: usize, col: usize) -> Option<TextRange> {
        self.entry_ranges.get(row)?.get(col).copied()
    }

    /// The bytes of a row of the literal, from its first entry to its last.
    pub fn row_range(&self, row: usize) -> Option<TextRange> {
        let row = self.entry_ranges.get(row)?;
        Some(row.first()?.cover(*row.last()?))
    }
}

/// A property that `@cantle.matrix` states of a matrix.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Property {
    /// M†M = I.
    Unitary,
    /// M = M†.
    Hermitian,
    /// Zero off the diagonal.
    Diagonal,
    /// No imaginary parts.
    Real,
    /// M = Mᵀ.
    Symmetric,
    /// Hermitian without negative eigenvalues.
    Positive,
}

impl Property {
    /// Every property with the word that names it.
    pub const ALL: [(Property, &'static str); 6] = [
        (Property::Unitary, "unitary"),
        (Property::Hermitian, "hermitian"),
        (Property::Diagonal, "diagonal"),
        (Property::Real, "real"),
        (Property::Symmetric, "symmetric"),
        (Property::Positive, "positive"),
    ];

    /// The word that names it.
    pub fn word(self) -> &'static str {
        Self::ALL.iter().find(|(property, _)| *property == self).map_or("", |(_, word)| word)
    }
}

/// What a claim says.
#[derive(Debug, Clone, PartialEq)]
pub enum ClaimKind {
    /// `@cantle.dense M within t`: the gate stands for `M`.
    Dense {
        /// The matrix.
        matrix: String,
        /// The error allowed to the replacement.
        within: Option<f64>,
    },
    /// `@cantle.encodes M ancilla a scale s within t`
    Encodes {
        /// The matrix.
        matrix: String,
        /// How many of the first operands are ancillas.
        ancilla: Option<usize>,
        /// The scale: scale × corner equals the matrix.
        scale: Option<f64>,
        /// The allowed ‖M − scale·corner‖.
        within: Option<f64>,
    },
    /// `@cantle.equals G within t`
    Equals {
        /// A gate or a matrix.
        of: String,
        /// Whether the global phase must agree too.
        exact_phase: bool,
        /// The allowed distance, in spectral norm.
        within: Option<f64>,
    },
    /// `@cantle.clean a, b`
    Clean {
        /// Operands that start and end in |0⟩.
        operands: Vec<String>,
    },
    /// `@cantle.matrix unitary` and the like.
    Property(Property),
    /// `@cantle.budget cx 400, …`
    Budget(BudgetClaim),
}

/// Upper bounds (`success`: a lower one) that `@cantle.budget` states.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct BudgetClaim {
    /// Most CX after lowering.
    pub cx: Option<f64>,
    /// Most layers.
    pub depth: Option<f64>,
    /// Most ancillas.
    pub ancilla: Option<f64>,
    /// Most error.
    pub error: Option<f64>,
    /// Least success probability.
    pub success: Option<f64>,
}

/// What a claim speaks of.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Subject {
    /// The gate at this position of [`crate::Program::gates`].
    Gate(usize),
    /// The matrix at this position of [`crate::Program::matrices`].
    Matrix(usize),
    /// A `box` or `for` with this range.
    Block(TextRange),
    /// A subroutine with this range.
    Subroutine(TextRange),
}

/// A claim made by an annotation.
#[derive(Debug, Clone, PartialEq)]
pub struct Claim {
    /// What it says.
    pub kind: ClaimKind,
    /// Where it stands.
    pub file: FileId,
    /// The annotation.
    pub range: TextRange,
    /// The name of the matrix or gate in it, if there is one.
    pub name_range: Option<TextRange>,
    /// What it speaks of.
    pub subject: Subject,
}

/// A block as a circuit.
#[derive(Debug, Clone)]
pub struct Lowered {
    /// The steps before the cut.
    pub circuit: Circuit,
    /// For every step, the statement it comes from.
    pub origins: Vec<(FileId, TextRange)>,
    /// What each wire is called in the source, such as `tray[1]`.
    pub wire_names: Vec<String>,
    /// Where and why the circuit ends before the block does.
    pub cut: Option<Cut>,
}

/// The statement at which a block stops having one operator.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Cut {
    /// The file of the statement.
    pub file: FileId,
    /// The statement.
    pub range: TextRange,
    /// Why, as the end of "the operator is that of the part before, because …".
    pub reason: String,
}

/// Why a circuit, a measurement or an edit cannot be had.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{reason}")]
pub struct Cannot {
    /// A sentence without its full stop.
    pub reason: String,
    /// The place that is in the way, if it is one.
    pub place: Option<(FileId, TextRange)>,
}

impl Cannot {
    /// Without a place.
    pub fn new(reason: impl Into<String>) -> Self {
        Cannot { reason: reason.into(), place: None }
    }

    /// Because of what stands at a place.
    pub fn at(file: FileId, range: TextRange, reason: impl Into<String>) -> Self {
        Cannot { reason: reason.into(), place: Some((file, range)) }
    }
}

/// Whether a claim holds.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Outcome {
    /// It does, within the tolerance.
    Holds,
    /// It does not.
    Broken,
    /// It could not be found out, for this reason.
    Undecided(String),
}

/// A claim put to the test. Numbers that were not computed are `None`.
#[derive(Debug, Clone, PartialEq)]
pub struct Measured {
    /// Whether the claim holds.
    pub outcome: Outcome,
    /// The distance that was measured, in spectral norm; of several sample
    /// points the worst.
    pub error: Option<f64>,
    /// The distance that is allowed.
    pub tolerance: f64,
    /// The scale: claimed, or found when not claimed.
    pub scale: Option<f64>,
    /// The number of ancillas: claimed, or found when not claimed.
    pub ancillas: Option<usize>,
    /// Spectral norm of the claimed matrix; no scale below it can do.
    pub norm: Option<f64>,
    /// Chance that the ancillas are found in |0…0⟩.
    pub success: Option<Success>,
    /// The parameter values used; empty for a gate without parameters, and
    /// more than one point where none was stated.
    pub samples: Vec<Vec<f64>>,
    /// One sentence more, such as which columns are worst.
    pub note: Option<String>,
}

/// The circuit that is to take a stand-in's place.
#[derive(Debug, Clone)]
pub struct Replacement {
    /// Ancillas on the first wires, then the gate's operands in order.
    pub circuit: Circuit,
    /// Number of ancillas.
    pub ancillas: usize,
    /// Scale × corner is the matrix.
    pub scale: f64,
    /// Measured ‖M − scale·corner‖.
    pub error: f64,
    /// Name of the method.
    pub method: String,
}
