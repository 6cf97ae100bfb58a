//! What a circuit costs: gates, CX after lowering, depths.

use std::collections::HashMap;
use std::f64::consts::FRAC_PI_4;

use crate::{Circuit, Definition, Gate, Step};

/// Costs of a circuit. Sums saturate, so that definitions that double at
/// every level stay countable.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Counts {
    /// Gates on one wire, controls included.
    pub one_qubit: usize,
    /// Gates on two wires, controls included.
    pub two_qubit: usize,
    /// Gates on three wires or more.
    pub multi_qubit: usize,
    /// CX after lowering to CX and one-qubit gates without ancillas; `None`
    /// with a stand-in inside.
    pub cx: Option<usize>,
    /// Steps when gates on different wires go side by side.
    pub depth: usize,
    /// Depth with gates on two wires or more alone.
    pub two_qubit_depth: usize,
    /// Rotations by other angles than multiples of π/4.
    pub rotations: usize,
    /// T gates, rotations approximated; `None` with a stand-in inside.
    pub t_estimate: Option<usize>,
}

/// T gates of one rotation approximated to 1e-10: 3 log₂(1/ε), the leading
/// term of Ross and Selinger 2016.
const T_OF_A_ROTATION: usize = 100;

/// T gates of one doubly controlled X; wider controls chain them.
const T_OF_A_TOFFOLI: usize = 7;

/// Angles this near to a multiple of π/4 are one, not a rotation.
const SAME_ANGLE: f64 = 1e-12;

/// Counts a circuit, definitions included; each of these is counted once. A
/// call occupies all wires of its operands for the depth of its body.
pub fn counts(circuit: &Circuit) -> Counts {
    Counter::default().circuit(circuit, 0)
}

/// Counts of definitions met so far, by the controls they are called under.
#[derive(Default)]
struct Counter {
    known: HashMap<(*const Definition, usize), Counts>,
}

impl Counter {
    /// Counts of a circuit all of whose steps are under `extra` controls.
    fn circuit(&mut self, circuit: &Circuit, extra: usize) -> Counts {
        let mut total = Counts { cx: Some(0), t_estimate: Some(0), ..Counts::default() };
        let mut depth = vec![0_usize; circuit.wires + extra];
        let mut two_depth = depth.clone();
        for step in &circuit.steps {
            let counts = self.step(step, extra);
            total.add(&counts);
            let own = step.controls.iter().map(|c| c.wire).chain(step.targets.iter().copied());
            let wires: Vec<usize> = own.chain(circuit.wires..circuit.wires + extra).collect();
            advance(&mut depth, &wires, counts.depth);
            advance(&mut two_depth, &wires, counts.two_qubit_depth);
        }
        total.depth = depth.into_iter().max().unwrap_or(0);
        total.two_qubit_depth = two_depth.into_iter().max().unwrap_or(0);
        total
    }

    fn step(&mut self, step: &Step, extra: usize) -> Counts {
        let mut gate = &step.gate;
        while let Gate::Inverse(inner) | Gate::Power(inner, _) = gate {
            gate = inner;
        }
        let controls = step.controls.len() + extra;
        let Gate::Call(definition) = gate else { return plain_step(gate, controls) };
        let key = (std::sync::Arc::as_ptr(definition), controls);
        if let Some(known) = self.known.get(&key) {
            return *known;
        }
        let found = self.circuit(&definition.circuit, controls);
        self.known.insert(key, found);
        found
    }
}

impl Counts {
    fn add(&mut self, other: &Counts) {
        let both = |a: Option<usize>, b: Option<usize>| Some(a?.saturating_add(b?));
        self.one_qubit = self.one_qubit.saturating_add(other.one_qubit);
        self.two_qubit = self.two_qubit.saturating_add(other.two_qubit);
        self.multi_qubit = self.multi_qubit.saturating_add(other.multi_qubit);
        self.rotations = self.rotations.saturating_add(other.rotations);
        self.cx = both(self.cx, other.cx);
        self.t_estimate = both(self.t_estimate, other.t_estimate);
    }
}

/// All of these wires get to the latest of them plus some steps.
fn advance(depth: &mut [usize], wires: &[usize], by: usize) {
    let latest = wires.iter().map(|&w| depth[w]).max().unwrap_or(0);
    wires.iter().for_each(|&w| depth[w] = latest.saturating_add(by));
}

/// Costs of a gate that is no definition, under some controls.
fn plain_step(gate: &Gate, controls: usize) -> Counts {
    let wires = controls + gate.wires();
    let rotations = if matches!(gate, Gate::Dense(_)) { 0 } else { rotations(gate) };
    let cx = lowered(gate, controls);
    Counts {
        one_qubit: usize::from(wires == 1),
        two_qubit: usize::from(wires == 2),
        multi_qubit: usize::from(wires > 2),
        cx,
        depth: usize::from(wires > 0),
        two_qubit_depth: usize::from(wires > 1),
        rotations,
        t_estimate: cx.map(|_| t_gates(gate, controls, rotations)),
    }
}

