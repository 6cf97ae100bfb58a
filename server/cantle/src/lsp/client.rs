//! What the client says it can do, read once, at `initialize`.

use serde_json::Value;

use crate::convert::Encoding;

/// The parts of the client's capabilities that we act upon. What a client
/// does not name it is taken not to have.
#[derive(Debug, Clone, Default, PartialEq)]
pub(crate) struct ClientProfile {
    /// Unit in which columns are counted.
    pub encoding: Encoding,
    /// Code actions may get their `edit` from `codeAction/resolve`.
    pub resolves_edits: bool,
    /// `workspace/applyEdit` is understood.
    pub applies_edits: bool,
    /// `WorkspaceEdit.documentChanges` is understood.
    pub document_changes: bool,
    /// Diagnostics may point to other places.
    pub related_information: bool,
    /// Hovers may be markdown.
    pub markdown: bool,
    /// Document symbols may be nested.
    pub nested_symbols: bool,
}

impl ClientProfile {
    /// Reads the parameters of `initialize` leniently: an oddity in one
    /// capability must not cost the user the others.
    pub(crate) fn read(params: &Value) -> Self {
        let at = |path: &str| params.pointer(&format!("/capabilities/{path}"));
        let flag = |path: &str| at(path).and_then(Value::as_bool).unwrap_or(false);
        let names = |path: &str, name: &str| {
            at(path).and_then(Value::as_array).is_some_and(|list| list.iter().any(|v| v == name))
        };
        ClientProfile {
            encoding: Encoding::negotiate(at("general/positionEncodings")),
            resolves_edits: names("textDocument/codeAction/resolveSupport/properties", "edit"),
            applies_edits: flag("workspace/applyEdit"),
            document_changes: flag("workspace/workspaceEdit/documentChanges"),
            related_information: flag("textDocument/publishDiagnostics/relatedInformation"),
            markdown: names("textDocument/hover/contentFormat", "markdown"),
            nested_symbols: flag("textDocument/documentSymbol/hierarchicalDocumentSymbolSupport"),
        }
    }
}
