//! Gate calls: broadcasting, modifiers, and the steps they become.

use std::f64::consts::PI;
use std::sync::Arc;

use operator::{Circuit, Control, Definition, Gate, Step};

use super::machine::{Broadcast, Machine, Mode, Wires};
use crate::eval::{BROKEN, Trouble};
use crate::hir::{Body, Call, Callee, Modifier, Stmt};
use crate::model::Cannot;

impl Machine<'_> {
    /// Runs a call; the answer is what it depends on, if that is not known.
    pub(super) fn call(
        &mut self,
        statement: &Stmt,
        call: &Call,
    ) -> Result<Option<&'static str>, Cannot> {
        let mut unknown = None;
        let mut operands = Vec::with_capacity(call.operands.len());
        for operand in &call.operands {
            match self.qubits(statement, operand)? {
                Ok(found) => operands.push(found),
                Err(what) => unknown = Some(what),
            }
        }
        let mut params = Vec::with_capacity(call.arguments.len());
        for argument in &call.arguments {
            match self.parameter(statement, argument)? {
                Ok(value) => params.push(value),
                Err(what) => unknown = Some(what),
            }
        }
        for modifier in &call.modifiers {
            if let Modifier::Power(exponent) = modifier
                && let Err(what) = self.parameter(statement, exponent)?
            {
                unknown = Some(what);
            }
        }
        if self.building()
            && let Some(what) = unknown.filter(|what| *what != BROKEN)
        {
            return Ok(Some(what));
        }
        if self.well_formed(call) && operands.len() == call.operands.len() {
            let parameters_known = params.len() == call.arguments.len();
            return self.instances(statement, call, &operands, parameters_known.then_some(&params));
        }
        self.note_broadcast(statement, Broadcast::Varies);
        if unknown.is_none_or(|what| what == BROKEN) {
            self.trouble(statement, None)?;
        }
        Ok(unknown)
    }

    /// A parameter: any real number, an angle in radians.
    fn parameter(
        &mut self,
        statement: &Stmt,
        argument: &crate::hir::Expr,
    ) -> Result<Result<f64, &'static str>, Cannot> {
        let value = match self.needed(statement, argument)? {
            Ok(value) => value,
            Err(what) => return Ok(Err(what)),
        };
        match value.real().filter(|x| x.is_finite()) {
            Some(x) => Ok(Ok(x)),
            None => {
                let message = format!("a parameter must be a finite real number, not {value}");
                let trouble = Trouble::new("type-mismatch", argument.range, message);
                self.trouble(statement, Some(trouble))?;
                Ok(Err(BROKEN))
            }
        }
    }

    /// Whether the counts of a call are right; if not, that was reported.
    fn well_formed(&self, call: &Call) -> bool {
        let (params, operands) = match call.callee {
            Callee::Broken => return false,
            Callee::Phase => (1, 0),
            Callee::Gate(gate) => {
                let gate = &self.facts.gates[gate];
                (gate.params.len(), gate.operands.len())
            }
        };
        let no_controls = |modifier: &Modifier| matches!(modifier, Modifier::Controls(0, _));
        call.arguments.len() == params
            && call.operands.len() == operands + call.controls()
            && !call.modifiers.iter().any(no_controls)
    }

    /// Broadcasts a call over its registers.
    fn instances(
        &mut self,
        statement: &Stmt,
        call: &Call,
        operands: &[Wires],
        params: Option<&Vec<f64>>,
    ) -> Result<Option<&'static str>, Cannot> {
        let registers = || operands.iter().filter(|operand| operand.register);
        let length = registers().next().map(|first| first.wires.len());
        if let Some(length) = length
            && let Some(other) = operands
                .iter()
                .position(|operand| operand.register && operand.wires.len() != length)
        {
            let found = operands[other].wires.len();
            let message = format!(
                "registers that a gate is applied to must have one length; this one has {found} \
                 qubits, an earlier one {length}"
            );
            let range = call.operands[other].range;
            let trouble = Trouble::new("register-size", range, message);
            self.trouble(statement, Some(trouble))?;
            return Ok(None);
        }
        self.note_broadcast(statement, length.map_or(Broadcast::Single, Broadcast::Over));
        let count = length.unwrap_or(1);
        if !self.spend(statement, count.saturating_sub(1))? {
            return Ok(None);
        }
        let pick = |operand: &Wires, k: usize| operand.wires[if operand.register { k } else { 0 }];
        let unit = match (self.mode, params) {
            (Mode::Build(..), Some(params)) => Some(self.unit(statement, call, params)?),
            (Mode::Build(..), None) | (Mode::Check, _) => None,
        };
        for k in 0..count {
            let wires: Vec<usize> = operands.iter().map(|operand| pick(operand, k)).collect();
            if let Some(second) = repeated(&wires) {
                let name = self.wire_names.get(wires[second]).cloned().unwrap_or_default();
                let message = format!("`{name}` is an operand twice");
                let range = call.operands[second].range;
                let trouble = Trouble::new("repeated-operand", range, message);
                self.trouble(statement, Some(trouble))?;
                return Ok(None);
            }
            for step in unit.iter().flatten() {
                self.steps.push(step.mapped(|local| wires[local]));
                self.origins.push((statement.file, statement.range));
            }
        }
        Ok(None)
    }

    fn note_broadcast(&mut self, statement: &Stmt, broadcast: Broadcast) {
        let key = (statement.file, statement.range.start());
        let noted = self.broadcasts.entry(key).or_insert(broadcast);
        if *noted != broadcast {
            *noted = Broadcast::Varies;
        }
    }

    /// The steps of one instance on its operands, controls first.
    fn unit(&mut self, statement: &Stmt, call: &Call, params: &[f64]) -> Result<Vec<Step>, Cannot> {
        let (mut steps, mut wires) = self.base(call, params)?;
        for modifier in call.modifiers.iter().rev() {
            match modifier {
                Modifier::Inverse => steps = steps.iter().rev().map(Step::inverse).collect(),
                Modifier::Controls(count, on) => {
                    steps = steps.iter().map(|step| controlled(step, *count, *on)).collect();
                    wires += count;
                }
                Modifier::Power(exponent) => {
                    let exponent = match self.parameter(statement, exponent)? {
                        Ok(value) => value,
                        Err(what) => {
                            let reason = format!("the exponent depends on {what}");
                            return Err(Cannot::at(statement.file, exponent.range, reason));
                        }
                    };
                    steps = powered(steps, wires, exponent);
                }
            }
        }
        Ok(steps)
    }

    /// The steps without modifiers, and on how many wires they are.
    fn base(&self, call: &Call, params: &[f64]) -> Result<(Vec<Step>, usize), Cannot> {
        let Mode::Build(lowering, depth) = self.mode else { return Ok((Vec::new(), 0)) };
        let gate = match call.callee {
            Callee::Gate(gate) => gate,
            Callee::Phase => {
                let angle = params.first().copied().unwrap_or(0.0);
                return Ok((vec![step(Gate::Phase(angle), 0)], 0));
            }
            Callee::Broken => return Ok((Vec::new(), 0)),
        };
        let def = &self.facts.gates[gate];
        let wires = def.operands.len();
        match &self.facts.bodies[gate] {
            Body::Standard(standard) => Ok((standard.circuit(params).steps, wires)),
            _ if def.stand_in.is_some() => {
                Ok((lowering.gate(gate, params, depth + 1)?.circuit.steps, wires))
            }
            _ => {
                let definition = lowering.definition(gate, params, depth)?;
                Ok((vec![step(Gate::Call(definition), wires)], wires))
            }
        }
    }
}

