//! Why a matrix could not be encoded.

use thiserror::Error as ThisError;

/// What stops an encoding. Facts a user can act on, never a bug of ours.
#[derive(Debug, Clone, PartialEq, ThisError)]
pub enum Error {
    /// A computation on the operator failed or was stopped.
    #[error(transparent)]
    Operator(#[from] operator::Error),
    /// The matrix is not square with a power of two as its size.
    #[error("a {rows}×{cols} matrix acts on no whole number of qubits")]
    NotQubits {
        /// Number of rows.
        rows: usize,
        /// Number of columns.
        cols: usize,
    },
    /// No method has the name asked for.
    #[error("no method is called `{name}`; there are {known}")]
    UnknownMethod {
        /// The name asked for.
        name: String,
        /// All names, separated by commas.
        known: String,
    },
    /// A method does not reach its goal on this matrix; the text says why.
    #[error("{0}")]
    Unfit(String),
}
