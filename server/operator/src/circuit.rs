//! Circuits: gates on numbered wires, with definitions shared, not expanded.

use std::sync::{Arc, OnceLock};

use crate::{Matrix, Result};

/// A sequence of steps on `wires` wires; wire 0 is the most significant.
#[derive(Debug, Clone, Default)]
pub struct Circuit {
    /// Number of wires.
    pub wires: usize,
    /// Steps in time order: the first acts first.
    pub steps: Vec<Step>,
}

/// One gate applied to some wires under some controls.
///
/// `targets` lists the gate's wires in operand order, the first the most
/// significant of the gate's own matrix. Controls and targets are distinct.
#[derive(Debug, Clone)]
pub struct Step {
    /// What is applied.
    pub gate: Gate,
    /// Wires that must hold their value for the gate to act; may be empty.
    pub controls: Vec<Control>,
    /// The gate's own wires in operand order; empty for [`Gate::Phase`].
    pub targets: Vec<usize>,
}

/// A control: the gate acts where `wire` holds 1 (`on`) or 0 (`!on`).
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Control {
    /// The wire looked at.
    pub wire: usize,
    /// The value at which the gate acts: `true` for |1⟩.
    pub on: bool,
}

/// A gate without its controls. Angles are radians.
#[derive(Debug, Clone)]
pub enum Gate {
    /// e^{iγ} on no wire: a global phase, or a phase on its controls.
    Phase(f64),
    /// Identity on one wire.
    Id,
    /// Pauli X.
    X,
    /// Pauli Y.
    Y,
    /// Pauli Z.
    Z,
    /// (X + Z)/√2.
    H,
    /// diag(1, i).
    S,
    /// diag(1, −i).
    Sdg,
    /// diag(1, e^{iπ/4}).
    T,
    /// diag(1, e^{−iπ/4}).
    Tdg,
    /// The principal square root of X: ½[[1+i, 1−i], [1−i, 1+i]].
    Sx,
    /// diag(1, e^{iλ}).
    P(f64),
    /// exp(−iθX/2).
    Rx(f64),
    /// exp(−iθY/2).
    Ry(f64),
    /// exp(−iθZ/2).
    Rz(f64),
    /// OpenQASM 3's `U(θ, φ, λ)`:
    /// ½[[1+e^{iθ}, −ie^{iλ}(1−e^{iθ})], [ie^{iφ}(1−e^{iθ}), e^{i(φ+λ)}(1+e^{iθ})]].
    U(f64, f64, f64),
    /// Exchange of two wires.
    Swap,
    /// A matrix taken as it is, unitary or not: a stand-in.
    Dense(Arc<Matrix>),
    /// A shared definition.
    Call(Arc<Definition>),
    /// The adjoint (for a stand-in that is not unitary, still the adjoint).
    Inverse(Box<Gate>),
    /// A power. Integers repeat; others take eigenphases in (−π, π].
    Power(Box<Gate>, f64),
}

/// A named circuit that several steps may share. It is evaluated at most
/// once: the operator is kept beside it.
#[derive(Debug)]
pub struct Definition {
    /// Name, for messages.
    pub name: String,
    /// Body, with parameters already replaced by values.
    pub circuit: Circuit,
    pub(crate) operator: OnceLock<Result<Arc<Matrix>>>,
    weight: OnceLock<u64>,
}

impl Definition {
    /// A definition whose operator is not known yet.
    pub fn new(name: impl Into<String>, circuit: Circuit) -> Self {
        Definition {
            name: name.into(),
            circuit,
            operator: OnceLock::new(),
            weight: OnceLock::new(),
        }
    }

    /// Steps of the body with all calls in it expanded, as far as `u64` goes.
    pub(crate) fn weight(&self) -> u64 {
        let steps = || self.circuit.steps.iter().map(|step| step.gate.weight());
        *self.weight.get_or_init(|| steps().fold(0, u64::saturating_add))
    }
}

impl Control {
    /// Acts where the wire holds 1.
    pub fn one(wire: usize) -> Self {
        Control { wire, on: true }
    }

