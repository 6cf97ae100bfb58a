//! Messages from the server to the client.

use std::collections::BTreeMap;
use std::sync::Mutex;
use std::sync::atomic::{AtomicI64, Ordering};

use futures::StreamExt;
use futures::channel::mpsc::{self, UnboundedReceiver, UnboundedSender};
use tokio::sync::oneshot;
use tower_lsp::jsonrpc::{Id, Request, Response};
use tower_lsp::lsp_types::{notification, request};
use tower_lsp::{Loopback, jsonrpc};

use super::locked;
use crate::error::Fail;

/// The way out. Sending never waits: a message is queued and written in the
/// order in which it was sent.
pub(crate) struct Outbox {
    sender: UnboundedSender<Request>,
    last_id: AtomicI64,
    waiting: Mutex<BTreeMap<i64, oneshot::Sender<Response>>>,
}

/// The framework's end of the outbox.
pub(super) struct Wire {
    requests: UnboundedReceiver<Request>,
    answers: UnboundedSender<Response>,
}

impl Loopback for Wire {
    type RequestStream = UnboundedReceiver<Request>;
    type ResponseSink = UnboundedSender<Response>;

    fn split(self) -> (Self::RequestStream, Self::ResponseSink) {
        (self.requests, self.answers)
    }
}

impl Outbox {
    /// An outbox, the framework's end of it, and the stream of the client's
    /// answers, which [`Outbox::settle`] takes.
    pub(super) fn new() -> (Self, Wire, UnboundedReceiver<Response>) {
        let (sender, requests) = mpsc::unbounded();
        let (answers, settled) = mpsc::unbounded();
        let outbox = Outbox { sender, last_id: AtomicI64::new(0), waiting: Mutex::default() };
        (outbox, Wire { requests, answers }, settled)
    }

    /// Sends a notification.
    pub(crate) fn notify<N: notification::Notification>(&self, params: N::Params) {
        match serde_json::to_value(params) {
            Ok(params) => self.send(Request::build(N::METHOD).params(params).finish()),
            Err(error) => tracing::error!("{}: {error}", N::METHOD),
        }
    }

    /// Sends a request and waits for the answer. A refusal by the client is
    /// an `Err`, not an end of the session.
    pub(crate) async fn request<R: request::Request>(
        &self,
        params: R::Params,
    ) -> Result<R::Result, Fail> {
        let params = serde_json::to_value(params).map_err(|error| {
            tracing::error!("{}: {error}", R::METHOD);
            Fail::Internal
        })?;
        let id = self.last_id.fetch_add(1, Ordering::Relaxed) + 1;
        let (answer, answered) = oneshot::channel();
        locked(&self.waiting).insert(id, answer);
        self.send(Request::build(R::METHOD).id(id).params(params).finish());
        let response = answered.await.map_err(|_| Fail::Cancelled)?;
        let refused = |error: jsonrpc::Error| {
            Fail::Refused(format!("the editor refused {}: {}", R::METHOD, error.message))
        };
        let value = response.into_parts().1.map_err(refused)?;
        serde_json::from_value(value).map_err(|error| {
            Fail::Refused(format!("the editor's answer to {} is malformed: {error}", R::METHOD))
        })
    }

    /// Hands the client's answers to those who wait for them, until the
    /// stream ends.
    pub(super) async fn settle(&self, mut answers: UnboundedReceiver<Response>) {
        while let Some(response) = answers.next().await {
            let waiting = match response.id() {
                Id::Number(id) => locked(&self.waiting).remove(id),
                _ => None,
            };
            match waiting {
                // The asker may have gone; then nobody misses the answer.
                Some(waiting) => drop(waiting.send(response)),
                None => tracing::warn!("an answer to no request of ours: {}", response.id()),
            }
        }
        locked(&self.waiting).clear();
    }

    fn send(&self, message: Request) {
        // Fails only once the session has ended: nobody is there to read it.
        let _ = self.sender.unbounded_send(message);
    }
}
