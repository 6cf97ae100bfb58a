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
    budget.admit(circuit.wires)?;
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
    budget.admit(circuit.wires)?;
    let columns: Vec<usize> = (0..1 << (circuit.wires - ancillas)).collect();
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
    let size = matrix.rows();
    let place = |k: usize| {
        let bits =
            targets.iter().enumerate().filter(|(t, _)| k >> (targets.len() - 1 - t) & 1 == 1);
        bits.map(|(_, &wire)| bit(wire)).sum::<usize>()
    };
    let offsets: Vec<usize> = (0..size).map(place).collect();
    let bases: Vec<usize> = (0..1_usize << wires)
        .filter(|index| index & moved == 0 && index & looked_at == wanted)
        .collect();
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
