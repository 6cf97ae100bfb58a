//! Which ancillas every caller of an encoded gate needs, and where they go.
//!
//! # The rule
//!
//! A block encoding stands for its matrix only on the runs in which its
//! ancillas start in |0…0⟩ and are found there. Two encodings one after the
//! other encode the product of their matrices if each has ancillas of its
//! own; on shared ones the second would start from whatever the first left,
//! and the product would be lost. So every call that the program makes gets
//! its own ancillas: a gate passes on as many as its calls need together, a
//! loop takes as many as all its turns, a call broadcast over registers one
//! set for each instance. That is sound for every use, at the price of more
//! qubits than a program needs that measures and resets between the calls.

use std::collections::BTreeMap;

use grammar::TextRange;

use crate::eval::eval_known;
use crate::facts::Facts;
use crate::finding::FileId;
use crate::hir::{Body, Call, Callee, Modifier, Over, Stmt, StmtKind};
use crate::lower::{Broadcast, Machine, check_program};
use crate::model::Cannot;
use crate::symbols::SymbolId;

/// A call inside a gate: its ancillas are some of the gate's own.
pub(super) struct InnerCall<'a> {
    pub(super) call: &'a Call,
    /// The first of them, counted from the gate's first ancilla.
    pub(super) first: usize,
    pub(super) count: usize,
}

/// A gate that passes ancillas on.
pub(super) struct Caller<'a> {
    pub(super) gate: usize,
    pub(super) count: usize,
    pub(super) calls: Vec<InnerCall<'a>>,
}

/// A call of the program: its ancillas are elements of the register.
pub(super) struct OuterCall<'a> {
    pub(super) call: &'a Call,
    pub(super) range: TextRange,
    /// Ancilla operands of the call.
    pub(super) count: usize,
    /// Length of the registers it is broadcast over; 1 for single qubits.
    pub(super) length: usize,
    pub(super) broadcast: bool,
    /// The first element it uses in the first turn of every loop.
    pub(super) first: usize,
    /// The loops around it, outermost first.
    pub(super) loops: Vec<Turns>,
}

/// How the elements move on from turn to turn of a loop: by `stride` times
/// `(variable − start) / step`.
#[derive(Debug, Clone)]
pub(super) struct Turns {
    pub(super) variable: String,
    pub(super) start: i128,
    pub(super) step: i128,
    pub(super) turns: usize,
    pub(super) stride: usize,
}

/// Where the ancillas of one gate come from.
pub(super) struct Plan<'a> {
    pub(super) callers: Vec<Caller<'a>>,
    pub(super) calls: Vec<OuterCall<'a>>,
    /// Size of the register.
    pub(super) total: usize,
}

/// Plans the ancillas of all callers of `gate`, which needs `ancillas`.
pub(super) fn plan(facts: &Facts, gate: usize, ancillas: usize) -> Result<Plan<'_>, Cannot> {
    let mut planner = Planner {
        facts,
        checked: check_program(facts),
        needs: BTreeMap::from([(gate, ancillas)]),
        plan: Plan { callers: Vec::new(), calls: Vec::new(), total: 0 },
    };
    planner.gates(gate)?;
    for subroutine in &facts.subroutines {
        if let Some((stmt, _)) = planner.first_call(&subroutine.body) {
            let reason = "a subroutine calls the gate, and ancillas are not passed through \
                          subroutines yet";
            return Err(Cannot::at(stmt.file, stmt.range, reason));
        }
    }
    planner.program(&facts.main, &[])?;
    Ok(planner.plan)
}

struct Planner<'a> {
    facts: &'a Facts,
    checked: Machine<'a>,
    /// Ancillas of each gate that needs some.
    needs: BTreeMap<usize, usize>,
    plan: Plan<'a>,
}

impl<'a> Planner<'a> {
    /// The ancillas a call needs; none if it needs none.
    fn need(&self, call: &Call) -> Option<usize> {
        let Callee::Gate(gate) = call.callee else { return None };
        self.needs.get(&gate).copied()
    }

