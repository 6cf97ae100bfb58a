//! OpenQASM 3 text to tokens, a lossless tree, typed nodes.
//!
//! [`parse`] is total: any text gives a tree whose text is that text, and a
//! list of errors. The crate knows the form of the language only; what a name
//! or a number means is for its users.

mod event;
mod format;
mod kind;
mod lexer;
mod line_index;
pub mod nodes;
mod parser;
mod rules;
mod tree;

pub use format::{Respacing, format, formatted};
pub use kind::{OpenQasm, SyntaxElement, SyntaxKind, SyntaxNode, SyntaxToken};
pub use line_index::{Columns, LineColumn, LineIndex};
pub use parser::MAX_NESTING;
pub use rowan::{NodeOrToken, TextRange, TextSize, TokenAtOffset, WalkEvent};
pub use tree::{Insertion, MAX_BYTES, Parse, SyntaxError};

/// Parses a file.
pub fn parse(text: &str) -> Parse {
    tree::build(text)
}
