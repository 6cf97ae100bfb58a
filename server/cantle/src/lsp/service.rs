//! Takes messages one after another and decides who answers.
//!
//! Everything that orders the session happens inside [`Service::call`],
//! which runs to its end before the next message is looked at: life cycle,
//! changes of texts, cancellations, and the snapshot each request works on.

use std::convert::Infallible;
use std::sync::Arc;
use std::task::{Context as TaskContext, Poll};

use futures::FutureExt;
use futures::channel::mpsc::UnboundedReceiver;
use futures::future::{self, BoxFuture};
use serde_json::Value;
use tower_lsp::jsonrpc::{self, Id, Request, Response};

use super::intake::REFUSED;
use super::lanes::contained;
use super::outbox::{Outbox, Wire};
use super::session::Phase;
use super::{ClientProfile, Session};
use crate::config::Settings;
use crate::error::Fail;
use crate::notifications::{self, Notice};
use crate::requests::{self, Route};

/// The server as the framework sees it.
pub(super) struct Service {
    session: Arc<Session>,
}

type Answer = BoxFuture<'static, Result<Option<Response>, Infallible>>;

impl Service {
    /// A new session, the framework's end of its outbox, and the stream of
    /// the client's answers.
    pub(super) fn new() -> (Self, Wire, UnboundedReceiver<Response>) {
        let (outbox, wire, answers) = Outbox::new();
        (Service { session: Arc::new(Session::new(outbox)) }, wire, answers)
    }

    pub(super) fn session(&self) -> Arc<Session> {
        self.session.clone()
    }

    /// Serves a notification.
    fn notice(&self, method: &str, params: Value) {
        match (method, self.session.phase()) {
            ("$/cancelRequest", _) => {
                if let Some(id) = params.get("id").and_then(read_id) {
                    self.session.pending.cancel(&id);
                }
            }
            (_, Phase::Ready) => {
                let notice = notifications::NOTICES.iter().find(|notice| notice.method == method);
                if let Some(Notice { receive, .. }) = notice
                    && let Err(fail) = receive(&self.session, params)
                {
                    tracing::warn!("{method}: {fail}");
                }
            }
            // Before `initialize` and after `shutdown` nothing counts but `exit`,
            // which has ended the input already.
            _ => {}
        }
    }

    /// Serves a request: an answer now or an answer later.
    fn request(&self, id: &Id, method: &str, params: Value) -> Result<Answer, Fail> {
        let answered = |value| Ok(ready(Some(Response::from_ok(id.clone(), value))));
        match (self.session.phase(), method) {
            (Phase::New, "initialize") => answered(self.initialize(&params)?),
            (Phase::New, _) => Err(Fail::NotInitialised),
            (Phase::Ready, "initialize") => {
                Err(Fail::InvalidRequest("the session is initialised already".into()))
            }
            (Phase::Ready, "shutdown") => {
                self.session.shut_down();
                answered(Value::Null)
            }
            (Phase::Ready, _) => {
                let route = requests::ROUTES.iter().find(|route| route.method == method);
                let route = route.ok_or_else(|| Fail::UnknownMethod(method.into()))?;
                self.dispatch(route, id, params)
            }
            (Phase::ShutDown, _) => {
                Err(Fail::InvalidRequest("the session has been shut down".into()))
            }
        }
    }

    fn initialize(&self, params: &Value) -> Result<Value, Fail> {
        if !params.is_object() {
            return Err(Fail::BadParams("initialize takes an object".into()));
        }
        let client = ClientProfile::read(params);
        let answer = requests::initialize_result(&client);
        let settings = Settings::read(&params["initializationOptions"]);
        self.session.begin(client, settings);
        serde_json::to_value(answer).map_err(|error| {
            tracing::error!("initialize: {error}");
            Fail::Internal
        })
    }

    /// Hands a request to its lane; the answer is whatever comes first, the
    /// handler's result or the client's cancellation.
    fn dispatch(&self, route: &'static Route, id: &Id, params: Value) -> Result<Answer, Fail> {
        let context = self.session.context();
        let ticket = self.session.pending.enter(id, &context.budget);
        let mut ticket =
            ticket.ok_or_else(|| Fail::InvalidRequest("this id is in use".to_owned()))?;
        let session = self.session.clone();
        let id = id.clone();
        Ok(async move {
            let work = session.lanes.run(route.lane, move || (route.answer)(&context, params));
            let result = tokio::select! {
                biased;
                _ = &mut ticket.cancelled => Err(Fail::Cancelled),
                result = work => result.and_then(|result| result),
            };
            drop(ticket);
            Ok(Some(respond(id, result)))
        }
        .boxed())
    }
}

impl tower::Service<Request> for Service {
    type Response = Option<Response>;
    type Error = Infallible;
    type Future = Answer;

    fn poll_ready(&mut self, _: &mut TaskContext<'_>) -> Poll<Result<(), Infallible>> {
        Poll::Ready(Ok(()))
    }

    fn call(&mut self, request: Request) -> Answer {
        let (method, id, params) = request.into_parts();
        let params = params.unwrap_or(Value::Null);
        if method == REFUSED {
            return ready(id.map(|id| Response::from_error(id, refusal(&params))));
        }
        match id {
            Some(id) => contained(|| self.request(&id, &method, params))
                .and_then(|answer| answer)
                .unwrap_or_else(|fail| ready(Some(respond(id, Err(fail))))),
            None => {
                // A panic has been logged; a notification has no answer.
                let _ = contained(|| self.notice(&method, params));
                ready(None)
            }
        }
    }
}

fn ready(response: Option<Response>) -> Answer {
    future::ready(Ok(response)).boxed()
}

fn respond(id: Id, result: Result<Value, Fail>) -> Response {
    Response::from_parts(id, result.map_err(|fail| jsonrpc::Error::from(&fail)))
}

/// The error that the intake found.
fn refusal(params: &Value) -> jsonrpc::Error {
    let code = params["code"].as_i64().unwrap_or(jsonrpc::ErrorCode::InvalidRequest.code());
    let message = params["message"].as_str().unwrap_or("refused").to_owned();
    jsonrpc::Error { code: code.into(), message: message.into(), data: None }
}

fn read_id(value: &Value) -> Option<Id> {
    match value {
        Value::String(text) => Some(Id::String(text.clone())),
        other => other.as_i64().map(Id::Number),
    }
}
