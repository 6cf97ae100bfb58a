//! What one call in the text does, with its own parameters and modifiers.

use grammar::{TextRange, TextSize};
use operator::{Budget, Circuit, Gate, Matrix, Step, evaluate, portrait};

use super::grid::grid;
use super::hover::{Block, MAX_SHOWN};
use super::view::{at_values, values};
use crate::{FileId, GateDef, Lowered, Program};

/// Most qubits of a call whose operator is worked out.
const MAX_QUBITS: usize = 8;

/// What the call around an offset of the main file does; empty where there
/// is none, or where it is no more than the gate itself.
pub(super) fn about_call(program: &Program, offset: TextSize, budget: &Budget) -> Vec<Block> {
    let around = gate_around(program, offset);
    let given = around.map(|gate| values(program, gate).0).unwrap_or_default();
    let lowered = match around {
        Some(gate) => {
            let given: Vec<f64> = given.iter().map(|(_, value)| *value).collect();
            program.gate_circuit(&gate.name, &given)
        }
        None => program.program_circuit(),
    };
    let Ok(lowered) = lowered else { return Vec::new() };
    let at = steps_at(&lowered, offset);
    let Some(step) = at.first().map(|&at| &lowered.circuit.steps[at]) else { return Vec::new() };
    if !says_more(program, step) {
        return Vec::new();
    }
    let wires: Vec<usize> =
        step.controls.iter().map(|c| c.wire).chain(step.targets.iter().copied()).collect();
    if wires.len() > MAX_QUBITS {
        return Vec::new();
    }
    let Ok(matrix) = alone(step, &wires, budget) else { return Vec::new() };
    let which = match at.len() {
        1 => "This call".to_owned(),
        many => format!("The first of the {many} calls made here"),
    };
    let given = at_values(&given);
    let mut blocks = vec![Block::Text(format!("{which}{given}: {}", portrait::portrait(&matrix)))];
    if matrix.rows() <= MAX_SHOWN {
        blocks.push(Block::Grid(grid(&matrix)));
    }
    let names: Vec<String> = wires
        .iter()
        .filter_map(|&wire| Some(format!("`{}`", lowered.wire_names.get(wire)?)))
        .collect();
    blocks.push(Block::Text(format!("Rows and columns in the order {}", names.join(", "))));
    blocks
}

/// The gate of the main file whose body holds an offset.
fn gate_around(program: &Program, offset: TextSize) -> Option<&GateDef> {
    program.gates().iter().find(|gate| {
        gate.file == FileId::MAIN && gate.body_range.is_some_and(|body| body.contains(offset))
    })
}

/// The steps of the innermost statement around an offset.
fn steps_at(lowered: &Lowered, offset: TextSize) -> Vec<usize> {
    let here = |&&(file, range): &&(FileId, TextRange)| {
        file == FileId::MAIN && range.contains_inclusive(offset)
    };
    let innermost = lowered.origins.iter().filter(here).min_by_key(|origin| origin.1.len());
    let origins = lowered.origins.iter().enumerate();
    origins.filter(|(_, origin)| Some(*origin) == innermost).map(|(at, _)| at).collect()
}

/// Whether a step is more than a plain call of a gate without parameters.
fn says_more(program: &Program, step: &Step) -> bool {
    let plain = match &step.gate {
        Gate::Call(definition) => {
            program.gate(&definition.name).is_none_or(|gate| gate.params.is_empty())
        }
        Gate::Dense(_) => true,
        _ => false,
    };
    !plain || !step.controls.is_empty()
}

/// The operator of a step on its own wires, controls first.
fn alone(step: &Step, wires: &[usize], budget: &Budget) -> operator::Result<Matrix> {
    let place = |wire: usize| wires.iter().position(|&w| w == wire).unwrap_or(0);
    evaluate(&Circuit { wires: wires.len(), steps: vec![step.mapped(place)] }, budget)
}
