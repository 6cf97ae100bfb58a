//! The machine that runs statements.

use std::collections::{BTreeMap, HashMap};
use std::sync::Arc;

use grammar::{TextRange, TextSize};
use operator::{Circuit, Step};

use super::Lowering;
use crate::arithmetic::{BinaryOp, binary};
use crate::build::written;
use crate::eval::{BROKEN, Env, Trouble, eval};
use crate::facts::Facts;
use crate::finding::{FileId, Finding};
use crate::hir::{Expr, Operand, Stmt, StmtKind};
use crate::model::{Cannot, Cut, Lowered};
use crate::symbols::SymbolId;
use crate::types::Type;
use crate::value::{Value, convert};

/// How statements are run.
#[derive(Clone, Copy)]
pub(crate) enum Mode<'a> {
    /// Appending steps, at this depth of gate calls.
    Build(&'a Lowering<'a>, usize),
    /// Reporting every trouble.
    Check,
}

/// What a name is bound to while running.
#[derive(Debug, Clone)]
pub(super) enum Binding {
    Value(Value),
    Wires(Wires),
}

/// Qubits: a register, or a single one.
#[derive(Debug, Clone)]
pub(super) struct Wires {
    pub(super) wires: Arc<[usize]>,
    pub(super) register: bool,
}

/// How a call was broadcast, over all of its turns.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Broadcast {
    /// Once a turn, on single qubits.
    Single,
    /// Over registers of this length.
    Over(usize),
    /// Differently from turn to turn, or not known.
    Varies,
}

/// Which steps of a program a `box` or `for` made when it first ran.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) struct BlockSteps {
    pub(crate) file: FileId,
    pub(crate) range: TextRange,
    pub(crate) steps: std::ops::Range<usize>,
}

/// How a statement ended.
#[derive(Debug)]
pub(super) enum Flow {
    Next,
    Break,
    Continue,
    /// Nothing after this runs.
    End,
}

/// The state of a run.
pub(crate) struct Machine<'a> {
    pub(super) facts: &'a Facts,
    pub(super) mode: Mode<'a>,
    pub(super) bindings: HashMap<SymbolId, Binding>,
    pub(super) hardware: BTreeMap<u64, usize>,
    pub(super) wire_names: Vec<String>,
    pub(super) steps: Vec<Step>,
    pub(super) origins: Vec<(FileId, TextRange)>,
    pub(crate) findings: Vec<Finding>,
    /// How each call was broadcast, by file and start.
    pub(crate) broadcasts: BTreeMap<(FileId, TextSize), Broadcast>,
    /// How often each loop turns; none if that differs or is not known.
    pub(crate) turns: BTreeMap<(FileId, TextSize), Option<usize>>,
    blocks: Vec<BlockSteps>,
    cut: Option<Cut>,
    /// Statements and broadcast instances run so far.
    work: usize,
}

impl Env for Machine<'_> {
    fn value(&self, symbol: SymbolId) -> Value {
        match self.bindings.get(&symbol) {
            Some(Binding::Value(value)) => value.clone(),
            Some(Binding::Wires(_)) => Value::Unknown("a qubit"),
            None => self.facts.value(symbol),
        }
    }
}

impl<'a> Machine<'a> {
    pub(crate) fn new(facts: &'a Facts, mode: Mode<'a>) -> Self {
        Machine {
            facts,
            mode,
            bindings: HashMap::new(),
            hardware: BTreeMap::new(),
            wire_names: Vec::new(),
            steps: Vec::new(),
            origins: Vec::new(),
            findings: Vec::new(),
            broadcasts: BTreeMap::new(),
            turns: BTreeMap::new(),
            blocks: Vec::new(),
            cut: None,
            work: 0,
        }
    }

    pub(crate) fn bind_value(&mut self, symbol: SymbolId, value: Value) {
        self.bindings.insert(symbol, Binding::Value(value));
    }

    /// Runs statements; an error says why they have no circuit.
    pub(crate) fn run(&mut self, statements: &[Stmt]) -> Result<(), Cannot> {
        self.all(statements).map(|_| ())
    }

    /// Runs statements for their findings.
    pub(crate) fn check(&mut self, statements: &[Stmt]) {
        // Checking never refuses: what is wrong went to the findings.
        let _finished = self.all(statements);
    }

    /// The circuit that was built, and the steps of its blocks.
    pub(crate) fn finish(self) -> (Lowered, Vec<BlockSteps>) {
        let circuit = Circuit { wires: self.wire_names.len(), steps: self.steps };
        let (origins, wire_names, cut) = (self.origins, self.wire_names, self.cut);
        (Lowered { circuit, origins, wire_names, cut }, self.blocks)
    }

    pub(super) fn building(&self) -> bool {
        matches!(self.mode, Mode::Build(..))
    }

