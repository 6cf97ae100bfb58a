//! The action of a circuit on columns of amplitudes.
//!
//! Gates act on the columns in place; no factor of the circuit's full size is
//! ever formed.

mod kernel;

use std::sync::Arc;

use crate::gates::{gate_matrix, whole};
use crate::{Budget, C64, Circuit, Definition, Gate, Matrix, Result, Step};
use kernel::Place;

/// Definitions on at most this many wires are applied as one small matrix.
const SMALL: usize = 4;

/// Definitions on more wires than this are never made into a matrix to be
/// applied: at eight wires it has 65,536 entries, one MiB, each.
const MIDDLE: usize = 8;

/// Replaces each column, a state of `2^wires` amplitudes, by its image.
///
/// # Errors
/// `Stopped`, `TooLarge`, and what the matrices of gates report. The columns
/// are then somewhere on their way.
pub fn apply(circuit: &Circuit, columns: &mut Matrix, budget: &Budget) -> Result<()> {
    assert_eq!(columns.rows(), 1 << circuit.wires, "amplitudes of a column");
    circuit.steps.iter().try_for_each(|step| apply_step(step, circuit.wires, columns, budget))
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
    assert!(ancillas <= circuit.wires, "ancillas are wires of the circuit");
    // The signal wires are counted before their columns are listed.
    let signal = circuit.wires - ancillas;
    budget.admit(signal)?;
    let columns: Vec<usize> = (0..1 << signal).collect();
    evaluate_columns(circuit, &columns, budget)
}

fn apply_step(step: &Step, wires: usize, columns: &mut Matrix, budget: &Budget) -> Result<()> {
    budget.poll()?;
    if let Some((definition, times)) = in_place(&step.gate) {
        for _ in 0..times.unsigned_abs() {
            budget.poll()?;
            apply_body(definition, times < 0, step, wires, columns, budget)?;
        }
        return Ok(());
    }
    let matrix = gate_matrix(&step.gate, budget)?;
    Place::new(&step.controls, &step.targets, wires).apply(&matrix, columns);
    Ok(())
}

/// The definition that a gate repeats, negative times for its inverse, if
/// going through its body is less work than its matrix.
fn in_place(gate: &Gate) -> Option<(&Arc<Definition>, i64)> {
    let (definition, times) = repeated(gate)?;
    let wires = definition.circuit.wires;
    let size = 1_u64.checked_shl(wires as u32).unwrap_or(u64::MAX);
    let repeats = times.unsigned_abs();
    // A matrix costs its size for each amplitude, a step of the body a few
    // multiplications.
    let cheap = definition.weight().saturating_mul(repeats) <= size;
    let cheap = cheap || (wires > MIDDLE && repeats <= size);
    (wires > SMALL && cheap).then_some((definition, times))
}

/// Peels whole powers and inverses off a call.
fn repeated(gate: &Gate) -> Option<(&Arc<Definition>, i64)> {
    match gate {
        Gate::Call(definition) => Some((definition, 1)),
        Gate::Inverse(inner) => repeated(inner).map(|(found, times)| (found, -times)),
        Gate::Power(inner, exponent) => {
            let (found, times) = repeated(inner)?;
            Some((found, times.checked_mul(whole(*exponent)?)?))
        }
        _ => None,
    }
}

/// The body of a definition or its adjoint, each step under the call's
/// controls as well.
fn apply_body(
    definition: &Definition,
    adjoint: bool,
    call: &Step,
    wires: usize,
    columns: &mut Matrix,
    budget: &Budget,
) -> Result<()> {
    let steps = &definition.circuit.steps;
    for at in 0..steps.len() {
        let inner = if adjoint { steps[steps.len() - 1 - at].inverse() } else { steps[at].clone() };
        let mut step = inner.mapped(|wire| call.targets[wire]);
        step.controls.extend(&call.controls);
        apply_step(&step, wires, columns, budget)?;
    }
    Ok(())
}

#[cfg(test)]
mod tests;
