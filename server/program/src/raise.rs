//! From circuits back to source text.

mod plan;
mod replacement;
mod text;

use grammar::TextSize;
use grammar::nodes::NodeExt;
use operator::Circuit;

use crate::file::SourceFile;
use crate::finding::Edit;
use crate::standard::LIBRARY;

pub(crate) use replacement::replacement;
pub use text::{angle_text, circuit_lines};

/// The edit that includes the standard library: after the version line, or at
/// the start of the file.
pub(crate) fn library_edit(file: &SourceFile) -> Edit {
    let newline = newline(&file.text);
    match file.parse.root().version() {
        Some(version) => {
            Edit::insert(version.range().end(), format!("{newline}include \"{LIBRARY}\";"))
        }
        None => {
            let start = if file.text.starts_with('\u{feff}') { 3 } else { 0 };
            Edit::insert(TextSize::from(start), format!("include \"{LIBRARY}\";{newline}"))
        }
    }
}

/// The line ending that a text uses.
pub(crate) fn newline(text: &str) -> &'static str {
    match text.find('\n') {
        Some(at) if text[..at].ends_with('\r') => "\r\n",
        _ => "\n",
    }
}

/// The costs of a circuit, for the comment above it.
fn costs(circuit: &Circuit) -> String {
    let counts = operator::counts::counts(circuit);
    let cx = counts.cx.map_or_else(|| "CX unknown".to_owned(), |cx| format!("{cx} CX"));
    format!("{cx}, depth {}", counts.depth)
}
