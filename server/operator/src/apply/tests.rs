//! Evaluation against small references written out here.

use std::sync::Arc;

use super::*;
use crate::{Control, norm};

/// Rounding of a few products of unitary matrices.
const CLOSE: f64 = 1e-13;

fn operator(circuit: &Circuit) -> Matrix {
    evaluate(circuit, &Budget::default()).unwrap()
}

fn same(a: &Matrix, b: &Matrix) -> bool {
    (a - b).max_abs() < CLOSE
}

/// Some entangling circuit, another for each seed.
fn sample(wires: usize, seed: u64) -> Circuit {
    let mut random = fastrand::Rng::with_seed(seed);
    let mut circuit = Circuit::new(wires);
    for k in 0..3 * wires {
        let angle = 6.0 * random.f64() - 3.0;
        circuit.push(Gate::U(angle, 0.7 * angle, 1.3), &[k % wires]);
        if wires > 1 {
            circuit.cx(k % wires, (k + 1) % wires);
        }
    }
    circuit
}

#[test]
fn the_first_wire_is_the_most_significant() {
    let mut circuit = Circuit::new(2);
    circuit.cx(0, 1);
    let swapped = [0, 1, 3, 2];
    let expected =
        Matrix::from_fn(4, 4, |r, c| C64::new(f64::from(u8::from(swapped[c] == r)), 0.0));
    assert!(same(&operator(&circuit), &expected));
}

/// The entries of the standard's definition, written out.
#[test]
fn u_is_the_standards() {
    let e = C64::cis;
    for (t, p, l) in [(0.3, -1.1, 2.5), (3.0, 0.4, 0.0), (-0.7, 3.0, -2.0)] {
        let (plus, minus) = (C64::ONE + e(t), C64::ONE - e(t));
        let rows = [plus, -C64::I * e(l) * minus, C64::I * e(p) * minus, e(p + l) * plus];
        let expected = Matrix::from_rows(2, 2, &rows.map(|z| 0.5 * z));
        let mut circuit = Circuit::new(1);
        circuit.push(Gate::U(t, p, l), &[0]);
        assert!(same(&operator(&circuit), &expected));
    }
}

#[test]
fn a_controlled_gate_acts_where_its_controls_hold() {
    let inner = Gate::Call(Arc::new(Definition::new("inner", sample(2, 1))));
    let small = gate_matrix(&inner, &Budget::default()).unwrap();
    let mut circuit = Circuit::new(4);
    circuit.push_controlled(inner, &[Control::one(0), Control::zero(1)], &[2, 3]);
    let mut expected = Matrix::identity(16);
    expected.set_block(8, 8, &small);
    assert!(same(&operator(&circuit), &expected));
}

#[test]
fn large_definitions_act_like_their_matrix() {
    let body = sample(5, 2);
    let definition = Arc::new(Definition::new("large", body.clone()));
    let targets = [3, 0, 4, 1, 2];
    for gate in [Gate::Call(definition.clone()), Gate::Call(definition).inverse()] {
        let dense = Gate::Dense(gate_matrix(&gate, &Budget::default()).unwrap());
        let [a, b] = [gate, dense].map(|gate| {
            let mut circuit = Circuit::new(6);
            circuit.push_controlled(gate, &[Control::one(5)], &targets);
            operator(&circuit)
        });
        assert!(same(&a, &b));
    }
}

#[test]
fn powers_and_inverses_multiply_up() {
    let budget = Budget::default();
    let gate = Gate::Call(Arc::new(Definition::new("base", sample(2, 3))));
    let base = gate_matrix(&gate, &budget).unwrap();
    let power = |k: f64| gate_matrix(&Gate::Power(Box::new(gate.clone()), k), &budget).unwrap();
    assert!(same(&power(3.0), &(&(&*base * &*base) * &*base)));
    assert!(same(&(&*power(-1.0) * &*base), &Matrix::identity(4)));
    assert!(same(&(&*power(0.5) * &*power(0.5)), &base));
    assert!(same(&power(0.0), &Matrix::identity(4)));
    let root = gate_matrix(&Gate::Power(Box::new(Gate::X), 0.5), &budget).unwrap();
    assert!(same(&root, &gate_matrix(&Gate::Sx, &budget).unwrap()));
}

#[test]
fn chosen_columns_are_those_of_the_whole() {
    let circuit = sample(3, 4);
    let whole = operator(&circuit);
    assert!(norm::unitarity_error(&whole).unwrap() < CLOSE);
    let budget = Budget::default();
    let some = evaluate_columns(&circuit, &[6, 1], &budget).unwrap();
    assert_eq!([some.column(0), some.column(1)], [whole.column(6), whole.column(1)]);
    let encoded = encoded_columns(&circuit, 1, &budget).unwrap();
    assert!(same(&encoded, &whole.block(0, 0, 8, 4)));
}

#[test]
fn what_is_too_large_or_stopped_is_refused() {
    let mut budget = Budget::default();
    budget.max_wires = 2;
    let refused = evaluate(&sample(3, 5), &budget).unwrap_err();
    assert_eq!(refused, crate::Error::TooLarge { wires: 3, limit: 2 });
    budget.stop();
    assert_eq!(evaluate(&sample(2, 5), &budget).unwrap_err(), crate::Error::Stopped);
}
