//! What a source file means: names, constants, claims, circuits.
//!
//! [`Program::analyse`] turns a file into facts: findings, names and their
//! uses, gates, matrices, claims. It is cheap enough for every keystroke and
//! does no arithmetic on operators. From the facts, [`Program::gate_circuit`]
//! and [`Program::program_circuit`] lower source to `operator::Circuit`,
//! [`Program::measure`] puts a claim to the test, and
//! [`Program::replacement`] raises a circuit back to source text.
//!
//! # Conventions
//!
//! - All positions are bytes of UTF-8 text.
//! - The first operand of a gate is wire 0, the most significant bit of a row
//!   index; a program's qubits are wires in the order of declaration.
//! - Nothing here reads a disk, a clock or a protocol; included files come
//!   through [`Files`].

mod annotation;
mod arithmetic;
mod build;
mod eval;
mod facts;
mod file;
mod finding;
mod functions;
mod hir;
mod limits;
mod lower;
mod measure;
mod model;
mod nearest;
mod program;
pub mod queries;
mod raise;
mod standard;
mod symbols;
mod types;
mod value;

pub use file::{FileProblem, Files, NoFiles, SourceFile};
pub use finding::{Edit, FileId, Finding, Fix, Related, Severity, apply_edits};
pub use grammar::{TextRange, TextSize};
pub use limits::Limits;
pub use model::{
    BudgetClaim, Cannot, Claim, ClaimKind, Cut, GateDef, Lowered, MatrixDef, MatrixSource,
    Measured, Outcome, Property, Replacement, StandIn, Subject,
};
pub use operator::success::Success;
pub use program::Program;
pub use raise::{angle_text, circuit_lines};
pub use symbols::{Reference, Symbol, SymbolId, SymbolKind};

#[cfg(test)]
mod tests;
