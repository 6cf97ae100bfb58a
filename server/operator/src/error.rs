//! What can go wrong in a numerical computation, as facts rather than prose.

use thiserror::Error as ThisError;

/// Why an operator, a decomposition or a distance could not be computed.
///
/// A shape mismatch between our own calls is a bug and panics; everything
/// that a user's data can cause is one of these.
#[derive(Debug, Clone, PartialEq, ThisError)]
pub enum Error {
    /// The matrix has the wrong shape for what was asked.
    #[error("a {rows}×{cols} matrix does not fit here")]
    BadDimension {
        /// Number of rows found.
        rows: usize,
        /// Number of columns found.
        cols: usize,
    },
    /// A unitary was needed; `residual` is ‖M†M − I‖ in spectral norm.
    #[error("not unitary: ‖M†M − I‖ = {residual:.3e}, allowed {tolerance:.1e}")]
    NotUnitary {
        /// ‖M†M − I‖ in spectral norm.
        residual: f64,
        /// What was allowed.
        tolerance: f64,
    },
    /// An iteration ended without reaching its tolerance.
    #[error("no convergence after {iterations} iterations (residual {residual:.3e})")]
    NoConvergence {
        /// Iterations done.
        iterations: usize,
        /// Residual at the end, in the units of the caller's tolerance.
        residual: f64,
    },
    /// The dense representation would not fit the stated limit.
    #[error("{wires} qubits are past the limit of {limit} for a dense operator")]
    TooLarge {
        /// Wires asked for.
        wires: usize,
        /// The limit in force.
        limit: usize,
    },
    /// An entry is NaN or infinite.
    #[error("entry ({row}, {col}) is not a finite number")]
    NotFinite {
        /// Row of the first such entry.
        row: usize,
        /// Column of the first such entry.
        col: usize,
    },
    /// The caller's stop flag was raised.
    #[error("stopped before the end")]
    Stopped,
}