    /// Gates after the encoded one, in order: none calls a later one.
    fn gates(&mut self, encoded: usize) -> Result<(), Cannot> {
        for (index, body) in self.facts.bodies.iter().enumerate().skip(encoded + 1) {
            let Body::Defined(body) = body else { continue };
            let mut calls = Vec::new();
            let mut count = 0;
            self.inner_calls(&body.body, false, &mut calls, &mut count)?;
            if calls.is_empty() {
                continue;
            }
            let gate = &self.facts.gates[index];
            if gate.file != FileId::MAIN {
                let reason = format!("`{}` calls the gate and is in an included file", gate.name);
                return Err(Cannot::at(gate.file, gate.name_range, reason));
            }
            self.within_limit(count)?;
            self.needs.insert(index, count);
            self.plan.callers.push(Caller { gate: index, count, calls });
        }
        Ok(())
    }

    fn inner_calls(
        &self,
        body: &'a [Stmt],
        in_loop: bool,
        calls: &mut Vec<InnerCall<'a>>,
        count: &mut usize,
    ) -> Result<(), Cannot> {
        for stmt in body {
            match &stmt.kind {
                StmtKind::Call(call) => {
                    let Some(need) = self.need(call) else { continue };
                    self.check_modifiers(stmt, call)?;
                    if in_loop {
                        let reason = "the gate is called in a loop inside a gate, where an \
                                      operand cannot depend on the turn";
                        return Err(Cannot::at(stmt.file, stmt.range, reason));
                    }
                    calls.push(InnerCall { call, first: *count, count: need });
                    *count = count.saturating_add(need);
                }
                StmtKind::Box(inside) => self.inner_calls(inside, in_loop, calls, count)?,
                StmtKind::For { body, .. } => self.inner_calls(body, true, calls, count)?,
                _ => {}
            }
        }
        Ok(())
    }

    /// A power of an encoding is not the encoding of the power.
    fn check_modifiers(&self, stmt: &Stmt, call: &Call) -> Result<(), Cannot> {
        for modifier in &call.modifiers {
            let Modifier::Power(exponent) = modifier else { continue };
            let value = eval_known(exponent, self.facts).ok().and_then(|value| value.real());
            if value != Some(1.0) && value != Some(-1.0) {
                let reason = "the gate is called under `pow`, but a power of a block encoding \
                              does not encode the power of its matrix";
                return Err(Cannot::at(stmt.file, exponent.range, reason));
            }
        }
        Ok(())
    }

    /// The first call that needs ancillas.
    fn first_call(&self, body: &'a [Stmt]) -> Option<(&'a Stmt, &'a Call)> {
        for stmt in body {
            let found = match &stmt.kind {
                StmtKind::Call(call) if self.need(call).is_some() => Some((stmt, call)),
                StmtKind::Box(inside)
                | StmtKind::For { body: inside, .. }
                | StmtKind::Cut { inside, .. } => self.first_call(inside),
                StmtKind::If { then, otherwise, .. } => {
                    self.first_call(then).or_else(|| self.first_call(otherwise))
                }
                _ => None,
            };
            if found.is_some() {
                return found;
            }
        }
        None
    }

    fn program(&mut self, body: &'a [Stmt], loops: &[Turns]) -> Result<(), Cannot> {
        for stmt in body {
            match &stmt.kind {
                StmtKind::Call(call) => self.outer_call(stmt, call, loops)?,
                StmtKind::Box(inside) => self.program(inside, loops)?,
                StmtKind::If { then, otherwise, .. } => {
                    self.program(then, loops)?;
                    self.program(otherwise, loops)?;
                }
                StmtKind::For { symbol, over, body, .. } => {
                    if self.first_call(body).is_none() {
                        continue;
                    }
                    let mut inside = loops.to_vec();
                    inside.push(self.turns(stmt, *symbol, over, loops)?);
                    self.program(body, &inside)?;
                }
                StmtKind::Cut { reason, inside, .. } => {
                    if let Some((call, _)) = self.first_call(inside) {
                        let reason = format!("the gate is called where {reason}");
                        return Err(Cannot::at(call.file, call.range, reason));
                    }
                }
                _ => {}
            }
        }
        Ok(())
    }

