//! The analysis of one file with its includes, and the facts it found.

use std::sync::Arc;

use grammar::{TextRange, TextSize};
use operator::Budget;

use crate::build::build;
use crate::facts::{Facts, Suppression};
use crate::lower::{Definitions, Lowering, check};
use crate::measure::{measure, sample_points};
use crate::raise::replacement;
use crate::{
    Cannot, Claim, Edit, FileId, Files, Finding, GateDef, Limits, Lowered, MatrixDef, Measured,
    Reference, Replacement, SourceFile, Symbol, SymbolId,
};

/// A file and its includes, analysed. `Send + Sync`; share it by `Arc`.
#[derive(Debug)]
pub struct Program {
    pub(crate) facts: Facts,
    pub(crate) definitions: Definitions,
}

impl Program {
    /// Analyses the file at `path` with this text: syntax, names, constants,
    /// annotations. Never fails and never does arithmetic on operators; what
    /// is wrong is in [`Program::findings`].
    pub fn analyse(path: &str, text: Arc<str>, files: &dyn Files, limits: &Limits) -> Program {
        let mut facts = build(path, text, files, limits);
        for finding in check(&facts) {
            facts.report(finding);
        }
        facts.findings.sort_by_key(|f| (f.file, f.range.start(), f.range.end()));
        facts.references.sort_by_key(|r| (r.file, r.range.start(), r.range.end()));
        Program { facts, definitions: Definitions::default() }
    }

    /// The files, the main one first.
    pub fn files(&self) -> &[SourceFile] {
        &self.facts.files
    }

    /// A file; `None` for [`FileId::STANDARD`].
    pub fn file(&self, id: FileId) -> Option<&SourceFile> {
        self.facts.files.get(id.index())
    }

    /// The gates: built-in ones that are visible, then those of the files in
    /// the order of their definition.
    pub fn gates(&self) -> &[GateDef] {
        &self.facts.gates
    }

    /// The gate of this name.
    pub fn gate(&self, name: &str) -> Option<&GateDef> {
        self.facts.gates.iter().find(|gate| gate.name == name)
    }

    /// The two-dimensional arrays of numbers, in order of declaration.
    pub fn matrices(&self) -> &[MatrixDef] {
        &self.facts.matrices
    }

    /// The matrix of this name.
    pub fn matrix(&self, name: &str) -> Option<&MatrixDef> {
        self.facts.matrices.iter().find(|matrix| matrix.name == name)
    }

    /// The claims, in the order of the text.
    pub fn claims(&self) -> &[Claim] {
        &self.facts.claims
    }

    /// What is wrong as far as names, types and constants tell, in the order
    /// of the text. Nothing is suppressed yet.
    pub fn findings(&self) -> &[Finding] {
        &self.facts.findings
    }

    /// Every declared name.
    pub fn symbols(&self) -> &[Symbol] {
        &self.facts.symbols
    }

    /// Every place where a name is written, in the order of the text.
    pub fn references(&self) -> &[Reference] {
        &self.facts.references
    }

    /// Whether a `@cantle.allow` on a statement around `range` silences the
    /// lint `code`.
    pub fn suppressed(&self, code: &str, file: FileId, range: TextRange) -> bool {
        let around = |s: &Suppression| s.file == file && s.range.contains_range(range);
        self.facts.suppressions.iter().any(|s| s.code == code && around(s))
    }

    /// The name written at an offset of a file, its end included.
    pub fn symbol_at(&self, file: FileId, offset: TextSize) -> Option<(SymbolId, TextRange)> {
        let mut here = self.facts.references.iter().filter(|r| r.file == file);
        let found = here.find(|r| r.range.contains_inclusive(offset))?;
        Some((found.symbol, found.range))
    }

    /// A declared name.
    pub fn symbol(&self, id: SymbolId) -> Option<&Symbol> {
        self.facts.symbols.get(id.index())
    }

    /// The circuit of a gate at these parameter values, on its operands in
    /// order. A stand-in is one dense step.
    pub fn gate_circuit(&self, name: &str, params: &[f64]) -> Result<Lowered, Cannot> {
        let gate = self.facts.gates.iter().position(|gate| gate.name == name);
        let gate = gate.ok_or_else(|| Cannot::new(format!("there is no gate `{name}`")))?;
        self.lowering().gate(gate, params, 0)
    }

    /// The circuit of the whole program, up to the first statement that has
    /// no operator.
    pub fn program_circuit(&self) -> Result<Lowered, Cannot> {
        self.lowering().program().map(|(lowered, _)| lowered)
    }

    pub(crate) fn lowering(&self) -> Lowering<'_> {
        Lowering { facts: &self.facts, definitions: &self.definitions }
    }

    /// Puts a claim to the test.
    pub fn measure(&self, claim: &Claim, budget: &Budget) -> Measured {
        measure(self, claim, budget)
    }

    /// The parameter values at which a gate is looked at where numbers are
    /// needed: those of `@cantle.sample`, else several generic points; one
    /// empty point for a gate without parameters.
    pub fn sample_points(&self, gate: &GateDef) -> Vec<Vec<f64>> {
        sample_points(gate)
    }

    /// The edits of the main file that put a circuit in the place of a
    /// stand-in: the gate's text, its claim, the ancillas of every caller and
    /// the register they come from.
    pub fn replacement(&self, gate: &str, with: &Replacement) -> Result<Vec<Edit>, Cannot> {
        replacement(&self.facts, gate, with)
    }
}
