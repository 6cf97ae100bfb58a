//! The state of one session and the snapshots that handlers see.

use std::collections::BTreeMap;
use std::sync::{Arc, Mutex};

use encode::Prefer;
use grammar::TextSize;
use operator::{Budget, Matrix};
use ropey::Rope;
use tower_lsp::lsp_types::{TextDocumentPositionParams, Url};

use super::document::path_of;
use super::lanes::Lanes;
use super::memo::Memo;
use super::outbox::Outbox;
use super::pending::Pending;
use super::refresh::Foreign;
use super::{ClientProfile, Document, locked, refresh};
use crate::config::Settings;
use crate::convert;
use crate::disk::Disk;
use crate::error::Fail;

/// One client's session. Shared by all handlers; what changes is behind one
/// lock that is held for moments only.
pub(crate) struct Session {
    /// The way to the client.
    pub outbox: Outbox,
    /// Where work runs.
    pub lanes: Lanes,
    /// Candidates by what they were made for.
    pub outcomes: Memo<Encoding, encode::Outcome>,
    pub(super) pending: Pending,
    pub(super) foreign: Mutex<Foreign>,
    state: Mutex<State>,
}

/// What candidates depend on: matrix, tolerance, preference, size limit.
pub(crate) type Encoding = (Arc<Matrix>, f64, Prefer, usize);

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
    /// The open texts as includes see them, by our name of the file.
    open: Arc<BTreeMap<String, Rope>>,
}

impl State {
    /// The files that an analysis started now may read.
    fn disk(&self) -> Disk {
        let search_path = self.world.settings.include_path.clone();
        Disk { search_path, open: self.open.clone(), ..Disk::default() }
    }
}

/// Everything a handler may read, at one moment.
#[derive(Debug, Clone, Default)]
pub(crate) struct World {
    /// What the client can do.
    pub client: Arc<ClientProfile>,
    /// What the user has set.
    pub settings: Arc<Settings>,
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

    /// The open text and the offset in it that a request speaks of.
    pub(crate) fn place(
        &self,
        params: &TextDocumentPositionParams,
    ) -> Result<(Arc<Document>, TextSize), Fail> {
        let document = self.document(&params.text_document.uri)?;
        let encoding = self.world.client.encoding;
        let offset = convert::offset(&document.text, params.position, encoding);
        let offset = TextSize::new(u32::try_from(offset).unwrap_or(u32::MAX));
        Ok((document, offset))
    }
}

impl Session {
    pub(super) fn new(outbox: Outbox) -> Self {
        Session {
            outbox,
            lanes: Lanes::default(),
            outcomes: Memo::default(),
            pending: Pending::default(),
            foreign: Mutex::default(),
            state: Mutex::default(),
        }
    }

    /// Everything there is to read, at this moment.
    fn world(&self) -> World {
        locked(&self.state).world.clone()
    }

    /// What a request that arrives now sees.
    pub(super) fn context(self: &Arc<Self>) -> Context {
        let world = self.world();
        let budget = Arc::new(world.settings.budget());
        Context { world, budget, session: self.clone() }
    }

    /// Where the session is.
    pub(super) fn phase(&self) -> Phase {
        locked(&self.state).phase
    }

    /// Begins serving a client.
    pub(super) fn begin(&self, client: ClientProfile, settings: Settings) {
        let mut state = locked(&self.state);
        state.world.settings = Arc::new(settings);
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

    /// The settings in force.
    pub(crate) fn settings(&self) -> Arc<Settings> {
        locked(&self.state).world.settings.clone()
    }

    /// Puts other settings in force; every text is checked again by them.
    pub(crate) fn set(self: &Arc<Self>, settings: Settings) {
        locked(&self.state).world.settings = Arc::new(settings);
        self.renew(|_| true);
    }

    /// Puts a new state of a text in place of the one before, whose
    /// computations end, and starts its checks and those of the texts that
    /// include it.
    pub(crate) fn put(self: &Arc<Self>, uri: Url, version: i32, text: Rope) {
        let path = match self.document(&uri) {
            Some(before) => before.path.clone(),
            None => path_of(&uri),
        };
        let document = {
            let mut state = locked(&self.state);
            Arc::make_mut(&mut state.open).insert(path.to_string(), text.clone());
            Arc::new(Document::new(uri.clone(), path.clone(), version, text, state.disk()))
        };
        self.replace(document);
        self.renew(|other| other.uri != uri && other.depends_on(&path));
    }

    /// Makes a state the newest one and starts its checks.
    fn replace(self: &Arc<Self>, document: Arc<Document>) {
        let before = {
            let mut state = locked(&self.state);
            let documents = Arc::make_mut(&mut state.world.documents);
            documents.insert(document.uri.clone(), document.clone())
        };
        if let Some(before) = before {
            before.end();
        }
        refresh::start(self, document);
    }

    /// Looks anew at the texts that `which` picks: what they were read
    /// together with has changed.
    pub(crate) fn renew(self: &Arc<Self>, which: impl Fn(&Document) -> bool) {
        let (documents, disk) = {
            let state = locked(&self.state);
            (state.world.documents.clone(), state.disk())
        };
        for old in documents.values().filter(|document| which(document)) {
            let (uri, path, text) = (old.uri.clone(), old.path.clone(), old.text.clone());
            self.replace(Arc::new(Document::new(uri, path, old.version, text, disk.clone())));
        }
    }

    /// The newest state of an open text.
    pub(crate) fn document(&self, uri: &Url) -> Option<Arc<Document>> {
        locked(&self.state).world.documents.get(uri).cloned()
    }

    /// Forgets a text that the client has closed.
    pub(crate) fn close_document(self: &Arc<Self>, uri: &Url) {
        let before = {
            let mut state = locked(&self.state);
            let before = Arc::make_mut(&mut state.world.documents).remove(uri);
            if let Some(before) = &before {
                Arc::make_mut(&mut state.open).remove(&*before.path);
            }
            before
        };
        if let Some(before) = before {
            before.end();
            refresh::clear(self, &self.world(), uri);
            self.renew(|other| other.depends_on(&before.path));
        }
    }

    /// Runs `act` if `document` still is the newest state of its text, and
    /// keeps it newest meanwhile: nothing stale is ever published.
    pub(crate) fn while_newest(&self, document: &Arc<Document>, act: impl FnOnce(&World)) {
        let state = locked(&self.state);
        let newest = state.world.documents.get(&document.uri);
        if newest.is_some_and(|newest| Arc::ptr_eq(newest, document)) {
            act(&state.world);
        }
    }

    /// Stops all computations; nobody waits for them any more.
    pub(super) fn close(&self) {
        self.pending.close();
        let documents = locked(&self.state).world.documents.clone();
        documents.values().for_each(|document| document.end());
    }
}
