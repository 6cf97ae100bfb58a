//! Multiplying a circuit back: nothing is offered that was not measured.

use operator::success::{Success, success};
use operator::{Budget, C64, Circuit, encoded_columns, norm};

use crate::{Result, Target};

/// What a circuit turned out to do.
#[derive(Debug, Clone)]
pub struct Measured {
    /// ‖target − scale · corner‖ in spectral norm, on [`Target::matrix`].
    pub error: f64,
    /// Chance that the ancillas are found in |0…0⟩.
    pub success: Success,
}

/// Evaluates the columns in which the ancillas are 0 and compares the corner.
///
/// # Errors
/// `TooLarge`, `NoConvergence`, `Stopped`.
pub fn measure(
    circuit: &Circuit,
    ancillas: usize,
    scale: f64,
    target: &Target,
    budget: &Budget,
) -> Result<Measured> {
    let columns = encoded_columns(circuit, ancillas, budget)?;
    let size = target.matrix.rows();
    let corner = columns.block(0, 0, size, size);
    let difference = &target.matrix - &corner.scaled(C64::new(scale, 0.0));
    Ok(Measured { error: norm::spectral(&difference)?, success: success(&corner, 1.0)? })
}
