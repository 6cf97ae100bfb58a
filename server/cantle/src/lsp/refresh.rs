//! Diagnostics: after each edit, in two steps.
//!
//! Names and syntax are published at once, what needs arithmetic when it is
//! ready; both with the version they speak of, and neither once the text has
//! moved on.

use std::sync::Arc;

use operator::Budget;
use program::Finding;
use tower_lsp::lsp_types::notification::PublishDiagnostics;
use tower_lsp::lsp_types::{Diagnostic, DiagnosticSeverity, PublishDiagnosticsParams, Range, Url};

use super::{Document, Lane, Session};
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

fn names(document: &Document, budget: &Budget) {
    document.names.get_or_init(|| crate::checks::names(document.program(), budget));
}

fn operators(document: &Document, budget: &Budget) {
    let found = crate::checks::operators(document.program(), budget);
    if !budget.is_stopped() {
        // Only this check fills it, and once.
        let _ = document.operators.set(found);
    }
}

/// Publishes what is known, unless the text has moved on.
fn publish(session: &Session, document: &Arc<Document>) {
    let client = session.client();
    let known: Vec<&Finding> = document.findings().collect();
    let diagnostics = known
        .into_iter()
        .filter_map(|finding| convert::diagnostic(document, finding, &client))
        .collect();
    send(session, document, diagnostics);
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
    send(session, document, vec![diagnostic]);
}

fn send(session: &Session, document: &Arc<Document>, diagnostics: Vec<Diagnostic>) {
    session.while_newest(document, || {
        let (uri, version) = (document.uri.clone(), Some(document.version));
        let params = PublishDiagnosticsParams { uri, version, diagnostics };
        session.outbox.notify::<PublishDiagnostics>(params);
    });
}

/// Takes back what was said about a text that is no longer open.
pub(super) fn clear(session: &Session, uri: &Url) {
    let params =
        PublishDiagnosticsParams { uri: uri.clone(), version: None, diagnostics: Vec::new() };
    session.outbox.notify::<PublishDiagnostics>(params);
}