    /// Reports a trouble, or refuses because of it.
    pub(super) fn trouble(
        &mut self,
        statement: &Stmt,
        trouble: Option<Trouble>,
    ) -> Result<(), Cannot> {
        let file = statement.file;
        match (self.mode, trouble) {
            (Mode::Build(..), Some(trouble)) => {
                Err(Cannot::at(file, trouble.range, trouble.message))
            }
            (Mode::Build(..), None) => {
                Err(Cannot::at(file, statement.range, "this statement is not understood"))
            }
            (Mode::Check, Some(trouble)) => {
                let finding = Finding::error(trouble.code, file, trouble.range, trouble.message);
                // A loop reports each place once, whatever its turns say.
                let known = |f: &Finding| {
                    (f.code, f.file, f.range) == (finding.code, finding.file, finding.range)
                };
                let room = self.findings.len() < self.facts.limits.findings;
                if room && !self.findings.iter().any(known) {
                    self.findings.push(finding);
                }
                Ok(())
            }
            (Mode::Check, None) => Ok(()),
        }
    }

    /// Counts work; past the limit nothing more is run.
    pub(super) fn spend(&mut self, statement: &Stmt, amount: usize) -> Result<bool, Cannot> {
        let limit = self.facts.limits.steps;
        let before = self.work;
        self.work = self.work.saturating_add(amount);
        if self.work <= limit {
            return Ok(true);
        }
        if before <= limit {
            let message = format!("this makes more than the limit of {limit} steps");
            let trouble = Trouble::new("limit-reached", statement.range, message);
            self.trouble(statement, Some(trouble))?;
        }
        Ok(false)
    }

    /// While building, ends the circuit here.
    pub(super) fn cut_here(&mut self, statement: &Stmt, reason: String) -> Flow {
        if !self.building() {
            return Flow::Next;
        }
        self.cut = Some(Cut { file: statement.file, range: statement.range, reason });
        Flow::End
    }

    pub(super) fn all(&mut self, statements: &[Stmt]) -> Result<Flow, Cannot> {
        for statement in statements {
            if !self.spend(statement, 1)? {
                return Ok(Flow::End);
            }
            match self.one(statement)? {
                Flow::Next => {}
                other => return Ok(other),
            }
        }
        Ok(Flow::Next)
    }

    fn one(&mut self, statement: &Stmt) -> Result<Flow, Cannot> {
        match &statement.kind {
            StmtKind::Qubits { symbol, size } => {
                let fits = self.bind_register(*symbol, *size);
                if !fits {
                    let limit = self.facts.limits.qubits;
                    let message = format!("the program has more qubits than the limit of {limit}");
                    let trouble = Trouble::new("limit-reached", statement.range, message);
                    self.trouble(statement, Some(trouble))?;
                }
            }
            StmtKind::Declare { symbol, ty, value } => {
                self.declare(statement, *symbol, *ty, value.as_ref())?;
            }
            StmtKind::Alias { symbol, terms } => {
                if let Some(what) = self.alias(statement, *symbol, terms)? {
                    return Ok(self.cut_here(statement, format!("it depends on {what}")));
                }
            }
            StmtKind::Call(call) => {
                if let Some(what) = self.call(statement, call)? {
                    return Ok(self.cut_here(statement, format!("it depends on {what}")));
                }
            }
            StmtKind::Identity(operands) => {
                self.touch(statement, operands)?;
            }
            StmtKind::Box(body) => {
                let start = self.steps.len();
                let flow = self.all(body)?;
                self.note_block(statement, start);
                return Ok(flow);
            }
            StmtKind::If { condition, then, otherwise } => {
                return self.branch(statement, condition, then, otherwise);
            }
            StmtKind::For { symbol, ty, over, body } => {
                let start = self.steps.len();
                let flow = self.repeat(statement, *symbol, *ty, over, body)?;
                self.note_block(statement, start);
                return Ok(flow);
            }
            StmtKind::Assign { symbol, partial, op, value } => {
                self.assign(statement, *symbol, *partial, *op, value)?;
            }
            StmtKind::Break => return Ok(Flow::Break),
            StmtKind::Continue => return Ok(Flow::Continue),
            StmtKind::End => return Ok(Flow::End),
            StmtKind::Cut { reason, writes, operands, inside } => {
                if self.building() {
                    return Ok(self.cut_here(statement, reason.clone()));
                }
                self.touch(statement, operands)?;
                self.forget(writes);
                self.all(inside)?;
                self.forget(writes);
            }
        }
        Ok(Flow::Next)
    }

    /// Looks at operands for their troubles only.
    fn touch(&mut self, statement: &Stmt, operands: &[Operand]) -> Result<(), Cannot> {
        for operand in operands {
            // Where they lie does not matter, so it need not be known.
            let _wires = self.qubits(statement, operand)?;
        }
        Ok(())
    }

