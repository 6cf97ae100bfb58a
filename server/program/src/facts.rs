//! Everything an analysis finds out; the inside of a [`crate::Program`].

use grammar::TextRange;

use crate::eval::Env;
use crate::file::SourceFile;
use crate::finding::{FileId, Finding};
use crate::hir::{Body, Stmt};
use crate::limits::Limits;
use crate::model::{Claim, GateDef, MatrixDef};
use crate::symbols::{Reference, Symbol, SymbolId};
use crate::value::Value;

/// The facts, filled in the order of the text.
#[derive(Debug, Default)]
pub(crate) struct Facts {
    pub(crate) files: Vec<SourceFile>,
    pub(crate) gates: Vec<GateDef>,
    /// The inside of each gate, at the same position.
    pub(crate) bodies: Vec<Body>,
    pub(crate) subroutines: Vec<Subroutine>,
    pub(crate) matrices: Vec<MatrixDef>,
    pub(crate) claims: Vec<Claim>,
    pub(crate) findings: Vec<Finding>,
    pub(crate) symbols: Vec<Symbol>,
    /// What is known of each symbol's value without running anything.
    pub(crate) values: Vec<Value>,
    pub(crate) references: Vec<Reference>,
    pub(crate) suppressions: Vec<Suppression>,
    /// The statements of the program, included ones in their place.
    pub(crate) main: Vec<Stmt>,
    pub(crate) limits: Limits,
}

/// A `def`: checked, but not lowered.
#[derive(Debug)]
pub(crate) struct Subroutine {
    /// Qubit parameters with their sizes; none for a single qubit.
    pub(crate) qubits: Vec<(SymbolId, Option<usize>)>,
    pub(crate) body: Vec<Stmt>,
}

/// `@cantle.allow` on a statement.
#[derive(Debug, Clone)]
pub(crate) struct Suppression {
    pub(crate) code: String,
    pub(crate) file: FileId,
    pub(crate) range: TextRange,
}

impl Facts {
    /// Adds a finding, once, as long as there is room.
    pub(crate) fn report(&mut self, finding: Finding) {
        let last = self.findings.last();
        let repeated = last.is_some_and(|last| *last == finding);
        if !repeated && self.findings.len() < self.limits.findings {
            self.findings.push(finding);
        }
    }

    /// Adds a symbol with what is known of its value.
    pub(crate) fn add_symbol(&mut self, symbol: Symbol, value: Value) -> SymbolId {
        let id = SymbolId(u32::try_from(self.symbols.len()).unwrap_or(u32::MAX));
        self.symbols.push(symbol);
        self.values.push(value);
        id
    }
}

impl Env for Facts {
    fn value(&self, symbol: SymbolId) -> Value {
        self.values.get(symbol.index()).cloned().unwrap_or(Value::Unknown("a broken name"))
    }
}
