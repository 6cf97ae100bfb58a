//! Between the protocol's types and ours. Nothing else converts positions.

mod markup;
mod position;
mod to_lsp;

pub(crate) use markup::hover_contents;
pub(crate) use position::{Encoding, offset, position, range, text_range};
pub(crate) use to_lsp::{SOURCE, diagnostic, location, workspace_edit};