/// CX of a gate under controls, without ancillas: a gate diagonal in some
/// basis under `k` controls is a diagonal on `k + 1` wires, 2ᵏ⁺¹ − 2 CX (2, 6,
/// 14 …), and one of two eigenvalues ±1 under one control is a single CX.
fn lowered(gate: &Gate, controls: usize) -> Option<usize> {
    let diagonal =
        |wires: usize| 2_usize.checked_shl(wires as u32 - 1).map_or(usize::MAX, |n| n - 2);
    Some(match (gate, controls) {
        (Gate::Dense(_), _) => return None,
        (Gate::Id, _) | (Gate::Phase(_), 0) => 0,
        (Gate::Phase(_), k) => diagonal(k),
        (Gate::Swap, 0) => 3,
        (Gate::Swap, k) => diagonal(k + 2).saturating_add(2),
        (Gate::X | Gate::Y | Gate::Z | Gate::H, 1) => 1,
        (_, k) => diagonal(k + 1),
    })
}

/// Angles of a gate that are no multiple of π/4.
fn rotations(gate: &Gate) -> usize {
    let turns = |angle: &f64| {
        let eighths = angle / FRAC_PI_4;
        (eighths - eighths.round()).abs() > SAME_ANGLE
    };
    match gate {
        Gate::P(a) | Gate::Rx(a) | Gate::Ry(a) | Gate::Rz(a) => usize::from(turns(a)),
        Gate::U(a, b, c) => [a, b, c].into_iter().filter(|a| turns(a)).count(),
        _ => 0,
    }
}

/// T gates: exact ones, Toffolis of the controls, approximated rotations.
fn t_gates(gate: &Gate, controls: usize, rotations: usize) -> usize {
    let exact = usize::from(matches!(gate, Gate::T | Gate::Tdg));
    let toffolis = controls.saturating_sub(1) * T_OF_A_TOFFOLI;
    exact + toffolis + rotations * T_OF_A_ROTATION * if controls > 0 { 2 } else { 1 }
}

#[cfg(test)]
mod tests {
    use std::sync::Arc;

    use super::*;
    use crate::{Control, Matrix};

    fn controlled(gate: Gate, controls: usize) -> Circuit {
        let targets: Vec<usize> = (controls..controls + gate.wires()).collect();
        let mut circuit = Circuit::new(controls + targets.len());
        let controls: Vec<Control> = (0..controls).map(Control::one).collect();
        circuit.push_controlled(gate, &controls, &targets);
        circuit
    }

    /// Toffoli 6, Fredkin 8, triply controlled X 14: the usual circuits
    /// without ancillas.
    #[test]
    fn lowering_costs_what_is_published() {
        let table = [
            (Gate::X, 0, 0),
            (Gate::X, 1, 1),
            (Gate::X, 2, 6),
            (Gate::X, 3, 14),
            (Gate::H, 1, 1),
            (Gate::P(0.3), 1, 2),
            (Gate::Swap, 0, 3),
            (Gate::Swap, 1, 8),
            (Gate::Phase(0.3), 1, 0),
            (Gate::Phase(0.3), 2, 2),
        ];
        for (gate, controls, cx) in table {
            let found = counts(&controlled(gate.clone(), controls));
            assert_eq!(found.cx, Some(cx), "{gate:?} under {controls}");
        }
    }

    #[test]
    fn gates_side_by_side_share_their_depth() {
        let mut circuit = Circuit::new(3);
        circuit.push(Gate::H, &[0]);
        circuit.push(Gate::T, &[2]);
        circuit.cx(0, 1);
        circuit.push(Gate::Rz(0.3), &[2]);
        circuit.cx(1, 2);
        let found = counts(&circuit);
        assert_eq!((found.one_qubit, found.two_qubit, found.multi_qubit), (3, 2, 0));
        assert_eq!((found.depth, found.two_qubit_depth, found.rotations), (3, 2, 1));
    }

    #[test]
    fn a_stand_in_has_no_cx_count() {
        let dense = Gate::Dense(Arc::new(Matrix::identity(4)));
        assert_eq!(counts(&controlled(dense, 0)).cx, None);
    }

    /// 2⁸⁰ gates are more than can be counted, or expanded.
    #[test]
    fn definitions_that_double_are_counted_without_expansion() {
        let mut gate = Gate::H;
        for level in 0..80 {
            let mut circuit = Circuit::new(1);
            circuit.push(gate.clone(), &[0]);
            circuit.push(gate, &[0]);
            gate = Gate::Call(Arc::new(Definition::new(format!("level{level}"), circuit)));
        }
        assert_eq!(counts(&controlled(gate.clone(), 0)).one_qubit, usize::MAX);
        assert_eq!(counts(&controlled(gate, 1)).two_qubit, usize::MAX);
    }
}
