//! From circuits back to source text.

mod plan;
mod replacement;
mod text;

use grammar::TextSize;
use grammar::nodes::NodeExt;
use operator::{Circuit, Gate};

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

/// The costs of a circuit as it is written.
fn costs(circuit: &Circuit) -> String {
    let cx = |gate: &Gate, controls: usize| matches!(gate, Gate::X) && controls == 1;
    let count = circuit.steps.iter().filter(|s| cx(&s.gate, s.controls.len())).count();
    format!("{count} CX, {} gates", circuit.steps.len())
}
