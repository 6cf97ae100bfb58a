//! From circuits back to source text.

use grammar::TextSize;
use grammar::nodes::NodeExt;

use crate::file::SourceFile;
use crate::finding::Edit;
use crate::standard::LIBRARY;

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
