//! Circuits on wires and the operators they implement.
//!
//! This crate knows nothing of source text: a [`Circuit`] is a list of steps
//! on numbered wires, a [`Matrix`] is a dense complex matrix, and everything
//! here turns one into facts about the other.
//!
//! # Conventions
//!
//! - **Basis order.** Wire 0 is the most significant bit of a row or column
//!   index, so a circuit on `n` wires has a `2ⁿ × 2ⁿ` operator whose entry
//!   `(r, c)` is the amplitude of output `r` for input `c`.
//! - **Phase.** Operators carry their exact global phase. Nothing here drops
//!   it; distances that ignore it say so in their name.
//! - **Norms** are spectral (largest singular value) unless named otherwise.
//! - **Block encodings** put ancillas on the first wires, in and out of |0…0⟩.

mod apply;
mod budget;
mod circuit;
pub mod counts;
pub mod decompose;
pub mod distance;
mod error;
mod gates;
mod matrix;
pub mod norm;
pub mod portrait;
pub mod structure;
pub mod success;

pub use apply::{apply, encoded_columns, evaluate, evaluate_columns};
pub use budget::{Budget, DEFAULT_MAX_WIRES};
pub use circuit::{Circuit, Control, Definition, Gate, Step};
pub use error::Error;
pub use gates::{gate_matrix, one_qubit};
pub use matrix::Matrix;

/// A double-precision complex number, the entry type of every [`Matrix`].
pub type C64 = num_complex::Complex<f64>;

/// Result of an operator computation.
pub type Result<T> = std::result::Result<T, Error>;
