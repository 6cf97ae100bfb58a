//! Diagnostics: after each edit, in two steps.
//!
//! Names and syntax are published at once, what needs arithmetic when it is
//! ready; both with the version they speak of, and neither once the text has
//! moved on.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use operator::Budget;
use tower_lsp::lsp_types::notification::PublishDiagnostics;
use tower_lsp::lsp_types::{Diagnostic, DiagnosticSeverity, PublishDiagnosticsParams, Range, Url};

use super::session::World;
use super::{Document, Lane, Session, locked};
use crate::convert;
use crate::error::Fail;

/// Starts the checks of a new state of a text.
pub(super) fn start(session: &Arc<Session>, document: Arc<Document>) {
    let session = session.clone();
    let budget = Arc::new(session.settings().budget());
    document.bind(&budget);
    tokio::spawn(async move {
        for (lane, check) in
            [(Lane::Names, names as fn(&Document, &Budget)), (Lane::Background, operators)]
        {
            let (subject, bounds) = (document.clone(), budget.clone());
            let done = session.lanes.run(lane, move || {
                // Long superseded, perhaps, by the time the lane is free.
                if !bounds.is_stopped() {
                    check(&subject, &bounds);
                }
            });
            match done.await {
                Ok(()) if !budget.is_stopped() => publish(&session, &document),
                Err(Fail::Internal) => return confess(&session, &document),
                _ => return,
            }
        }
    });
}

fn names(document: &Document, _: &Budget) {
    document.names.get_or_init(|| crate::checks::names(document.program()));
}

fn operators(document: &Document, budget: &Budget) {
    let found = crate::checks::operators(document.program(), budget);
    if !budget.is_stopped() {
        // Only this check fills it, and once.
        let _ = document.operators.set(found);
    }
}

/// What was last said about included files, by the text that includes them.
#[derive(Debug, Default)]
pub(super) struct Foreign(BTreeMap<Url, ByFile>);

type ByFile = BTreeMap<Url, Vec<Diagnostic>>;

/// Publishes what is known, unless the text has moved on. What is wrong with
/// an included file is said there.
fn publish(session: &Session, document: &Arc<Document>) {
    let client = session.client();
    let mut by_file = ByFile::new();
    by_file.insert(document.uri.clone(), Vec::new());
    for finding in document.findings() {
        if let Some((uri, diagnostic)) = convert::diagnostic(document, finding, &client) {
            by_file.entry(uri).or_default().push(diagnostic);
        }
    }
    send(session, document, by_file);
}

/// Says that we broke down over this text; the others are still served.
fn confess(session: &Session, document: &Arc<Document>) {
    let diagnostic = Diagnostic {
        range: Range::default(),
        severity: Some(DiagnosticSeverity::ERROR),
        source: Some(convert::SOURCE.into()),
        message: "cantle failed on this text by a defect of its own; \
                  nothing is known about it until it changes"
            .into(),
        ..Diagnostic::default()
    };
    send(session, document, ByFile::from([(document.uri.clone(), vec![diagnostic])]));
}

fn send(session: &Session, document: &Arc<Document>, mut by_file: ByFile) {
    session.while_newest(document, |world| {
        let own = by_file.remove(&document.uri).unwrap_or_default();
        notify(session, &document.uri, Some(document.version), own);
        tell_foreign(session, world, &document.uri, by_file);
    });
}

/// Replaces what one text said about its includes, and publishes the union of
/// what all texts say about each of them. Open ones speak for themselves.
fn tell_foreign(session: &Session, world: &World, includer: &Url, by_file: ByFile) {
    let mut foreign = locked(&session.foreign);
    let mut touched: BTreeSet<Url> = by_file.keys().cloned().collect();
    touched.extend(foreign.0.remove(includer).into_iter().flat_map(BTreeMap::into_keys));
    if !by_file.is_empty() {
        foreign.0.insert(includer.clone(), by_file);
    }
    for uri in touched {
        // Made from our own name of the file: no need to ask the disk again.
        let path = uri.to_file_path().unwrap_or_default();
        let path = path.to_string_lossy();
        if world.documents.values().any(|document| *document.path == *path) {
            continue;
        }
        let said = foreign.0.values().filter_map(|by_file| by_file.get(&uri));
        let mut union: Vec<Diagnostic> = Vec::new();
        for diagnostic in said.flatten() {
            if !union.contains(diagnostic) {
                union.push(diagnostic.clone());
            }
        }
        notify(session, &uri, None, union);
    }
}

/// Takes back what was said about a text that is no longer open, and what it
/// said about its includes.
pub(super) fn clear(session: &Session, world: &World, uri: &Url) {
    notify(session, uri, None, Vec::new());
    tell_foreign(session, world, uri, ByFile::new());
}

fn notify(session: &Session, uri: &Url, version: Option<i32>, diagnostics: Vec<Diagnostic>) {
    let params = PublishDiagnosticsParams { uri: uri.clone(), version, diagnostics };
    session.outbox.notify::<PublishDiagnostics>(params);
}