/// A gate on the first wires.
fn step(gate: Gate, wires: usize) -> Step {
    Step { gate, controls: Vec::new(), targets: (0..wires).collect() }
}

/// A step under `count` controls, which take the first operands.
fn controlled(step: &Step, count: usize, on: bool) -> Step {
    let mut shifted = step.mapped(|wire| wire + count);
    let front = (0..count).map(|wire| Control { wire, on });
    shifted.controls = front.chain(shifted.controls).collect();
    shifted
}

/// Steps to a power. A power of a controlled gate is the controlled power,
/// so that one step stays one; more are first made one definition.
fn powered(steps: Vec<Step>, wires: usize, exponent: f64) -> Vec<Step> {
    if exponent == 1.0 {
        return steps;
    }
    if exponent == -1.0 {
        return steps.iter().rev().map(Step::inverse).collect();
    }
    if exponent == 0.0 {
        return Vec::new();
    }
    match <[Step; 1]>::try_from(steps) {
        Ok([only]) => vec![Step { gate: power(only.gate, exponent), ..only }],
        Err(steps) if steps.is_empty() => steps,
        Err(steps) => {
            let circuit = Circuit { wires, steps };
            let gate = Gate::Call(Arc::new(Definition::new("power", circuit)));
            vec![step(power(gate, exponent), wires)]
        }
    }
}

/// A gate to a power, in closed form where the whole power is plain.
fn power(gate: Gate, exponent: f64) -> Gate {
    let whole = exponent.fract() == 0.0;
    match gate {
        Gate::Phase(angle) if whole => Gate::Phase(angle * exponent),
        Gate::Phase(angle) => Gate::Phase(principal(angle) * exponent),
        Gate::P(angle) if whole => Gate::P(angle * exponent),
        Gate::P(angle) => Gate::P(principal(angle) * exponent),
        Gate::Rx(angle) if whole => Gate::Rx(angle * exponent),
        Gate::Ry(angle) if whole => Gate::Ry(angle * exponent),
        Gate::Rz(angle) if whole => Gate::Rz(angle * exponent),
        other => Gate::Power(Box::new(other), exponent),
    }
}

/// An angle in (−π, π]; one within rounding of −π counts as π.
fn principal(angle: f64) -> f64 {
    /// An angle of −π is off by some roundings of a few turns' length.
    const SNAP: f64 = 1e-12;
    let turn = 2.0 * PI;
    let reduced = angle - turn * (angle / turn).round();
    if reduced <= -PI + SNAP { reduced + turn } else { reduced }
}

/// The place of the first wire that was there before.
fn repeated(wires: &[usize]) -> Option<usize> {
    (1..wires.len()).find(|&k| wires[..k].contains(&wires[k]))
}
