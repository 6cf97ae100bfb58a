//! What an editor asks about a program.
//!
//! Plain structs with byte ranges and strings: nothing here knows a protocol.
//! Queries about names are immediate; those that take a
//! [`Budget`](operator::Budget) do arithmetic and belong on a worker.

mod call;
mod claims;
mod complete;
mod grid;
mod hints;
mod hover;
mod navigate;
mod outline;
mod stand_ins;
mod view;

pub use claims::{chance, counted, statement, verdict};
pub use complete::{Completion, complete};
pub use grid::{complex, error, grid, number};
pub use hints::{Hint, hints};
pub use hover::{Block, Hover, hover};
pub use navigate::{Place, definition, references};
pub use outline::{OutlineItem, outline};
pub use stand_ins::{stand_in_at, stand_ins};

#[cfg(test)]
mod tests;
