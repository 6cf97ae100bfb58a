//! `textDocument/completion`: names and annotations.

use program::SymbolKind;
use program::queries::{self, Completion as Ours};
use tower_lsp::lsp_types::request::Completion as Lsp;
use tower_lsp::lsp_types::{
    CompletionItem, CompletionItemKind, CompletionOptions, CompletionParams, CompletionResponse,
    ServerCapabilities,
};

use super::Handler;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};

pub(crate) enum Completion {}

impl Handler for Completion {
    type Lsp = Lsp;
    const LANE: Lane = Lane::Names;

    fn advertise(capabilities: &mut ServerCapabilities, _: &ClientProfile) {
        capabilities.completion_provider = Some(CompletionOptions {
            trigger_characters: Some(vec!["@".into(), ".".into()]),
            ..CompletionOptions::default()
        });
    }

    fn handle(
        context: &Context,
        params: CompletionParams,
    ) -> Result<Option<CompletionResponse>, Fail> {
        let (document, offset) = context.place(&params.text_document_position)?;
        let found = queries::complete(document.program(), offset);
        Ok(Some(CompletionResponse::Array(found.into_iter().map(item).collect())))
    }
}

fn item(ours: Ours) -> CompletionItem {
    CompletionItem {
        label: ours.text,
        kind: Some(ours.kind.map_or(CompletionItemKind::KEYWORD, kind)),
        detail: Some(ours.detail).filter(|detail| !detail.is_empty()),
        ..CompletionItem::default()
    }
}

fn kind(symbol: SymbolKind) -> CompletionItemKind {
    match symbol {
        SymbolKind::Gate | SymbolKind::Subroutine | SymbolKind::Extern | SymbolKind::Function => {
            CompletionItemKind::FUNCTION
        }
        SymbolKind::Constant => CompletionItemKind::CONSTANT,
        SymbolKind::Matrix | SymbolKind::Qubit => CompletionItemKind::VALUE,
        _ => CompletionItemKind::VARIABLE,
    }
}
