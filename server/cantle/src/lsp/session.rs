//! The state of one session and the snapshots that handlers see.

use std::collections::BTreeMap;
use std::sync::{Arc, Mutex};

use operator::Budget;
use tower_lsp::lsp_types::Url;

use super::lanes::Lanes;
use super::outbox::Outbox;
use super::pending::Pending;
use super::{ClientProfile, Document, locked};
use crate::error::Fail;

/// One client's session. Shared by all handlers; what changes is behind one
/// lock that is held for moments only.
pub(crate) struct Session {
    /// The way to the client.
    pub outbox: Outbox,
    /// Where work runs.
    pub lanes: Lanes,
    pub(super) pending: Pending,
    state: Mutex<State>,
}

/// Where the session is in the protocol's life cycle.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub(crate) enum Phase {
    /// Before `initialize`.
    #[default]
    New,
    /// From the answer to `initialize` on.
    Ready,
    /// From `shutdown` on.
    ShutDown,
}

#[derive(Debug, Default)]
struct State {
    phase: Phase,
    world: World,
}

/// Everything a handler may read, at one moment.
#[derive(Debug, Clone, Default)]
pub(crate) struct World {
    /// What the client can do.
    pub client: Arc<ClientProfile>,
    /// The open texts.
    pub documents: Arc<BTreeMap<Url, Arc<Document>>>,
}

/// What one request sees: the world when it arrived, and the budget of its
/// own arithmetic, which ends when it is cancelled or its text moves on.
pub(crate) struct Context {
    /// The world when the request arrived.
    pub world: World,
    /// Bounds this request's arithmetic.
    pub budget: Arc<Budget>,
    /// For what outlives the request: messages to the client.
    pub session: Arc<Session>,
}

impl Context {
    /// The open text of that name, this request's arithmetic tied to it.
    pub(crate) fn document(&self, uri: &Url) -> Result<Arc<Document>, Fail> {
        let document = self.world.documents.get(uri).cloned();
        let document = document.ok_or_else(|| Fail::BadParams(format!("{uri} is not open")))?;
        document.bind(&self.budget);
        Ok(document)
    }
}

impl Session {
    pub(super) fn new(outbox: Outbox) -> Self {
        Session {
            outbox,
            lanes: Lanes::default(),
            pending: Pending::default(),
            state: Mutex::default(),
        }
    }

    /// What a request that arrives now sees.
    pub(super) fn context(self: &Arc<Self>) -> Context {
        let world = locked(&self.state).world.clone();
        Context { world, budget: Arc::default(), session: self.clone() }
    }

    /// Where the session is.
    pub(super) fn phase(&self) -> Phase {
        locked(&self.state).phase
    }

    /// Begins serving a client.
    pub(super) fn begin(&self, client: ClientProfile) {
        let mut state = locked(&self.state);
        state.phase = Phase::Ready;
        state.world.client = Arc::new(client);
    }

    /// From here on only `exit` is served.
    pub(super) fn shut_down(&self) {
        locked(&self.state).phase = Phase::ShutDown;
    }

    /// Whether the client has shut the session down in order.
    pub(super) fn was_shut_down(&self) -> bool {
        self.phase() == Phase::ShutDown
    }

    /// The client's capabilities.
    pub(crate) fn client(&self) -> Arc<ClientProfile> {
        locked(&self.state).world.client.clone()
    }

    /// Puts a new state of a text in place of the one before, whose
    /// computations end.
    pub(crate) fn put(&self, document: Document) {
        let document = Arc::new(document);
        let before = {
            let mut state = locked(&self.state);
            let documents = Arc::make_mut(&mut state.world.documents);
            documents.insert(document.uri.clone(), document)
        };
        if let Some(before) = before {
            before.end();
        }
    }

    /// The newest state of an open text.
    pub(crate) fn document(&self, uri: &Url) -> Option<Arc<Document>> {
        locked(&self.state).world.documents.get(uri).cloned()
    }

    /// Forgets a text that the client has closed.
    pub(crate) fn close_document(&self, uri: &Url) {
        let before = {
            let mut state = locked(&self.state);
            Arc::make_mut(&mut state.world.documents).remove(uri)
        };
        if let Some(before) = before {
            before.end();
        }
    }

    /// Runs `act` if `document` still is the newest state of its text, and
    /// keeps it newest meanwhile: nothing stale is ever published.
    pub(crate) fn while_newest(&self, document: &Arc<Document>, act: impl FnOnce()) {
        let state = locked(&self.state);
        let newest = state.world.documents.get(&document.uri);
        if newest.is_some_and(|newest| Arc::ptr_eq(newest, document)) {
            act();
        }
    }

    /// Stops all computations; nobody waits for them any more.
    pub(super) fn close(&self) {
        self.pending.close();
        let documents = locked(&self.state).world.documents.clone();
        documents.values().for_each(|document| document.end());
    }
}
