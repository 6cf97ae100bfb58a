//! What a gate does, as far as it can be shown.

use std::sync::Arc;

use operator::counts::{Counts, counts};
use operator::{Budget, C64, Circuit, Matrix};

use super::claims::about_gate;
use super::grid::number;
use crate::{ClaimKind, GateDef, Measured, Program};

/// What a gate does.
#[derive(Debug, Clone)]
pub(super) struct View {
    /// Its operator; for a block encoding scale × corner.
    pub operator: Result<Arc<Matrix>, String>,
    /// The scale and the number of ancillas if it is a block encoding.
    pub encoding: Option<(f64, usize)>,
    /// What it costs; none for a stand-in.
    pub counts: Option<Counts>,
    /// The parameter values it is shown at.
    pub at: Vec<(String, f64)>,
    /// Whether nobody but us chose these values.
    pub chosen: bool,
}

/// Looks at the gate at a position of [`Program::gates`]; an `Err` says why
/// there is nothing to see, as the end of "not shown, …".
pub(super) fn view(program: &Program, index: usize, budget: &Budget) -> Result<View, String> {
    let gate = program.gates().get(index).ok_or("there is no such gate")?;
    let (at, chosen) = values(program, gate);
    let parameters: Vec<f64> = at.iter().map(|(_, value)| *value).collect();
    let lowered = program.gate_circuit(&gate.name, &parameters).map_err(|cannot| cannot.reason)?;
    let encoding = encoding(program, index, budget);
    let operator = operator_of(&lowered.circuit, encoding, budget).map(Arc::new);
    let counts = gate.stand_in.is_none().then(|| counts(&lowered.circuit));
    Ok(View { operator: operator.map_err(|error| error.to_string()), encoding, counts, at, chosen })
}

/// The values that a gate's parameters are shown at, and whether they were
/// chosen here for want of a `@cantle.sample`.
pub(super) fn values(program: &Program, gate: &GateDef) -> (Vec<(String, f64)>, bool) {
    let point = program.sample_points(gate).into_iter().next().unwrap_or_default();
    let sampled = |name: &String| gate.samples.iter().any(|(known, _)| known == name);
    let chosen = !gate.params.iter().all(sampled);
    (gate.params.iter().cloned().zip(point).collect(), chosen)
}

/// The scale and the ancillas with which the gate encodes a matrix, if it
/// says that it does and they are known.
fn encoding(program: &Program, index: usize, budget: &Budget) -> Option<(f64, usize)> {
    let is_encoding = |kind: &ClaimKind| matches!(kind, ClaimKind::Encodes { .. });
    let claim = about_gate(program, index).find(|claim| is_encoding(&claim.kind))?;
    let Measured { scale, ancillas, .. } = program.measure(claim, budget);
    Some((scale?, ancillas?))
}

fn operator_of(
    circuit: &Circuit,
    encoding: Option<(f64, usize)>,
    budget: &Budget,
) -> operator::Result<Matrix> {
    let Some((scale, ancillas)) = encoding else { return operator::evaluate(circuit, budget) };
    let columns = operator::encoded_columns(circuit, ancillas, budget)?;
    let size = columns.cols();
    Ok(columns.block(0, 0, size, size).scaled(C64::new(scale, 0.0)))
}

/// " at `theta` = 0.3"; empty without values.
pub(super) fn at_values(values: &[(String, f64)]) -> String {
    let each = |(name, value): &(String, f64)| format!("`{name}` = {}", number(*value));
    let all: Vec<String> = values.iter().map(each).collect();
    if all.is_empty() { String::new() } else { format!(" at {}", all.join(", ")) }
}
