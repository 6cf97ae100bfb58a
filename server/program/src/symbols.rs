//! Names: what each one stands for and where it is used.

use grammar::TextRange;

use crate::FileId;

/// A declared name of the program; position in [`crate::Program::symbols`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SymbolId(pub u32);

impl SymbolId {
    /// Position in [`crate::Program::symbols`].
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

/// What kind of thing a name stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum SymbolKind {
    /// A gate, defined in a file or built in.
    Gate,
    /// A subroutine (`def`).
    Subroutine,
    /// An external function.
    Extern,
    /// A built-in function such as `sin`.
    Function,
    /// A built-in or declared constant.
    Constant,
    /// A classical variable.
    Variable,
    /// An `input` or `output`.
    Io,
    /// A two-dimensional array of numbers.
    Matrix,
    /// A qubit or a register of qubits.
    Qubit,
    /// A name given by `let`.
    Alias,
    /// A classical parameter of a gate or a subroutine.
    Parameter,
    /// A qubit operand of a gate or a subroutine.
    Operand,
    /// The variable of a `for`.
    LoopVariable,
}

/// A declared name.
#[derive(Debug, Clone)]
pub struct Symbol {
    /// The name.
    pub name: String,
    /// What it stands for.
    pub kind: SymbolKind,
    /// Where it is declared.
    pub file: FileId,
    /// The name in its declaration; empty for built-in ones.
    pub name_range: TextRange,
    /// The whole declaration; empty for built-in ones.
    pub range: TextRange,
    /// The declaration in one line, such as `const int[32] n = 3`.
    pub detail: String,
}

/// A place where a name is written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Reference {
    /// The name.
    pub symbol: SymbolId,
    /// The file of the place.
    pub file: FileId,
    /// The bytes of the name.
    pub range: TextRange,
    /// Whether this is the declaration.
    pub is_definition: bool,
}
