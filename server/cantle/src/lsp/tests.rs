//! Whole sessions over in-memory pipes.

mod documents;
mod driver;
mod features;
mod includes;
mod lifecycle;
mod malformed;
pub(crate) mod probes;
