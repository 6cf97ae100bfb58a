//! Statements: where each may stand, and what it does.

use grammar::nodes::{
    AssignmentStatement, BoxStatement, Expression, ForStatement, IfStatement, Initialiser,
    Iterated, MeasureStatement, NodeExt, Operand as OperandNode, Statement, SwitchStatement,
    WhileStatement,
};
use grammar::{SyntaxKind as K, TextRange};

use super::expressions::binary_op;
use super::scopes::ScopeKind;
use super::{Builder, core_range, gates::keyword};
use crate::hir::{Expr, Over, Stmt, StmtKind};
use crate::model::Subject;
use crate::symbols::{SymbolId, SymbolKind};
use crate::types::Type;
use crate::value::Value;

impl Builder<'_> {
    /// Resolves a statement and appends what it does.
    pub(super) fn statement(&mut self, node: &Statement, out: &mut Vec<Stmt>) {
        let range = core_range(node);
        if !self.may_stand_here(node, range) {
            self.notes(node);
            return;
        }
        self.deeper(range, |this| this.allowed_statement(node, range, out));
    }

    fn allowed_statement(&mut self, node: &Statement, range: TextRange, out: &mut Vec<Stmt>) {
        match node {
            Statement::Gate(gate) => return self.gate(gate),
            Statement::Opaque(opaque) => return self.opaque(opaque),
            Statement::Subroutine(subroutine) => return self.subroutine(subroutine),
            Statement::Classical(variable) => return self.classical(variable, out),
            Statement::Box(block) => return self.boxed(block, range, out),
            Statement::For(repeat) => return self.repeat(repeat, range, out),
            _ => {}
        }
        let notes = self.notes(node);
        self.misplaced(&notes, &keyword(node));
        let before = self.calls_seen;
        let start = out.len();
        self.plain_statement(node, range, out);
        if self.calls_seen > before && out.len() == start + 1 {
            self.cut_at_call(out);
        }
    }

    fn plain_statement(&mut self, node: &Statement, range: TextRange, out: &mut Vec<Stmt>) {
        match node {
            Statement::Include(include) => self.include(include, out),
            Statement::Qubit(qubit) => self.qubit(qubit, out),
            Statement::Old(old) => self.old_declaration(old, out),
            Statement::Const(constant) => self.const_declaration(constant),
            Statement::Io(io) => self.io_declaration(io),
            Statement::Alias(alias) => self.alias(alias, out),
            Statement::Extern(external) => self.external(external),
            Statement::GateCall(call) => self.gate_call_checked(call, out),
            Statement::Gphase(call) => self.gphase(call, out),
            Statement::Barrier(barrier) => self.identity(&barrier.operands(), range, out),
            Statement::Delay(delay) => {
                if let Some(value) = delay.designator().and_then(|d| d.value()) {
                    self.expression(&value);
                }
                self.identity(&delay.operands(), range, out);
            }
            Statement::Nop(nop) => self.identity(&nop.operands(), range, out),
            Statement::Reset(reset) => {
                let operands = reset.operand().into_iter().collect();
                self.cut("qubits are reset here", Vec::new(), operands, range, out);
            }
            Statement::Measure(measure) => self.measurement(measure, range, out),
            Statement::If(branch) => self.branch(branch, range, out),
            Statement::While(repeat) => self.while_loop(repeat, range, out),
            Statement::Switch(switch) => self.switch(switch, range, out),
            Statement::Assignment(assignment) => self.assignment(assignment, range, out),
            Statement::Expression(statement) => self.bare_expression(statement, range, out),
            Statement::Return(value) => {
                if let Some(Initialiser::Expression(value)) = value.value() {
                    self.expression(&value);
                }
                self.push(StmtKind::End, range, out);
            }
            Statement::Break(_) => self.push(StmtKind::Break, range, out),
            Statement::Continue(_) => self.push(StmtKind::Continue, range, out),
            Statement::End(_) => self.push(StmtKind::End, range, out),
            Statement::Block(_) => {
                let body = self.body(Some(node.clone()), range);
                self.push(StmtKind::Box(body), range, out);
            }
            _ => {}
        }
    }

    /// Reports a statement that the place it stands in does not allow.
    fn may_stand_here(&mut self, node: &Statement, range: TextRange) -> bool {
        use Statement as S;
        let word = keyword(node);
        let in_gate = self.inside(ScopeKind::Gate);
        let allowed_in_gate = matches!(
            node,
            S::GateCall(_)
                | S::Gphase(_)
                | S::For(_)
                | S::Barrier(_)
                | S::Delay(_)
                | S::Nop(_)
                | S::Alias(_)
                | S::Block(_)
        );
        if in_gate && !allowed_in_gate {
            let message = format!("{word} is not allowed in a gate, which is made of gates only");
            self.error("not-allowed-in-gate", range, message);
            return false;
        }
        let global_only = match node {
            S::Include(_)
            | S::Qubit(_)
            | S::Old(_)
            | S::Io(_)
            | S::Gate(_)
            | S::Opaque(_)
            | S::Subroutine(_)
            | S::Extern(_)
            | S::CalibrationGrammar(_)
            | S::Defcal(_) => true,
            S::Classical(variable) => matches!(variable.ty(), Some(grammar::nodes::Type::Array(_))),
            _ => false,
        };
        if global_only && self.scopes.len() > 1 {
            let message = format!("{word} may only stand outside all blocks");
            self.error("syntax", range, message);
            return false;
        }
        let misplaced = match node {
            S::Break(_) | S::Continue(_) if self.loops == 0 => Some("in a loop"),
            S::Return(_) if !self.inside(ScopeKind::Subroutine) => Some("in a `def`"),
            _ => None,
        };
        if let Some(place) = misplaced {
            self.error("syntax", range, format!("{word} may only stand {place}"));
        }
        misplaced.is_none()
    }

    pub(super) fn push(&mut self, kind: StmtKind, range: TextRange, out: &mut Vec<Stmt>) {
        out.push(Stmt { file: self.file, range, kind });
    }

    /// A statement without one operator.
    pub(super) fn cut(
        &mut self,
        reason: &str,
        writes: Vec<SymbolId>,
        operands: Vec<OperandNode>,
        range: TextRange,
        out: &mut Vec<Stmt>,
    ) {
        let operands = operands.iter().map(|node| self.operand(node)).collect();
        let reason = reason.to_owned();
        self.push(StmtKind::Cut { reason, writes, operands, inside: Vec::new() }, range, out);
    }

    /// Turns the last statement, which calls a subroutine, into a cut.
    fn cut_at_call(&mut self, out: &mut Vec<Stmt>) {
        let Some(last) = out.pop() else { return };
        let Stmt { file, range, kind } = last;
        let writes = match &kind {
            StmtKind::Assign { symbol, .. } | StmtKind::Declare { symbol, .. } => vec![*symbol],
            _ => Vec::new(),
        };
        let reason = "a subroutine is called here".to_owned();
        let inside = match kind {
            StmtKind::If { then, otherwise, .. } => then.into_iter().chain(otherwise).collect(),
            StmtKind::Cut { inside, .. } => inside,
            _ => Vec::new(),
        };
        let kind = StmtKind::Cut { reason, writes, operands: Vec::new(), inside };
        out.push(Stmt { file, range, kind });
    }

    fn gate_call_checked(&mut self, node: &grammar::nodes::GateCall, out: &mut Vec<Stmt>) {
        self.gate_call(node, out);
        if let Some(Stmt { kind: StmtKind::Call(call), .. }) = out.last() {
            let operands = call.operands.clone();
            self.check_gate_operands(&operands);
        }
    }

    fn identity(&mut self, operands: &[OperandNode], range: TextRange, out: &mut Vec<Stmt>) {
        let operands = operands.iter().map(|node| self.operand(node)).collect();
        self.push(StmtKind::Identity(operands), range, out);
    }

    fn measurement(&mut self, node: &MeasureStatement, range: TextRange, out: &mut Vec<Stmt>) {
        let writes = node.target().and_then(|target| self.target(&target)).into_iter().collect();
        let operands = node.operand().into_iter().collect();
        self.cut("qubits are measured here", writes, operands, range, out);
    }

    /// The classical variable that is written, its indices resolved.
    fn target(&mut self, node: &OperandNode) -> Option<SymbolId> {
        let name = node.name()?;
        for index in node.indices().collect::<Vec<_>>() {
            self.indices(&index);
        }
        let wanted = [SymbolKind::Variable, SymbolKind::Io];
        let id = self.resolve(&name, &wanted)?;
        let symbol = self.facts.symbols[id.index()].clone();
        let writable =
            [SymbolKind::Variable, SymbolKind::Io, SymbolKind::Matrix, SymbolKind::Alias];
        let parameter = symbol.kind == SymbolKind::Parameter && !self.inside(ScopeKind::Gate);
        if writable.contains(&symbol.kind) || parameter || symbol.kind == SymbolKind::LoopVariable {
            return Some(id);
        }
        let message = format!("`{}` cannot be assigned", symbol.name);
        self.error("type-mismatch", name.range(), message);
        None
    }

    fn assignment(&mut self, node: &AssignmentStatement, range: TextRange, out: &mut Vec<Stmt>) {
        let Some(target) = node.target() else { return };
        let symbol = self.target(&target);
        let partial = target.indices().next().is_some();
        let op = node.operator().and_then(|token| match token.kind() {
            K::Equals => None,
            kind => binary_op(kind),
        });
        match node.value() {
            Some(Initialiser::Expression(value)) => {
                let value = self.expression(&value);
                if let Some(symbol) = symbol {
                    self.push(StmtKind::Assign { symbol, partial, op, value }, range, out);
                }
            }
            Some(Initialiser::Measure(measure)) => {
                let writes = symbol.into_iter().collect();
                let operands = measure.operand().into_iter().collect();
                self.cut("qubits are measured here", writes, operands, range, out);
            }
            Some(Initialiser::MeasureCall(call)) => {
                let writes = symbol.into_iter().collect();
                self.cut("a calibrated measurement is made", writes, call.operands(), range, out);
            }
            Some(Initialiser::Array(_)) | None => {}
        }
    }

    fn bare_expression(
        &mut self,
        node: &grammar::nodes::ExpressionStatement,
        range: TextRange,
        out: &mut Vec<Stmt>,
    ) {
        let Some(expression) = node.expression() else { return };
        let name = match &expression {
            Expression::Name(name) => Some(name.clone()),
            Expression::Call(call) => call.name(),
            _ => None,
        };
        let kind = name.as_ref().and_then(|name| self.find(&name.name())).map(|(id, _)| id);
        let kind = kind.map(|id| self.facts.symbols[id.index()].kind);
        if kind == Some(SymbolKind::Gate) {
            let message = format!("{} acts on no qubit here", keyword(node));
            self.error("operand-count", range, message);
            return;
        }
        let value = self.expression(&expression);
        if !matches!(value.kind, crate::hir::ExprKind::Broken) {
            self.push(StmtKind::Identity(Vec::new()), range, out);
        }
    }

    /// The statements of a block or of a single statement, in a new scope.
    pub(super) fn body(&mut self, node: Option<Statement>, range: TextRange) -> Vec<Stmt> {
        let Some(node) = node else { return Vec::new() };
        let inside = self.deeper(range, |this| {
            this.scoped(ScopeKind::Block, |this| {
                let mut out = Vec::new();
                match &node {
                    Statement::Block(block) => {
                        for statement in block.statements() {
                            this.statement(&statement, &mut out);
                        }
                    }
                    single => this.statement(single, &mut out),
                }
                out
            })
        });
        inside.unwrap_or_default()
    }

    fn boxed(&mut self, node: &BoxStatement, range: TextRange, out: &mut Vec<Stmt>) {
        let notes = self.notes(node);
        let rest = self.take_claims(notes, Subject::Block(range), false);
        self.misplaced(&rest, "a `box`");
        if let Some(value) = node.designator().and_then(|d| d.value()) {
            self.expression(&value);
        }
        let body = self.body(node.body().map(Statement::Block), range);
        self.push(StmtKind::Box(body), range, out);
    }

    fn branch(&mut self, node: &IfStatement, range: TextRange, out: &mut Vec<Stmt>) {
        let condition = self.maybe(node.condition(), range);
        let then = self.body(node.then_branch(), range);
        let otherwise = self.body(node.else_branch(), range);
        self.push(StmtKind::If { condition, then, otherwise }, range, out);
    }

    fn repeat(&mut self, node: &ForStatement, range: TextRange, out: &mut Vec<Stmt>) {
        let notes = self.notes(node);
        let rest = self.take_claims(notes, Subject::Block(range), false);
        self.misplaced(&rest, "a `for`");
        let ty = node.ty().map_or(Type::Unknown, |ty| self.scalar_type(&ty));
        let over = self.iterated(node.iterated());
        let Some(name) = node.variable() else { return };
        self.loops += 1;
        let (symbol, body) = self.scoped(ScopeKind::Block, |this| {
            let unknown = Value::Unknown("the variable of a loop");
            let symbol = this.declare(&name, SymbolKind::LoopVariable, name.range(), unknown);
            (symbol, this.body(node.body(), range))
        });
        self.loops -= 1;
        self.push(StmtKind::For { symbol, ty, over, body }, range, out);
    }

    fn iterated(&mut self, node: Option<Iterated>) -> Over {
        match node {
            None => Over::Broken,
            Some(Iterated::Set(set)) => Over::Set(self.set(&set)),
            Some(Iterated::Expression(value)) => Over::Value(self.expression(&value)),
            Some(Iterated::Range(node)) => {
                let range = node.range();
                let (Some(start), Some(stop)) = (node.start(), node.stop()) else {
                    let message = "the range of a loop needs a start and an end";
                    self.error("type-mismatch", range, message);
                    return Over::Broken;
                };
                let (start, stop) = (self.expression(&start), self.expression(&stop));
                let step = node.step().map(|step| self.expression(&step));
                Over::Range { range, start, step, stop }
            }
        }
    }

    fn while_loop(&mut self, node: &WhileStatement, range: TextRange, out: &mut Vec<Stmt>) {
        self.maybe(node.condition(), range);
        self.loops += 1;
        let inside = self.body(node.body(), range);
        self.loops -= 1;
        let reason = "how often this loop turns is known only at run time".to_owned();
        let writes = written(&inside);
        let kind = StmtKind::Cut { reason, writes, operands: Vec::new(), inside };
        self.push(kind, range, out);
    }

    fn switch(&mut self, node: &SwitchStatement, range: TextRange, out: &mut Vec<Stmt>) {
        self.maybe(node.selector(), range);
        let mut inside = Vec::new();
        for case in node.cases().collect::<Vec<_>>() {
            for value in case.values().collect::<Vec<_>>() {
                let value: Expr = self.expression(&value);
                self.constant(&value);
            }
            inside.extend(self.body(case.body().map(Statement::Block), range));
        }
        let default = node.default().and_then(|default| default.body());
        inside.extend(self.body(default.map(Statement::Block), range));
        let reason = "a `switch` chooses what happens next".to_owned();
        let writes = written(&inside);
        let kind = StmtKind::Cut { reason, writes, operands: Vec::new(), inside };
        self.push(kind, range, out);
    }
}

/// The variables that statements may write.
pub(crate) fn written(statements: &[Stmt]) -> Vec<SymbolId> {
    let mut symbols = Vec::new();
    for statement in statements {
        match &statement.kind {
            StmtKind::Assign { symbol, .. } => symbols.push(*symbol),
            StmtKind::Cut { writes, inside, .. } => {
                symbols.extend(writes);
                symbols.extend(written(inside));
            }
            StmtKind::Box(inside) | StmtKind::For { body: inside, .. } => {
                symbols.extend(written(inside));
            }
            StmtKind::If { then, otherwise, .. } => {
                symbols.extend(written(then));
                symbols.extend(written(otherwise));
            }
            _ => {}
        }
    }
    symbols
}
