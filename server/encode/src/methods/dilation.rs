//! `dilation`: any matrix at the least scale there is, with one ancilla.

use operator::{Budget, Matrix};

use crate::synthesis::{plan::Plan, shannon};
use crate::{Draft, Error, Method, Options, Result, Target, mux};

/// The singular-value dilation `M = α W Σ V†` with `α = ‖M‖`: V†, one
/// multiplexed rotation of the ancilla by 2 arccos σᵢ, W.
///
/// The ancilla starts in |0⟩ and is projected on it, so the rotation's last
/// CZ does nothing; V† is made up to a diagonal that passes the rotation into
/// W. CX: at most 2 U(n) + 2ⁿ − 2 for n ≥ 2 with U(n) that of a unitary.
pub(super) struct Dilation;

impl Method for Dilation {
    fn name(&self) -> &'static str {
        "dilation"
    }

    fn fits(&self, target: &Target) -> std::result::Result<(), String> {
        match target.wires {
            0 => Err("a number acts on no qubit".into()),
            _ => Ok(()),
        }
    }

    fn encode(&self, target: &Target, _: &Options, budget: &Budget) -> Result<Vec<Draft>> {
        budget.admit(target.wires + 1)?;
        let svd = target.svd()?;
        let largest = svd.sigma.first().copied().unwrap_or(0.0);
        // A zero matrix has no scale of its own.
        let scale = if largest > 0.0 { largest } else { 1.0 };
        let angles: Vec<f64> =
            svd.sigma.iter().map(|s| 2.0 * (s / scale).clamp(0.0, 1.0).acos()).collect();
        let circuit = dilated(&svd.v.adjoint(), &angles, &svd.u, budget)?;
        let rank = svd.sigma.iter().filter(|&&s| s > RANK * scale).count();
        let note = match rank {
            0 => "the zero matrix, at a scale of one".into(),
            _ if rank < svd.sigma.len() => format!("scale is the norm; rank {rank}"),
            _ => "scale is the norm".into(),
        };
        Ok(vec![Draft { circuit, ancillas: 1, scale, note }])
    }
}

/// Singular values below this share of the largest are rounding; used for
/// the note only, never for the circuit.
const RANK: f64 = 1e-13;

/// `before`, the ancilla turned by one angle for each signal value, `after`;
/// the ancilla is wire 0.
fn dilated(
    before: &Matrix,
    angles: &[f64],
    after: &Matrix,
    budget: &Budget,
) -> Result<operator::Circuit> {
    let wires =
        before.qubits().ok_or(Error::NotQubits { rows: before.rows(), cols: before.cols() })?;
    let signal: Vec<usize> = (1..=wires).collect();
    let mut plan = Plan::new(wires + 1);
    shannon::push(&mut plan, before, &signal, budget)?;
    plan.steps(|circuit| mux::projected_rotation(circuit, angles, &signal, 0));
    shannon::push(&mut plan, after, &signal, budget)?;
    plan.lower(budget)
}
