//! Our findings and edits as the protocol's.

use std::collections::HashMap;

use program::{Edit, FileId, Finding, Severity, TextRange};
use ropey::Rope;
use tower_lsp::lsp_types::{
    Diagnostic, DiagnosticRelatedInformation, DiagnosticSeverity, DocumentChanges, Location,
    NumberOrString, OneOf, OptionalVersionedTextDocumentIdentifier, TextDocumentEdit, TextEdit,
    Url, WorkspaceEdit,
};

use super::position::range;
use crate::lsp::{ClientProfile, Document};

/// The name under which clients show what we say.
pub(crate) const SOURCE: &str = "cantle";

/// A finding, and the text it is about: the document's or an included one.
pub(crate) fn diagnostic(
    document: &Document,
    finding: &Finding,
    client: &ClientProfile,
) -> Option<(Url, Diagnostic)> {
    let place = location(document, finding.file, finding.range, client)?;
    let related = finding.related.iter().filter_map(|related| {
        let location = location(document, related.file, related.range, client)?;
        Some(DiagnosticRelatedInformation { location, message: related.message.clone() })
    });
    let diagnostic = Diagnostic {
        range: place.range,
        severity: Some(match finding.severity {
            Severity::Error => DiagnosticSeverity::ERROR,
            Severity::Warning => DiagnosticSeverity::WARNING,
            Severity::Hint => DiagnosticSeverity::HINT,
        }),
        code: Some(NumberOrString::String(finding.code.into())),
        source: Some(SOURCE.into()),
        message: finding.message.clone(),
        related_information: client.related_information.then(|| related.collect()),
        ..Diagnostic::default()
    };
    Some((place.uri, diagnostic))
}

/// A place in the text or in one of its includes; `None` for the standard
/// library, which has no text.
pub(crate) fn location(
    document: &Document,
    file: FileId,
    place: TextRange,
    client: &ClientProfile,
) -> Option<Location> {
    if file == FileId::MAIN {
        let place = range(&document.text, place, client.encoding);
        return Some(Location::new(document.uri.clone(), place));
    }
    let source = document.program().file(file)?;
    let uri = Url::from_file_path(&source.path).ok()?;
    Some(Location::new(uri, range(&Rope::from_str(&source.text), place, client.encoding)))
}

/// Edits of one text as the client takes them: `documentChanges` with the
/// version they speak of where that is understood, else `changes`.
pub(crate) fn workspace_edit(
    document: &Document,
    edits: &[Edit],
    client: &ClientProfile,
) -> WorkspaceEdit {
    let edits = edits.iter().map(|edit| TextEdit {
        range: range(&document.text, edit.range, client.encoding),
        new_text: edit.text.clone(),
    });
    let uri = document.uri.clone();
    if client.document_changes {
        let version = Some(document.version);
        let change = TextDocumentEdit {
            text_document: OptionalVersionedTextDocumentIdentifier { uri, version },
            edits: edits.map(OneOf::Left).collect(),
        };
        let changes = DocumentChanges::Edits(vec![change]);
        WorkspaceEdit { document_changes: Some(changes), ..WorkspaceEdit::default() }
    } else {
        let changes = HashMap::from([(uri, edits.collect())]);
        WorkspaceEdit { changes: Some(changes), ..WorkspaceEdit::default() }
    }
}
