//! Rewriting passes: fewer gates, the same operator.
//!
//! Every pass keeps the operator exactly, up to rounding, the global phase
//! included. They see one-qubit gates, CX and phases; other steps are left
//! where they are.

use operator::{Budget, C64, Circuit, Gate, Matrix, Step};

use crate::{Result, euler};

/// Rounds of all passes after which a circuit is left as it is. Each round
/// that goes on has removed a gate; the circuits made here need two or three.
const ROUNDS: usize = 20;

/// The circuit after all passes, repeated until nothing changes.
///
/// # Errors
/// `Stopped`.
pub fn simplified(circuit: &Circuit, budget: &Budget) -> Result<Circuit> {
    let mut best = merged(circuit, budget)?;
    for _ in 0..ROUNDS {
        budget.poll()?;
        let next = merged(&cancelled(&best), budget)?;
        if next.steps.len() >= best.steps.len() {
            break;
        }
        best = next;
    }
    Ok(best)
}

/// Runs of one-qubit gates become one gate each, identities vanish, and all
/// global phases become one at the end.
fn merged(circuit: &Circuit, budget: &Budget) -> Result<Circuit> {
    let mut out = Circuit::new(circuit.wires);
    let mut waiting: Vec<Vec<&Step>> = vec![Vec::new(); circuit.wires];
    let mut phase = C64::ONE;
    for step in &circuit.steps {
        match (&step.gate, step.controls.is_empty(), &step.targets[..]) {
            (Gate::Phase(angle), true, _) => phase *= C64::cis(*angle),
            (gate, true, &[wire]) if is_plain(gate) => waiting[wire].push(step),
            _ => {
                for wire in wires(step) {
                    phase *= flush(&mut out, &mut waiting[wire], wire, budget)?;
                }
                out.steps.push(step.clone());
            }
        }
    }
    for (wire, run) in waiting.iter_mut().enumerate() {
        phase *= flush(&mut out, run, wire, budget)?;
    }
    euler::push_phase(&mut out, phase.arg());
    Ok(out)
}

/// Writes out a run of one-qubit gates as one gate, or none. Returns the
/// phase that this leaves.
fn flush(out: &mut Circuit, run: &mut Vec<&Step>, wire: usize, budget: &Budget) -> Result<C64> {
    let run = std::mem::take(run);
    let mut product = Matrix::identity(2);
    for step in &run {
        product = &*operator::gate_matrix(&step.gate, budget)? * &product;
    }
    Ok(if run.is_empty() { C64::ONE } else { euler::push_up_to_phase(out, &product, wire) })
}

/// Wires of a step.
fn wires(step: &Step) -> impl Iterator<Item = usize> + '_ {
    step.controls.iter().map(|c| c.wire).chain(step.targets.iter().copied())
}

/// A named one-qubit gate: neither a stand-in nor a definition.
fn is_plain(gate: &Gate) -> bool {
    match gate {
        Gate::Dense(_) | Gate::Call(_) => false,
        Gate::Inverse(inner) | Gate::Power(inner, _) => is_plain(inner),
        other => other.wires() == 1,
    }
}

/// Pairs of equal CX vanish where everything between them commutes with
/// them: other CX that share their control or their target, and one-qubit
/// gates that are diagonal on the control.
fn cancelled(circuit: &Circuit) -> Circuit {
    let mut gone = vec![false; circuit.steps.len()];
    for first in 0..circuit.steps.len() {
        let Some(pair) = cx(&circuit.steps[first]) else { continue };
        if gone[first] {
            continue;
        }
        for second in first + 1..circuit.steps.len() {
            let step = &circuit.steps[second];
            if gone[second] {
                continue;
            }
            if cx(step) == Some(pair) {
                gone[first] = true;
                gone[second] = true;
                break;
            }
            if !commutes(step, pair) {
                break;
            }
        }
    }
    let kept = circuit.steps.iter().zip(gone).filter(|(_, gone)| !gone).map(|(s, _)| s.clone());
    Circuit { wires: circuit.wires, steps: kept.collect() }
}

/// Control and target, if the step is a CX.
fn cx(step: &Step) -> Option<(usize, usize)> {
    match (&step.gate, &step.controls[..], &step.targets[..]) {
        (Gate::X, [control], &[target]) if control.on => Some((control.wire, target)),
        _ => None,
    }
}

/// Whether a step commutes with a CX for a reason seen at a glance.
fn commutes(step: &Step, (control, target): (usize, usize)) -> bool {
    if let Some((other, aim)) = cx(step) {
        return other != target && aim != control;
    }
    let on_control = step.targets.contains(&control);
    let touches_target = wires(step).any(|w| w == target);
    match (on_control, touches_target) {
        (false, false) => true,
        (true, false) => step.controls.is_empty() && is_diagonal(&step.gate),
        (false, true) => {
            step.controls.is_empty() && matches!(step.gate, Gate::X | Gate::Rx(_) | Gate::Sx)
        }
        (true, true) => false,
    }
}

/// Whether a gate is diagonal by its name.
pub(crate) fn is_diagonal(gate: &Gate) -> bool {
    use Gate::{Id, P, Phase, Rz, S, Sdg, T, Tdg, Z};
    matches!(gate, Phase(_) | Id | Z | S | Sdg | T | Tdg | P(_) | Rz(_))
}
