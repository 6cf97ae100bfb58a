//! What an editor asks about a program.
//!
//! Plain structs with byte ranges and strings: nothing here knows a protocol.
//! Queries about names are immediate; those that take a
//! [`Budget`](operator::Budget) do arithmetic and belong on a worker.

mod complete;
mod navigate;
mod outline;

pub use complete::{Completion, complete};
pub use navigate::{Place, definition, references};
pub use outline::{OutlineItem, outline};
