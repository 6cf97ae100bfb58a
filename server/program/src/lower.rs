//! From resolved statements to circuits, and the checks that need values.
//!
//! One machine runs statements in two ways. *Building*, it appends steps and
//! stops at the first trouble or at the first statement without an operator.
//! *Checking*, it appends nothing, reports every trouble and goes on; what is
//! not known (a gate's parameter, a measured bit) stays unknown and is never
//! a trouble by itself.

mod loops;
mod machine;
mod qubits;
mod units;

use std::collections::HashMap;
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};

use operator::{Circuit, Definition, Gate};

use crate::facts::Facts;
use crate::finding::Finding;
use crate::hir::{Body, DefinedBody};
use crate::model::{Cannot, Lowered};
use crate::value::Value;

pub(crate) use machine::{BlockSteps, Broadcast, Machine, Mode};

/// A gate at parameter values: its position and the bits of the values.
type Key = (usize, Vec<u64>);

/// The definitions built so far, so that each (gate, values) is built and
/// evaluated once, however often it is called.
#[derive(Debug, Default)]
pub(crate) struct Definitions(Mutex<Store>);

#[derive(Debug, Default)]
struct Store {
    known: HashMap<Key, Result<Arc<Definition>, Cannot>>,
    /// Steps in all of them together.
    steps: usize,
}

/// A block's steps may be this many times as long in all definitions together
/// as the limit of a single one.
const TOTAL_FACTOR: usize = 10;

impl Definitions {
    fn store(&self) -> MutexGuard<'_, Store> {
        // A panic elsewhere leaves the map whole: entries are inserted at once.
        self.0.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

/// Lowers a program's blocks.
pub(crate) struct Lowering<'a> {
    pub(crate) facts: &'a Facts,
    pub(crate) definitions: &'a Definitions,
}

