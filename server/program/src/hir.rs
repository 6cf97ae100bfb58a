//! What a file says with every name resolved: the form that is executed.
//!
//! It owns its data, so it can be shared between threads and outlives the
//! tree. What was reported while it was built is [`ExprKind::Broken`] or is
//! left out, so that nothing is reported twice.

use grammar::TextRange;

use crate::FileId;
use crate::arithmetic::{BinaryOp, UnaryOp};
use crate::functions::Function;
use crate::standard::StandardGate;
use crate::symbols::SymbolId;
use crate::types::Type;
use crate::value::Value;

/// An expression.
#[derive(Debug, Clone)]
pub(crate) struct Expr {
    pub(crate) range: TextRange,
    pub(crate) kind: ExprKind,
}

#[derive(Debug, Clone)]
pub(crate) enum ExprKind {
    Value(Value),
    Name(SymbolId),
    Unary(UnaryOp, Box<Expr>),
    /// A left-leaning chain of operators, flat so that a long sum is no deep
    /// tree: the first operand, then operators with what is on their right.
    Chain(Box<Expr>, Vec<(BinaryOp, Expr)>),
    Call(Function, Vec<Expr>),
    Cast(Type, Box<Expr>),
    Index(Box<Expr>, Vec<Index>),
    /// Terms of `++`, the first the most significant.
    Concat(Vec<Expr>),
    /// Reported already.
    Broken,
}

/// One index between brackets.
#[derive(Debug, Clone)]
pub(crate) enum Index {
    One(Expr),
    Range { range: TextRange, start: Option<Expr>, step: Option<Expr>, stop: Option<Expr> },
    Set(Vec<Expr>),
}

/// Qubits named by an operand.
#[derive(Debug, Clone)]
pub(crate) struct Operand {
    pub(crate) range: TextRange,
    pub(crate) base: OperandBase,
    /// The items of each pair of brackets.
    pub(crate) indices: Vec<Vec<Index>>,
}

#[derive(Debug, Clone, Copy)]
pub(crate) enum OperandBase {
    Symbol(SymbolId),
    Hardware(u64),
    /// Reported already.
    Broken,
}

/// What a call applies.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Callee {
    /// The gate at this position.
    Gate(usize),
    /// `gphase`
    Phase,
    /// Reported already.
    Broken,
}

/// A modifier before a call.
#[derive(Debug, Clone)]
pub(crate) enum Modifier {
    Inverse,
    Power(Expr),
    /// This many controls that act at 1 (`true`) or 0.
    Controls(usize, bool),
}

/// A gate call with everything around it.
#[derive(Debug, Clone)]
pub(crate) struct Call {
    pub(crate) callee: Callee,
    /// As written; the last one acts on the gate first.
    pub(crate) modifiers: Vec<Modifier>,
    pub(crate) arguments: Vec<Expr>,
    pub(crate) operands: Vec<Operand>,
}

impl Call {
    /// Number of controls that the modifiers add.
    pub(crate) fn controls(&self) -> usize {
        let count = |modifier: &Modifier| match modifier {
            Modifier::Controls(count, _) => *count,
            _ => 0,
        };
        self.modifiers.iter().map(count).sum()
    }
}

/// A statement.
#[derive(Debug, Clone)]
pub(crate) struct Stmt {
    pub(crate) file: FileId,
    pub(crate) range: TextRange,
    pub(crate) kind: StmtKind,
}

#[derive(Debug, Clone)]
pub(crate) enum StmtKind {
    /// `size` is none for a single qubit.
    Qubits {
        symbol: SymbolId,
        size: Option<usize>,
    },
    Declare {
        symbol: SymbolId,
        ty: Type,
        value: Option<Expr>,
    },
    Alias {
        symbol: SymbolId,
        terms: Vec<Operand>,
    },
    Call(Call),
    /// `barrier`, `delay`, `nop`: the identity on these operands.
    Identity(Vec<Operand>),
    Box(Vec<Stmt>),
    If {
        condition: Expr,
        then: Vec<Stmt>,
        otherwise: Vec<Stmt>,
    },
    For {
        symbol: SymbolId,
        ty: Type,
        over: Over,
        body: Vec<Stmt>,
    },
    Assign {
        symbol: SymbolId,
        /// Whether only a part is assigned; then the whole becomes unknown.
        partial: bool,
        op: Option<BinaryOp>,
        value: Expr,
    },
    Break,
    Continue,
    End,
    /// A statement that has no single operator, the variables it writes, and
    /// the statements inside it, which are only checked.
    Cut {
        reason: String,
        writes: Vec<SymbolId>,
        operands: Vec<Operand>,
        inside: Vec<Stmt>,
    },
}

/// What a loop runs over.
#[derive(Debug, Clone)]
pub(crate) enum Over {
    Range {
        range: TextRange,
        start: Expr,
        step: Option<Expr>,
        stop: Expr,
    },
    Set(Vec<Expr>),
    Value(Expr),
    /// Reported already.
    Broken,
}

/// The inside of a gate, by its position in the list of gates.
pub(crate) enum Body {
    Standard(&'static StandardGate),
    Defined(DefinedBody),
    /// Declared without a body.
    Opaque,
}

impl std::fmt::Debug for Body {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Body::Standard(gate) => write!(f, "Standard({})", gate.name),
            Body::Defined(body) => body.fmt(f),
            Body::Opaque => write!(f, "Opaque"),
        }
    }
}

#[derive(Debug)]
pub(crate) struct DefinedBody {
    pub(crate) params: Vec<SymbolId>,
    pub(crate) operands: Vec<SymbolId>,
    pub(crate) body: Vec<Stmt>,
}
