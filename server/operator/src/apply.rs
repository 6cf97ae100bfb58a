//! The action of a circuit on columns of amplitudes.
//!
//! Gates act on the columns in place; no factor of the circuit's full size is
//! ever formed.

use crate::gates::gate_matrix;
use crate::{Budget, C64, Circuit, Control, Definition, Gate, Matrix, Result, Step};

/// Definitions on at most this many wires are applied as one dense matrix;
/// larger ones step by step, which is less work.
const DENSE_DEFINITION: usize = 4;

/// Replaces each column, a state of `2^wires` amplitudes, by its image.
///
/// # Errors
/// `Stopped`, `TooLarge`, and what the matrices of gates report.
pub fn apply(circuit: &Circuit, columns: &mut Matrix, budget: &Budget) -> Result<()> {
    assert_eq!(columns.rows(), 1 << circuit.wires, "amplitudes of a column");
    for step in &circuit.steps {
        apply_step(step, circuit.wires, columns, budget)?;
    }
    Ok(())
}

/// The operator of a circuit, `2ⁿ × 2ⁿ`, exact global phase included.
///
/// # Errors
/// As [`apply`]; `TooLarge` before any memory is taken.
pub fn evaluate(circuit: &Circuit, budget: &Budget) -> Result<Matrix> {
    encoded_columns(circuit, 0, budget)
}

/// Chosen columns of the operator, in the order given.
///
/// # Errors
/// As [`evaluate`].
pub fn evaluate_columns(circuit: &Circuit, columns: &[usize], budget: &Budget) -> Result<Matrix> {
    budget.admit_columns(circuit.wires, columns.len())?;
    let mut states = Matrix::zeros(1 << circuit.wires, columns.len());
    columns.iter().enumerate().for_each(|(k, &column)| states[(column, k)] = C64::ONE);
    apply(circuit, &mut states, budget)?;
    Ok(states)
}

/// The columns in which the first `ancillas` wires are 0: those a block
/// encoding is made of. The corner is their top `2^(n−ancillas)` rows.
///
/// # Errors
/// As [`evaluate`].
pub fn encoded_columns(circuit: &Circuit, ancillas: usize, budget: &Budget) -> Result<Matrix> {
    // The signal wires are counted before their columns are listed.
    let signal = circuit.wires - ancillas;
    budget.admit(signal)?;
    let columns: Vec<usize> = (0..1 << signal).collect();
    evaluate_columns(circuit, &columns, budget)
}

fn apply_step(step: &Step, wires: usize, columns: &mut Matrix, budget: &Budget) -> Result<()> {
    budget.poll()?;
    match &step.gate {
        Gate::Call(definition) if definition.circuit.wires > DENSE_DEFINITION => {
            apply_definition(&definition.circuit, step, wires, columns, budget)
        }
        Gate::Inverse(inner) if let Some(definition) = large(inner) => {
            apply_definition(&definition.circuit.inverse(), step, wires, columns, budget)
        }
        gate => {
            let matrix = gate_matrix(gate, budget)?;
            apply_matrix(&matrix, &step.controls, &step.targets, wires, columns);
            Ok(())
        }
    }
}

/// The definition that a gate calls, if it is a large one.
fn large(gate: &Gate) -> Option<&Definition> {
    match gate {
        Gate::Call(definition) if definition.circuit.wires > DENSE_DEFINITION => Some(definition),
        _ => None,
    }
}

/// The body of a definition, each step under the call's controls as well.
fn apply_definition(
    body: &Circuit,
    call: &Step,
    wires: usize,
    columns: &mut Matrix,
    budget: &Budget,
) -> Result<()> {
    for inner in &body.steps {
        let mut step = inner.mapped(|wire| call.targets[wire]);
        step.controls.extend(&call.controls);
        apply_step(&step, wires, columns, budget)?;
    }
    Ok(())
}

/// A `2ᵏ × 2ᵏ` matrix on `k` wires of each column, where controls hold.
fn apply_matrix(
    matrix: &Matrix,
    controls: &[Control],
    targets: &[usize],
    wires: usize,
    columns: &mut Matrix,
) {
    let bit = |wire: usize| 1_usize << (wires - 1 - wire);
    let looked_at: usize = controls.iter().map(|c| bit(c.wire)).sum();
    let wanted: usize = controls.iter().filter(|c| c.on).map(|c| bit(c.wire)).sum();
    let moved: usize = targets.iter().map(|&t| bit(t)).sum();
    let bases = (0..1_usize << wires)
        .filter(move |index| index & moved == 0 && index & looked_at == wanted)
        .collect::<Vec<usize>>();
    if let [target] = *targets {
        return apply_one_qubit(matrix, bit(target), &bases, columns);
    }
    let size = matrix.rows();
    let place = |k: usize| {
        let bits =
            targets.iter().enumerate().filter(|(t, _)| k >> (targets.len() - 1 - t) & 1 == 1);
        bits.map(|(_, &wire)| bit(wire)).sum::<usize>()
    };
    let offsets: Vec<usize> = (0..size).map(place).collect();
    let mut before = vec![C64::ZERO; size];
    for c in 0..columns.cols() {
        let column = columns.column_mut(c);
        for base in &bases {
            before.iter_mut().zip(&offsets).for_each(|(to, at)| *to = column[base + at]);
            for (r, at) in offsets.iter().enumerate() {
                column[base + at] = (0..size).map(|k| matrix[(r, k)] * before[k]).sum();
            }
        }
    }
}

/// A 2×2 matrix on the pairs of amplitudes that differ in one bit.
fn apply_one_qubit(matrix: &Matrix, bit: usize, bases: &[usize], columns: &mut Matrix) {
    let [a, b, c, d] = [(0, 0), (0, 1), (1, 0), (1, 1)].map(|at| matrix[at]);
    let flips = [a, d] == [C64::ZERO; 2] && [b, c] == [C64::ONE; 2];
    for k in 0..columns.cols() {
        let column = columns.column_mut(k);
        for &base in bases {
            if flips {
                column.swap(base, base + bit);
            } else {
                let (x, y) = (column[base], column[base + bit]);
                (column[base], column[base + bit]) = (a * x + b * y, c * x + d * y);
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use std::sync::Arc;

    use super::*;
    use crate::norm;

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
}
