//! Unitary matrices as circuits.

mod canonical;
mod pair;
pub(crate) mod plan;
pub(crate) mod shannon;
mod structure;

use operator::{Budget, Circuit, Matrix, norm};

use crate::{Error, Result, passes};
use plan::Plan;

/// Largest ‖U†U − I‖ of what is taken for a unitary here. Factorisations in
/// double precision stay below 1e-13 on the sizes in reach; a matrix typed
/// with fewer digits has to be replaced by its nearest unitary first.
pub const UNITARY: f64 = 1e-10;

/// A circuit of a unitary on any number of wires, global phase exact.
///
/// One-qubit gates, CX and at most one phase; no ancilla. At most 0, 3, 20,
/// 100, 444 CX for 1 to 5 wires.
///
/// # Errors
/// [`Error::NotQubits`], or `NotUnitary` past [`UNITARY`], `TooLarge`,
/// `NotFinite`, `Stopped`.
pub fn synthesise(unitary: &Matrix, budget: &Budget) -> Result<Circuit> {
    let (rows, cols) = (unitary.rows(), unitary.cols());
    let wires = unitary.qubits().ok_or(Error::NotQubits { rows, cols })?;
    budget.admit(wires)?;
    unitary.check_finite()?;
    let residual = norm::unitarity_error(unitary)?;
    if residual > UNITARY {
        return Err(operator::Error::NotUnitary { residual, tolerance: UNITARY }.into());
    }
    let mut plan = Plan::new(wires);
    shannon::push(&mut plan, unitary, &(0..wires).collect::<Vec<_>>(), budget)?;
    passes::simplified(&plan.lower(budget)?, budget)
}
