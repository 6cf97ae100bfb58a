//! Whole sessions over in-memory pipes.

mod documents;
mod driver;
mod lifecycle;
mod malformed;
pub(crate) mod probes;
