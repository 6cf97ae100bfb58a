//! The notifications we act upon, each in the order in which it arrives.
//!
//! A notice runs to its end before the next message is looked at, so it only
//! stores what the client says and starts what follows from it.

use std::sync::Arc;

use serde::de::DeserializeOwned;
use serde_json::Value;
use tower_lsp::lsp_types::notification::{
    DidChangeConfiguration, DidChangeTextDocument, DidChangeWatchedFiles, DidCloseTextDocument,
    DidOpenTextDocument, DidSaveTextDocument, Notification,
};
use tower_lsp::lsp_types::{
    DidChangeConfigurationParams, DidChangeTextDocumentParams, DidChangeWatchedFilesParams,
    DidCloseTextDocumentParams, DidOpenTextDocumentParams, DidSaveTextDocumentParams,
};

use crate::config::Settings;
use crate::error::Fail;
use crate::lsp::{Session, edited, path_of};

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
    Notice { method: DidSaveTextDocument::METHOD, receive: did_save },
    Notice { method: DidChangeWatchedFiles::METHOD, receive: did_change_files },
    Notice { method: DidChangeConfiguration::METHOD, receive: did_change_settings },
];

fn did_open(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let DidOpenTextDocumentParams { text_document: item } = read(params)?;
    let text = ropey::Rope::from_str(&item.text);
    session.put(item.uri, item.version, text);
    Ok(())
}

fn did_change(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let params: DidChangeTextDocumentParams = read(params)?;
    let uri = params.text_document.uri;
    let before = session.document(&uri);
    let before = before.ok_or_else(|| Fail::BadParams(format!("{uri} is not open")))?;
    let encoding = session.client().encoding;
    let text = edited(&before.text, &params.content_changes, encoding);
    session.put(uri, params.text_document.version, text);
    Ok(())
}

fn did_close(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let params: DidCloseTextDocumentParams = read(params)?;
    session.close_document(&params.text_document.uri);
    Ok(())
}

/// A saved file may be an include that was missing.
fn did_save(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let params: DidSaveTextDocumentParams = read(params)?;
    let path = path_of(&params.text_document.uri);
    session.renew(|document| document.path != path && document.depends_on(&path));
    Ok(())
}

fn did_change_files(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let params: DidChangeWatchedFilesParams = read(params)?;
    let paths: Vec<_> = params.changes.iter().map(|change| path_of(&change.uri)).collect();
    session.renew(|document| paths.iter().any(|path| document.depends_on(path)));
    Ok(())
}

fn did_change_settings(session: &Arc<Session>, params: Value) -> Result<(), Fail> {
    let params: DidChangeConfigurationParams = read(params)?;
    session.set(Settings::read(&params.settings));
    Ok(())
}

fn read<T: DeserializeOwned>(params: Value) -> Result<T, Fail> {
    serde_json::from_value(params).map_err(|error| Fail::BadParams(error.to_string()))
}
