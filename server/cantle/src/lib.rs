//! The language server and the command line.
//!
//! The only crate that knows the protocol, JSON, the disk and threads. It is
//! kept thin: it converts, schedules and prints what the other crates find.

pub mod disk;
pub mod error;
pub mod lsp;
pub mod replace;

mod checks;
mod config;
mod convert;
mod notifications;
mod requests;
