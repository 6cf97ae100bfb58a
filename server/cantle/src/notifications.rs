//! The notifications we act upon, each in the order in which it arrives.
//!
//! A notice runs to its end before the next message is looked at, so it only
//! stores what the client says and starts what follows from it.

use std::sync::Arc;

use serde::de::DeserializeOwned;
use serde_json::Value;
use tower_lsp::lsp_types::notification::{
    DidChangeTextDocument, DidCloseTextDocument, DidOpenTextDocument, Notification,
};
use tower_lsp::lsp_types::{
    DidChangeTextDocumentParams, DidCloseTextDocumentParams, DidOpenTextDocumentParams,
};

use crate::error::Fail;
use crate::lsp::{Document, Session};

/// One kind of notification and what it does.
pub(crate) struct Notice {
    /// The protocol's name.
    pub method: &'static str,
    /// Stores what it says.
    pub receive: fn(&Arc<Session>, Value) -> Result<(), Fail>,
}

/// All notifications that we act upon.
pub(crate) static NOTICES: &[Notice] = &[
    Notice { method: DidOpenTextDocument::METHOD, receive: did_open },
    Notice { method: DidChangeTextDocument::METHOD, receive: did_change },
    Notice { method: DidCloseTextDocument::METHOD, receive: did_close },
];

fn did_open(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let DidOpenTextDocumentParams { text_document: item } = read(params)?;
    let text = ropey::Rope::from_str(&item.text);
    session.put(Document::new(item.uri, item.version, text));
    Ok(())
}

fn did_change(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let params: DidChangeTextDocumentParams = read(params)?;
    let uri = params.text_document.uri;
    let before = session.document(&uri);
    let before = before.ok_or_else(|| Fail::BadParams(format!("{uri} is not open")))?;
    let encoding = session.client().encoding;
    session.put(before.edited(params.text_document.version, &params.content_changes, encoding));
    Ok(())
}

fn did_close(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let params: DidCloseTextDocumentParams = read(params)?;
    session.close_document(&params.text_document.uri);
    Ok(())
}

fn read<T: DeserializeOwned>(params: Value) -> Result<T, Fail> {
    serde_json::from_value(params).map_err(|error| Fail::BadParams(error.to_string()))
}