    fn note_block(&mut self, statement: &Stmt, start: usize) {
        let (file, range) = (statement.file, statement.range);
        let known = self.blocks.iter().any(|block| block.file == file && block.range == range);
        if self.building() && !known && self.cut.is_none() {
            self.blocks.push(BlockSteps { file, range, steps: start..self.steps.len() });
        }
    }

    /// The values of these variables are known no longer.
    pub(super) fn forget(&mut self, symbols: &[SymbolId]) {
        for symbol in symbols {
            self.bind_value(*symbol, Value::Unknown("what was measured"));
        }
    }

    fn declare(
        &mut self,
        statement: &Stmt,
        symbol: SymbolId,
        ty: Type,
        value: Option<&Expr>,
    ) -> Result<(), Cannot> {
        let value = match value {
            Some(value) => self.converted(statement, value, ty)?,
            None => Value::Unknown("a variable without a value"),
        };
        self.bind_value(symbol, value);
        Ok(())
    }

    /// A value in a type; unknown if it has none.
    fn converted(&mut self, statement: &Stmt, expr: &Expr, ty: Type) -> Result<Value, Cannot> {
        let typed = |problem| Trouble::new("type-mismatch", expr.range, problem);
        let value = eval(expr, self).and_then(|value| convert(&value, ty, false).map_err(typed));
        match value {
            Ok(value) => Ok(value),
            Err(trouble) => {
                self.trouble(statement, Some(trouble))?;
                Ok(Value::Unknown(BROKEN))
            }
        }
    }

    fn assign(
        &mut self,
        statement: &Stmt,
        symbol: SymbolId,
        partial: bool,
        op: Option<BinaryOp>,
        value: &Expr,
    ) -> Result<(), Cannot> {
        let before = self.value(symbol);
        let mut new = self.converted(statement, value, Type::Unknown)?;
        if let Some(op) = op {
            match binary(op, &before, &new) {
                Ok(value) => new = value,
                Err(problem) => {
                    let trouble = Trouble::new("type-mismatch", statement.range, problem);
                    self.trouble(statement, Some(trouble))?;
                    new = Value::Unknown(BROKEN);
                }
            }
        }
        // An assignment keeps the type of the value that was there.
        let ty = type_of(&before);
        let kept = convert(&new, ty, false).unwrap_or(new);
        let value = if partial { Value::Unknown("a value assigned in parts") } else { kept };
        self.bind_value(symbol, value);
        Ok(())
    }

    fn branch(
        &mut self,
        statement: &Stmt,
        condition: &Expr,
        then: &[Stmt],
        otherwise: &[Stmt],
    ) -> Result<Flow, Cannot> {
        let value = match eval(condition, self) {
            Ok(value) => value,
            Err(trouble) => {
                self.trouble(statement, Some(trouble))?;
                Value::Unknown(BROKEN)
            }
        };
        if let Value::Unknown(what) = value {
            if self.building() {
                return Ok(self.cut_here(statement, format!("the condition depends on {what}")));
            }
            self.all(then)?;
            self.all(otherwise)?;
            let writes: Vec<SymbolId> =
                written(then).into_iter().chain(written(otherwise)).collect();
            self.forget(&writes);
            return Ok(Flow::Next);
        }
        match value.truth() {
            Some(true) => self.all(then),
            Some(false) => self.all(otherwise),
            None => {
                let message = format!("{} is no condition", value.type_name());
                let trouble = Trouble::new("type-mismatch", condition.range, message);
                self.trouble(statement, Some(trouble))?;
                Ok(Flow::Next)
            }
        }
    }

    /// A value that a step needs. Outer error: refused; inner one: not known.
    pub(super) fn needed(
        &mut self,
        statement: &Stmt,
        expr: &Expr,
    ) -> Result<Result<Value, &'static str>, Cannot> {
        match eval(expr, self) {
            Ok(Value::Unknown(BROKEN)) => {
                self.trouble(statement, None)?;
                Ok(Err(BROKEN))
            }
            Ok(Value::Unknown(what)) => Ok(Err(what)),
            Ok(value) => Ok(Ok(value)),
            Err(trouble) => {
                self.trouble(statement, Some(trouble))?;
                Ok(Err(BROKEN))
            }
        }
    }
}

fn type_of(value: &Value) -> Type {
    match value {
        Value::Bool(_) => Type::Bool,
        Value::Int(int) => Type::Int { width: int.width, signed: int.signed },
        Value::Float(_) => Type::Float,
        Value::Complex(_) => Type::Complex,
        Value::Angle(angle) => Type::Angle(angle.width),
        Value::Bits(bits) => Type::Bits(bits.len()),
        Value::Duration(_) => Type::Duration,
        Value::Unknown(_) => Type::Unknown,
    }
}
