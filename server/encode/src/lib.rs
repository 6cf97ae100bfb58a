//! From a matrix to a circuit: unitary synthesis and block encodings.
//!
//! Every method takes a [`Target`] and gives drafts; nothing leaves this
//! crate before [`verify`](crate::candidates) has multiplied the circuit back
//! and measured how far its corner is from the matrix.
//!
//! # Conventions
//!
//! - Ancillas are the first wires of a circuit, the signal wires follow, most
//!   significant first. Ancillas start and end in |0…0⟩.
//! - `scale · corner = M`: the scale is the subnormalisation of the encoding.
//! - Circuits consist of one-qubit gates, CX (an X with one control) and
//!   uncontrolled phases only, so each can be written as flat standard text.

pub mod compose;
pub mod cp;
pub mod euler;
pub mod mux;
pub mod prepare;

mod error;
mod method;
mod methods;
mod target;
#[cfg(test)]
mod testing;

pub use error::Error;
pub use method::{Draft, Method, Options, Prefer};
pub use methods::METHODS;
pub use target::Target;

/// Result of an encoding.
pub type Result<T> = std::result::Result<T, Error>;
