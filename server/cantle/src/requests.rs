//! The requests we serve: one file each, one list of all.
//!
//! A file implements [`Handler`] and is listed in [`ROUTES`]. What the server
//! announces is built from the same list, so nothing is announced that is
//! not served.

mod code_actions;
mod code_lenses;
mod completion;
mod definition;
mod hover;
mod inlay_hints;
mod references;
mod replace_command;
mod resolve_action;
mod symbols;

use serde_json::Value;
use tower_lsp::lsp_types::request::Request;
use tower_lsp::lsp_types::{
    InitializeResult, ServerCapabilities, ServerInfo, TextDocumentSyncCapability,
    TextDocumentSyncKind, TextDocumentSyncOptions,
};

use crate::error::Fail;
#[cfg(test)]
use crate::lsp::tests::probes;
use crate::lsp::{ClientProfile, Context, Lane};

/// A request that we serve.
pub(crate) trait Handler {
    /// The protocol's description of it.
    type Lsp: Request;
    /// Where it runs.
    const LANE: Lane;
    /// Announces it.
    fn advertise(capabilities: &mut ServerCapabilities, client: &ClientProfile);
    /// Answers it from a snapshot.
    fn handle(
        context: &Context,
        params: <Self::Lsp as Request>::Params,
    ) -> Result<<Self::Lsp as Request>::Result, Fail>;
}

/// A [`Handler`] with its types erased.
pub(crate) struct Route {
    /// The protocol's name.
    pub method: &'static str,
    /// Where it runs.
    pub lane: Lane,
    /// Announces it.
    pub advertise: fn(&mut ServerCapabilities, &ClientProfile),
    /// Answers it.
    pub answer: fn(&Context, Value) -> Result<Value, Fail>,
}

impl Route {
    /// The route to a handler.
    pub(crate) const fn of<H: Handler>() -> Self {
        Route {
            method: H::Lsp::METHOD,
            lane: H::LANE,
            advertise: H::advertise,
            answer: |context, params| {
                let params = serde_json::from_value(params)
                    .map_err(|error| Fail::BadParams(error.to_string()))?;
                let result = H::handle(context, params)?;
                serde_json::to_value(result).map_err(|error| {
                    tracing::error!("{}: {error}", H::Lsp::METHOD);
                    Fail::Internal
                })
            },
        }
    }
}

/// All requests that we serve, apart from the session's own.
pub(crate) static ROUTES: &[Route] = &[
    Route::of::<code_actions::CodeActions>(),
    Route::of::<code_lenses::CodeLenses>(),
    Route::of::<completion::Completion>(),
    Route::of::<definition::Definition>(),
    Route::of::<hover::Hover>(),
    Route::of::<inlay_hints::InlayHints>(),
    Route::of::<references::References>(),
    Route::of::<replace_command::ReplaceCommand>(),
    Route::of::<resolve_action::ResolveAction>(),
    Route::of::<symbols::Symbols>(),
    #[cfg(test)]
    Route::of::<probes::Panic>(),
    #[cfg(test)]
    Route::of::<probes::Toil>(),
    #[cfg(test)]
    Route::of::<probes::Text>(),
];

/// The answer to `initialize`.
pub(crate) fn initialize_result(client: &ClientProfile) -> InitializeResult {
    let sync = TextDocumentSyncOptions {
        open_close: Some(true),
        change: Some(TextDocumentSyncKind::INCREMENTAL),
        ..TextDocumentSyncOptions::default()
    };
    let mut capabilities = ServerCapabilities {
        position_encoding: Some(client.encoding.kind()),
        text_document_sync: Some(TextDocumentSyncCapability::Options(sync)),
        ..ServerCapabilities::default()
    };
    for route in ROUTES {
        (route.advertise)(&mut capabilities, client);
    }
    let server_info = ServerInfo {
        name: env!("CARGO_PKG_NAME").into(),
        version: Some(env!("CARGO_PKG_VERSION").into()),
    };
    InitializeResult { capabilities, server_info: Some(server_info) }
}