    /// Acts where the wire holds 0.
    pub fn zero(wire: usize) -> Self {
        Control { wire, on: false }
    }
}

impl Gate {
    /// Number of wires the gate itself acts on, controls not counted.
    pub fn wires(&self) -> usize {
        match self {
            Gate::Phase(_) => 0,
            Gate::Swap => 2,
            Gate::Dense(matrix) => matrix.rows().trailing_zeros() as usize,
            Gate::Call(definition) => definition.circuit.wires,
            Gate::Inverse(gate) | Gate::Power(gate, _) => gate.wires(),
            _ => 1,
        }
    }
}

impl Circuit {
    /// An empty circuit: the identity on `wires` wires.
    pub fn new(wires: usize) -> Self {
        Circuit { wires, steps: Vec::new() }
    }

    /// Appends a gate without controls.
    pub fn push(&mut self, gate: Gate, targets: &[usize]) {
        self.push_controlled(gate, &[], targets);
    }

    /// Appends a gate under controls.
    pub fn push_controlled(&mut self, gate: Gate, controls: &[Control], targets: &[usize]) {
        assert_eq!(gate.wires(), targets.len(), "operand count of {gate:?}");
        let wires = controls.iter().map(|c| c.wire).chain(targets.iter().copied());
        assert!(wires.clone().all(|w| w < self.wires), "wire out of range");
        self.steps.push(Step { gate, controls: controls.to_vec(), targets: targets.to_vec() });
    }

    /// Appends a CX.
    pub fn cx(&mut self, control: usize, target: usize) {
        self.push_controlled(Gate::X, &[Control::one(control)], &[target]);
    }

    /// Appends another circuit, its wire `k` on our wire `map[k]`.
    pub fn append(&mut self, other: &Circuit, map: &[usize]) {
        assert_eq!(other.wires, map.len(), "wire map");
        self.steps.extend(other.steps.iter().map(|step| step.mapped(|w| map[w])));
    }

    /// The adjoint: steps reversed, each inverted.
    pub fn inverse(&self) -> Circuit {
        let steps = self.steps.iter().rev().map(Step::inverse).collect();
        Circuit { wires: self.wires, steps }
    }
}

impl Step {
    /// The same step on other wires.
    pub fn mapped(&self, map: impl Fn(usize) -> usize) -> Step {
        Step {
            gate: self.gate.clone(),
            controls: self
                .controls
                .iter()
                .map(|c| Control { wire: map(c.wire), on: c.on })
                .collect(),
            targets: self.targets.iter().map(|&w| map(w)).collect(),
        }
    }

    /// The adjoint step.
    pub fn inverse(&self) -> Step {
        Step { gate: self.gate.inverse(), ..self.clone() }
    }
}

impl Gate {
    /// Steps that the gate stands for.
    fn weight(&self) -> u64 {
        match self {
            Gate::Call(definition) => definition.weight(),
            Gate::Inverse(inner) => inner.weight(),
            Gate::Power(inner, times) => inner.weight().saturating_mul(times.abs().ceil() as u64),
            _ => 1,
        }
    }

    /// The adjoint gate, in closed form where there is one.
    pub fn inverse(&self) -> Gate {
        match *self {
            Gate::Phase(a) => Gate::Phase(-a),
            Gate::Id | Gate::X | Gate::Y | Gate::Z | Gate::H | Gate::Swap => self.clone(),
            Gate::S => Gate::Sdg,
            Gate::Sdg => Gate::S,
            Gate::T => Gate::Tdg,
            Gate::Tdg => Gate::T,
            Gate::P(a) => Gate::P(-a),
            Gate::Rx(a) => Gate::Rx(-a),
            Gate::Ry(a) => Gate::Ry(-a),
            Gate::Rz(a) => Gate::Rz(-a),
            Gate::U(theta, phi, lambda) => Gate::U(-theta, -lambda, -phi),
            Gate::Inverse(ref gate) => (**gate).clone(),
            Gate::Sx | Gate::Dense(_) | Gate::Call(_) | Gate::Power(..) => {
                Gate::Inverse(Box::new(self.clone()))
            }
        }
    }
}
