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
pub mod passes;
pub mod prepare;

mod candidate;
mod error;
mod method;
mod methods;
mod sum;
mod synthesis;
mod target;
mod verify;

#[cfg(test)]
mod testing;
#[cfg(test)]
mod tests;

pub use candidate::{Candidate, Outcome, candidates};
pub use error::Error;
pub use method::{DEFAULT_TOLERANCE, Draft, Method, Options, Prefer};
pub use methods::METHODS;
pub use synthesis::{UNITARY, synthesise};
pub use target::Target;

/// Result of an encoding.
pub type Result<T> = std::result::Result<T, Error>;
