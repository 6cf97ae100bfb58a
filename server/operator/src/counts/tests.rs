//! Costs of gates that are published, and depths seen by eye.

use std::sync::Arc;

use super::*;
use crate::{Control, Matrix};

/// T gates of a rotation approximated to 1e-10, rounded up to a hundred.
const T: usize = 100;

fn controlled(gate: Gate, controls: usize) -> Circuit {
    let targets: Vec<usize> = (controls..controls + gate.wires()).collect();
    let mut circuit = Circuit::new(controls + targets.len());
    let controls: Vec<Control> = (0..controls).map(Control::one).collect();
    circuit.push_controlled(gate, &controls, &targets);
    circuit
}

/// Toffoli 6, triply controlled X 14 (a diagonal on four wires, Bullock and
/// Markov 2004), Fredkin 8 (a Toffoli between two CX), controlled one-qubit
/// gates 2 (Barenco et al. 1995).
#[test]
fn lowering_costs_what_is_published() {
    let root = |gate: Gate| Gate::Power(Box::new(gate), 0.5);
    let table = [
        (Gate::X, 0, 0),
        (Gate::X, 1, 1),
        (Gate::X, 2, 6),
        (Gate::X, 3, 14),
        (Gate::Ry(0.3), 2, 6),
        (Gate::H, 1, 1),
        (Gate::P(0.3), 1, 2),
        (Gate::U(0.1, 0.2, 0.3), 1, 2),
        (root(Gate::X), 1, 2),
        (Gate::Sx.inverse(), 1, 2),
        (Gate::Swap, 0, 3),
        (Gate::Swap, 1, 8),
        (Gate::Id, 5, 0),
        (Gate::Phase(0.3), 0, 0),
        (Gate::Phase(0.3), 1, 0),
        (Gate::Phase(0.3), 2, 2),
        (root(Gate::Phase(0.3)), 3, 6),
        (Gate::X, 8, 510),
        // The recursion: 510 for eight, two roots, two X that borrow a wire.
        (Gate::X, 9, 510 + 4 + 2 * 240),
    ];
    for (gate, controls, cx) in table {
        let found = counts(&controlled(gate.clone(), controls));
        assert_eq!(found.cx, Some(cx), "{gate:?} under {controls}");
    }
}

/// Past some controls the count grows by squares, not by powers of two.
#[test]
fn many_controls_cost_less_than_a_diagonal() {
    let cx = |k: usize| counts(&controlled(Gate::X, k)).cx.unwrap();
    assert!((1..60).all(|k| cx(k + 1) > cx(k) && cx(k) < (2 << k)));
    assert!(cx(40) < 60 * 40 * 40);
    assert_eq!(cx(63), counts(&controlled(Gate::Z, 63)).cx.unwrap());
}

#[test]
fn t_gates_of_known_circuits() {
    let table = [
        (Gate::T, 0, 1),
        (Gate::P(3.0 * std::f64::consts::FRAC_PI_4), 0, 1),
        (Gate::S, 0, 0),
        (Gate::X, 1, 0),
        (Gate::X, 2, 7),
        (Gate::Swap, 1, 7),
        (Gate::S, 1, 3),
        (Gate::H, 1, 2),
        (Gate::Phase(std::f64::consts::FRAC_PI_4), 1, 1),
        (Gate::Rz(0.3), 0, T),
        (Gate::Rz(0.3), 1, 2 * T),
        (Gate::P(0.3), 1, 3 * T),
    ];
    for (gate, controls, t) in table {
        let found = counts(&controlled(gate.clone(), controls));
        assert_eq!(found.t_estimate, Some(t), "{gate:?} under {controls}");
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
fn what_is_not_a_circuit_has_no_cx_count() {
    let dense = Gate::Dense(Arc::new(Matrix::identity(4)));
    let root = Gate::Power(Box::new(Gate::Swap), 0.5);
    for gate in [dense.clone(), dense.inverse(), root] {
        let mut circuit = controlled(gate, 1);
        circuit.cx(0, 1);
        let found = counts(&circuit);
        assert_eq!((found.cx, found.t_estimate), (None, None));
        assert_eq!((found.multi_qubit, found.two_qubit, found.depth), (1, 1, 2));
    }
}

#[test]
fn whole_powers_repeat() {
    let mut body = Circuit::new(2);
    body.push(Gate::T, &[0]);
    body.cx(0, 1);
    let call = Gate::Call(Arc::new(Definition::new("body", body)));
    for (times, repeats) in [(3.0, 3), (-2.0, 2), (0.0, 0), (1e6, 1_000_000)] {
        let power = Gate::Power(Box::new(call.clone()), times);
        let found = counts(&controlled(power, 0));
        assert_eq!((found.one_qubit, found.cx), (repeats, Some(repeats)));
        assert_eq!((found.depth, found.two_qubit_depth), (2 * repeats, repeats));
        assert_eq!(found.t_estimate, Some(repeats));
    }
}

/// Depths with shared definitions are those of the expanded circuit.
#[test]
fn depths_do_not_depend_on_definitions() {
    let mut random = fastrand::Rng::with_seed(7);
    for _ in 0..20 {
        let mut body = Circuit::new(3);
        for _ in 0..6 {
            let a = random.usize(0..3);
            match random.bool() {
                true => body.push(Gate::T, &[a]),
                false => body.cx(a, (a + 1 + random.usize(0..2)) % 3),
            }
        }
        let definition = Arc::new(Definition::new("body", body.clone()));
        let (mut shared, mut flat) = (Circuit::new(5), Circuit::new(5));
        for _ in 0..5 {
            let mut wires = [0, 1, 2, 3, 4];
            random.shuffle(&mut wires);
            let call = Gate::Call(definition.clone());
            match random.bool() {
                true => {
                    shared.push(call.inverse(), &wires[..3]);
                    flat.append(&body.inverse(), &wires[..3]);
                }
                false => {
                    shared.push(call, &wires[..3]);
                    flat.append(&body, &wires[..3]);
                }
            }
            shared.push(Gate::H, &wires[4..]);
            flat.push(Gate::H, &wires[4..]);
        }
        assert_eq!(counts(&shared), counts(&flat));
    }
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