impl Lowering<'_> {
    /// The circuit of the gate at a position, on its operands.
    pub(crate) fn gate(
        &self,
        gate: usize,
        params: &[f64],
        depth: usize,
    ) -> Result<Lowered, Cannot> {
        let facts = self.facts;
        let (def, body) = (&facts.gates[gate], &facts.bodies[gate]);
        if params.len() != def.params.len() {
            let (needed, given) = (def.params.len(), params.len());
            let reason = format!("`{}` takes {needed} parameters, not {given}", def.name);
            return Err(Cannot::new(reason));
        }
        let wire_names = def.operands.clone();
        let whole = |circuit: Circuit| {
            let origins = vec![(def.file, def.name_range); circuit.steps.len()];
            Lowered { circuit, origins, wire_names: wire_names.clone(), cut: None }
        };
        if def.stand_in.is_some() {
            return self.stand_in(gate).map(whole);
        }
        match body {
            Body::Standard(standard) => Ok(whole(standard.circuit(params))),
            Body::Opaque => {
                let reason = format!("`{}` is declared without a body", def.name);
                Err(Cannot::at(def.file, def.name_range, reason))
            }
            Body::Defined(body) => self.defined(gate, body, params, depth),
        }
    }

    fn defined(
        &self,
        gate: usize,
        body: &DefinedBody,
        params: &[f64],
        depth: usize,
    ) -> Result<Lowered, Cannot> {
        let def = &self.facts.gates[gate];
        if depth > self.facts.limits.depth {
            let limit = self.facts.limits.depth;
            let reason = format!("gates call each other deeper than the limit of {limit}");
            return Err(Cannot::at(def.file, def.name_range, reason));
        }
        let mut machine = Machine::new(self.facts, Mode::Build(self, depth));
        for (symbol, value) in body.params.iter().zip(params) {
            machine.bind_value(*symbol, Value::Float(*value));
        }
        for (symbol, name) in body.operands.iter().zip(&def.operands) {
            machine.bind_qubit(*symbol, name);
        }
        machine.run(&body.body)?;
        Ok(machine.finish().0)
    }

    /// The one dense step of a stand-in.
    fn stand_in(&self, gate: usize) -> Result<Circuit, Cannot> {
        let def = &self.facts.gates[gate];
        let Some(stand_in) = &def.stand_in else { return Err(Cannot::new("no stand-in")) };
        let refuse = |reason: String| Cannot::at(def.file, stand_in.range, reason);
        let name = &stand_in.matrix;
        let index = stand_in.matrix_index;
        let index = index.ok_or_else(|| refuse(format!("there is no matrix `{name}`")))?;
        let matrix = self.facts.matrices[index].matrix.clone();
        let matrix =
            matrix.ok_or_else(|| refuse(format!("the entries of `{name}` are not known")))?;
        let wires = def.operands.len();
        if matrix.qubits() != Some(wires) {
            let (rows, cols) = (matrix.rows(), matrix.cols());
            let reason = format!(
                "`{name}` is {rows}×{cols}, which is no operator on the {wires} operands of `{}`",
                def.name
            );
            return Err(refuse(reason));
        }
        let mut circuit = Circuit::new(wires);
        circuit.push(Gate::Dense(matrix), &(0..wires).collect::<Vec<_>>());
        Ok(circuit)
    }

    /// The shared definition of a gate at parameter values.
    pub(crate) fn definition(
        &self,
        gate: usize,
        params: &[f64],
        depth: usize,
    ) -> Result<Arc<Definition>, Cannot> {
        let key = (gate, params.iter().map(|value| value.to_bits()).collect::<Vec<_>>());
        if let Some(known) = self.definitions.store().known.get(&key) {
            return known.clone();
        }
        let def = &self.facts.gates[gate];
        let limit = self.facts.limits.definitions;
        if self.definitions.store().known.len() >= limit {
            let reason =
                format!("more gates at different parameter values than the limit of {limit}");
            return Err(Cannot::at(def.file, def.name_range, reason));
        }
        let lowered = self.gate(gate, params, depth + 1);
        let limit = self.facts.limits.steps.saturating_mul(TOTAL_FACTOR);
        let mut store = self.definitions.store();
        let built = lowered.and_then(|lowered| {
            store.steps += lowered.circuit.steps.len();
            if store.steps > limit {
                let reason = format!("the gates have more steps than the limit of {limit}");
                return Err(Cannot::at(def.file, def.name_range, reason));
            }
            Ok(Arc::new(Definition::new(def.name.clone(), lowered.circuit)))
        });
        store.known.insert(key, built.clone());
        built
    }

    /// The circuit of the whole program and the steps of its blocks.
    pub(crate) fn program(&self) -> Result<(Lowered, Vec<BlockSteps>), Cannot> {
        let mut machine = Machine::new(self.facts, Mode::Build(self, 0));
        machine.run(&self.facts.main)?;
        Ok(machine.finish())
    }
}

/// Checks everything whose rightness depends on values: sizes, indices,
/// repeated operands, types of parameters.
pub(crate) fn check(facts: &Facts) -> Vec<Finding> {
    let mut findings = check_program(facts).findings;
    for (index, body) in facts.bodies.iter().enumerate() {
        let Body::Defined(body) = body else { continue };
        let mut machine = Machine::new(facts, Mode::Check);
        for (symbol, name) in body.operands.iter().zip(&facts.gates[index].operands) {
            machine.bind_qubit(*symbol, name);
        }
        machine.check(&body.body);
        findings.append(&mut machine.findings);
    }
    for subroutine in &facts.subroutines {
        let mut machine = Machine::new(facts, Mode::Check);
        for (symbol, size) in &subroutine.qubits {
            machine.bind_register(*symbol, *size);
        }
        machine.check(&subroutine.body);
        findings.append(&mut machine.findings);
    }
    findings
}

/// Runs the whole program in the checking way.
pub(crate) fn check_program(facts: &Facts) -> Machine<'_> {
    let mut machine = Machine::new(facts, Mode::Check);
    machine.check(&facts.main);
    machine
}