    fn outer_call(
        &mut self,
        stmt: &'a Stmt,
        call: &'a Call,
        loops: &[Turns],
    ) -> Result<(), Cannot> {
        let Some(count) = self.need(call) else { return Ok(()) };
        if stmt.file != FileId::MAIN {
            let reason = "the gate is called in an included file, which is not edited";
            return Err(Cannot::at(stmt.file, stmt.range, reason));
        }
        self.check_modifiers(stmt, call)?;
        let key = (stmt.file, stmt.range.start());
        let (length, broadcast) = match self.checked.broadcasts.get(&key) {
            Some(Broadcast::Single) => (1, false),
            Some(Broadcast::Over(length)) => (*length, true),
            Some(Broadcast::Varies) | None => {
                let reason = "it is not known on how many qubits the gate is called here";
                return Err(Cannot::at(stmt.file, stmt.range, reason));
            }
        };
        let mut loops = loops.to_vec();
        let mut stride = count.saturating_mul(length);
        for turns in loops.iter_mut().rev() {
            turns.stride = stride;
            stride = stride.saturating_mul(turns.turns);
        }
        let first = self.plan.total;
        self.plan.total = first.saturating_add(stride);
        self.within_limit(self.plan.total)?;
        let range = stmt.range;
        self.plan.calls.push(OuterCall { call, range, count, length, broadcast, first, loops });
        Ok(())
    }

    fn within_limit(&self, total: usize) -> Result<(), Cannot> {
        let limit = self.facts.limits.ancillas;
        if total > limit {
            let reason = format!(
                "all calls together need {total} ancilla qubits, past the limit of {limit}"
            );
            return Err(Cannot::new(reason));
        }
        Ok(())
    }

    /// How the turns of a loop are counted in its own variable.
    fn turns(
        &self,
        stmt: &Stmt,
        symbol: SymbolId,
        over: &Over,
        around: &[Turns],
    ) -> Result<Turns, Cannot> {
        let refuse = |reason: &str| Cannot::at(stmt.file, stmt.range, reason);
        let variable = self.facts.symbols[symbol.index()].name.clone();
        if around.iter().any(|outer| outer.variable == variable) {
            return Err(refuse("two nested loops around a call have one variable"));
        }
        let turns = self.checked.turns.get(&(stmt.file, stmt.range.start())).copied().flatten();
        let turns = turns.ok_or_else(|| {
            refuse("the gate is called in a loop whose number of turns is not constant")
        })?;
        let whole = |expr| eval_known(expr, self.facts).ok().and_then(|value| value.integer());
        let (start, step) = match over {
            Over::Range { start, step, .. } => {
                let step = step.as_ref().map_or(Some(1), whole);
                whole(start).zip(step)
            }
            Over::Set(values) => {
                let values: Option<Vec<i128>> = values.iter().map(whole).collect();
                values.and_then(|values| progression(&values))
            }
            Over::Value(_) | Over::Broken => None,
        }
        .ok_or_else(|| {
            refuse("the gate is called in a loop whose turns cannot be counted by its variable")
        })?;
        Ok(Turns { variable, start, step, turns, stride: 0 })
    }
}

/// Start and step of values that are evenly spaced.
fn progression(values: &[i128]) -> Option<(i128, i128)> {
    let start = *values.first()?;
    let step = values.get(1).map_or(1, |second| second - start);
    let even = values.windows(2).all(|pair| pair[1] - pair[0] == step);
    (even && step != 0).then_some((start, step))
}
