//! `textDocument/documentSymbol`: the names a file declares.

use program::SymbolKind as Ours;
use program::queries::{self, OutlineItem};
use tower_lsp::lsp_types::request::DocumentSymbolRequest;
use tower_lsp::lsp_types::{
    DocumentSymbol, DocumentSymbolParams, DocumentSymbolResponse, Location, OneOf,
    ServerCapabilities, SymbolInformation, SymbolKind,
};

use super::Handler;
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Document, Lane};

pub(crate) enum Symbols {}

impl Handler for Symbols {
    type Lsp = DocumentSymbolRequest;
    const LANE: Lane = Lane::Names;

    fn advertise(capabilities: &mut ServerCapabilities, _: &ClientProfile) {
        capabilities.document_symbol_provider = Some(OneOf::Left(true));
    }

    fn handle(
        context: &Context,
        params: DocumentSymbolParams,
    ) -> Result<Option<DocumentSymbolResponse>, Fail> {
        let document = context.document(&params.text_document.uri)?;
        let client = &context.world.client;
        let items = queries::outline(document.program());
        Ok(Some(if client.nested_symbols {
            let nested = items.into_iter().map(|item| symbol(&document, item, client));
            DocumentSymbolResponse::Nested(nested.collect())
        } else {
            let flat = items.into_iter().map(|item| information(&document, item, client));
            DocumentSymbolResponse::Flat(flat.collect())
        }))
    }
}

// The protocol's types still have the field that `tags` has replaced.
#[allow(deprecated)]
fn symbol(document: &Document, item: OutlineItem, client: &ClientProfile) -> DocumentSymbol {
    DocumentSymbol {
        name: item.name,
        detail: Some(item.detail).filter(|detail| !detail.is_empty()),
        kind: kind(item.kind),
        tags: None,
        deprecated: None,
        range: convert::range(&document.text, item.range, client.encoding),
        selection_range: convert::range(&document.text, item.name_range, client.encoding),
        children: None,
    }
}

#[allow(deprecated)]
fn information(
    document: &Document,
    item: OutlineItem,
    client: &ClientProfile,
) -> SymbolInformation {
    let range = convert::range(&document.text, item.range, client.encoding);
    SymbolInformation {
        name: item.name,
        kind: kind(item.kind),
        tags: None,
        deprecated: None,
        location: Location::new(document.uri.clone(), range),
        container_name: None,
    }
}

fn kind(ours: Ours) -> SymbolKind {
    match ours {
        Ours::Gate | Ours::Subroutine | Ours::Extern | Ours::Function => SymbolKind::FUNCTION,
        Ours::Constant => SymbolKind::CONSTANT,
        Ours::Matrix | Ours::Qubit => SymbolKind::ARRAY,
        Ours::Variable | Ours::Io | Ours::Alias => SymbolKind::VARIABLE,
        Ours::Parameter | Ours::Operand | Ours::LoopVariable => SymbolKind::VARIABLE,
    }
}
