//! Declarations other than gates and matrices.

use grammar::TextRange;
use grammar::nodes::{
    AliasDeclaration, AstNode, ClassicalDeclaration, ConstDeclaration, Designator, Expression,
    ExternDeclaration, Initialiser, IoDeclaration, NodeExt, OldDeclaration, QubitDeclaration,
    SignatureParameter, SubroutineDefinition, Type as TypeNode,
};

use super::expressions::QUBITS;
use super::scopes::ScopeKind;
use super::{Builder, core_range, gates::keyword};
use crate::facts::Subroutine;
use crate::hir::{Operand, OperandBase, Stmt, StmtKind};
use crate::model::Subject;
use crate::symbols::{SymbolId, SymbolKind};
use crate::types::Type;
use crate::value::{Value, convert};

impl Builder<'_> {
    pub(super) fn qubit(&mut self, node: &QubitDeclaration, out: &mut Vec<Stmt>) {
        let designator = node.qubit_type().and_then(|ty| ty.designator());
        let Some(name) = node.name() else { return };
        self.register(&name, designator, core_range(node), out);
    }

    pub(super) fn old_declaration(&mut self, node: &OldDeclaration, out: &mut Vec<Stmt>) {
        let Some(name) = node.name() else { return };
        if node.is_quantum() {
            return self.register(&name, node.designator(), core_range(node), out);
        }
        if let Some(size) = node.designator() {
            self.size(&size, "the size of a register");
        }
        let unknown = Value::Unknown("a bit of the program");
        self.declare(&name, SymbolKind::Variable, core_range(node), unknown);
    }

    fn register(
        &mut self,
        name: &grammar::nodes::Name,
        designator: Option<Designator>,
        range: TextRange,
        out: &mut Vec<Stmt>,
    ) {
        let size = designator.as_ref().map(|d| self.size(d, "the size of a register"));
        let symbol = self.declare(name, SymbolKind::Qubit, range, Value::Unknown("a qubit"));
        let size = match size {
            Some(None) => return, // the register exists, but nothing is known of it
            Some(size) => size,
            None => None,
        };
        let limit = self.facts.limits.qubits;
        if let (Some(size), Some(place)) = (size, &designator)
            && size > limit
        {
            let message = format!("{size} qubits are past the limit of {limit}");
            self.error("limit-reached", place.range(), message);
            return;
        }
        self.push(StmtKind::Qubits { symbol, size }, range, out);
    }

    /// A constant size in brackets.
    pub(super) fn size(&mut self, node: &Designator, what: &str) -> Option<usize> {
        let expr = self.maybe(node.value(), node.range());
        self.constant_size(&expr, what)
    }

    pub(super) fn const_declaration(&mut self, node: &ConstDeclaration) {
        let ty = node.ty().map_or(Type::Unknown, |ty| self.any_type(&ty));
        let value = match node.value() {
            Some(Initialiser::Expression(expression)) => {
                let expr = self.expression(&expression);
                self.constant(&expr).and_then(|value| match convert(&value, ty, false) {
                    Ok(value) => Some(value),
                    Err(problem) => {
                        self.error("type-mismatch", expr.range, problem);
                        None
                    }
                })
            }
            Some(other) => {
                self.error(
                    "not-constant",
                    other.range(),
                    "the value of a `const` must be constant",
                );
                None
            }
            None => None,
        };
        let Some(name) = node.name() else { return };
        let value = value.unwrap_or(Value::Unknown(crate::eval::BROKEN));
        self.declare(&name, SymbolKind::Constant, core_range(node), value);
    }

    pub(super) fn io_declaration(&mut self, node: &IoDeclaration) {
        if let Some(ty) = node.ty() {
            self.any_type(&ty);
        }
        let Some(name) = node.name() else { return };
        let unknown = Value::Unknown(if node.is_input() { "an `input`" } else { "an `output`" });
        self.declare(&name, SymbolKind::Io, core_range(node), unknown);
    }

    /// A scalar variable or an array.
    pub(super) fn classical(&mut self, node: &ClassicalDeclaration, out: &mut Vec<Stmt>) {
        let notes = self.notes(node);
        if let Some(TypeNode::Array(array)) = node.ty()
            && self.array(node, &array, &notes)
        {
            return;
        }
        self.misplaced(&notes, &keyword(node));
        let range = core_range(node);
        let ty = node.ty().map_or(Type::Unknown, |ty| self.any_type(&ty));
        let before = self.calls_seen;
        let mut measured = None;
        let value = match node.value() {
            Some(Initialiser::Expression(expression)) => Some(self.expression(&expression)),
            Some(Initialiser::Measure(measure)) => {
                measured = Some(measure.operand().into_iter().collect());
                None
            }
            Some(Initialiser::MeasureCall(call)) => {
                measured = Some(call.operands());
                None
            }
            Some(Initialiser::Array(array)) => {
                if !matches!(node.ty(), Some(TypeNode::Array(_))) {
                    let message = format!("`{{…}}` is the value of an array, not of {ty}");
                    self.error("type-mismatch", array.range(), message);
                }
                None
            }
            None => None,
        };
        let Some(name) = node.name() else { return };
        let unknown = Value::Unknown("a variable");
        let symbol = self.declare(&name, SymbolKind::Variable, range, unknown);
        if let Some(operands) = measured {
            return self.cut("qubits are measured here", vec![symbol], operands, range, out);
        }
        if self.calls_seen > before {
            let reason = "a subroutine is called here";
            return self.cut(reason, vec![symbol], Vec::new(), range, out);
        }
        self.push(StmtKind::Declare { symbol, ty, value }, range, out);
    }

    /// `let`: qubits, or bits whose value is not followed.
    pub(super) fn alias(&mut self, node: &AliasDeclaration, out: &mut Vec<Stmt>) {
        let range = core_range(node);
        let value = node.value();
        let quantum = value.as_ref().is_some_and(|value| self.names_qubits(value));
        let terms = match (&value, quantum) {
            (Some(value), true) => self.alias_terms(value),
            (Some(value), false) => {
                self.expression(value);
                Vec::new()
            }
            (None, _) => Vec::new(),
        };
        let Some(name) = node.name() else { return };
        if quantum {
            let symbol = self.declare(&name, SymbolKind::Alias, range, Value::Unknown("a qubit"));
            self.push(StmtKind::Alias { symbol, terms }, range, out);
        } else {
            let unknown = Value::Unknown("an alias of bits");
            self.declare(&name, SymbolKind::Variable, range, unknown);
        }
    }

    /// Whether the first name in an expression stands for qubits.
    fn names_qubits(&self, value: &Expression) -> bool {
        let mut nodes = value.syntax().descendants();
        let name = nodes.find_map(grammar::nodes::NameRef::cast);
        let found = name.and_then(|name| self.find(&name.name()));
        found.is_some_and(|(id, _)| QUBITS.contains(&self.facts.symbols[id.index()].kind))
    }

    fn alias_terms(&mut self, value: &Expression) -> Vec<Operand> {
        match value {
            Expression::Concat(concat) => {
                let terms: Vec<Expression> = concat.terms().collect();
                terms.iter().map(|term| self.alias_term(term)).collect()
            }
            single => vec![self.alias_term(single)],
        }
    }

    /// `q`, `q[…]` or `q[…][…]` as qubits.
    fn alias_term(&mut self, node: &Expression) -> Operand {
        let range = node.range();
        let mut indices = Vec::new();
        let mut at = node.clone();
        while let Expression::Index(index) = &at {
            if let Some(items) = index.index() {
                indices.push(self.indices(&items));
            }
            match index.base() {
                Some(base) => at = base,
                None => return Operand { range, base: OperandBase::Broken, indices },
            }
        }
        indices.reverse();
        let base = match &at {
            Expression::Name(name) => match self.resolve(name, &QUBITS) {
                Some(id) if QUBITS.contains(&self.facts.symbols[id.index()].kind) => {
                    OperandBase::Symbol(id)
                }
                Some(_) => {
                    self.error("type-mismatch", range, "qubits and bits cannot be joined");
                    OperandBase::Broken
                }
                None => OperandBase::Broken,
            },
            _ => {
                self.error(
                    "type-mismatch",
                    range,
                    "only names of qubits can be given another name",
                );
                OperandBase::Broken
            }
        };
        Operand { range, base, indices }
    }

    pub(super) fn external(&mut self, node: &ExternDeclaration) {
        let Some(name) = node.name() else { return };
        let unknown = Value::Unknown("an external function");
        self.declare(&name, SymbolKind::Extern, core_range(node), unknown);
    }

    pub(super) fn subroutine(&mut self, node: &SubroutineDefinition) {
        let notes = self.notes(node);
        let range = core_range(node);
        let rest = self.take_claims(notes, Subject::Subroutine(range), false);
        self.misplaced(&rest, "a `def`");
        let Some(name) = node.name() else { return };
        // A subroutine may call itself.
        let unknown = Value::Unknown("a subroutine");
        self.declare(&name, SymbolKind::Subroutine, range, unknown);
        let loops = std::mem::take(&mut self.loops);
        let (qubits, body) = self.scoped(ScopeKind::Subroutine, |this| {
            let parameters = node.parameters();
            let declared: Vec<_> = parameters.iter().map(|p| this.signature(p)).collect();
            let qubits = declared.into_iter().flatten().collect();
            let mut body = Vec::new();
            if let Some(block) = node.body() {
                for statement in block.statements() {
                    this.statement(&statement, &mut body);
                }
            }
            (qubits, body)
        });
        self.loops = loops;
        self.facts.subroutines.push(Subroutine { qubits, body });
    }

    /// Declares a parameter of a subroutine; a qubit comes with its size.
    fn signature(&mut self, node: &SignatureParameter) -> Option<(SymbolId, Option<usize>)> {
        let name = node.name()?;
        let what = "the size of a register";
        let (quantum, designator) = match node.ty() {
            Some(TypeNode::Qubit(ty)) => (true, ty.designator()),
            Some(TypeNode::Old(ty)) => (ty.is_quantum(), node.designator()),
            Some(other) => {
                self.any_type(&other);
                (false, None)
            }
            None => (false, None),
        };
        let size = designator.map(|designator| self.size(&designator, what));
        let kind = if quantum { SymbolKind::Operand } else { SymbolKind::Parameter };
        let unknown = Value::Unknown("a parameter of the subroutine");
        let symbol = self.declare(&name, kind, node.range(), unknown);
        let limit = self.facts.limits.qubits;
        match (quantum, size) {
            (true, None) => Some((symbol, None)),
            (true, Some(Some(size))) if size <= limit => Some((symbol, Some(size))),
            _ => None,
        }
    }
}
