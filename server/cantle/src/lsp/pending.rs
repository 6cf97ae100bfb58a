//! Requests that have not been answered, so that they can be cancelled.

use std::collections::HashMap;
use std::sync::{Arc, Mutex};

use operator::Budget;
use tokio::sync::oneshot;
use tower_lsp::jsonrpc::Id;

use super::locked;

/// The requests in flight, by id.
#[derive(Debug, Clone, Default)]
pub(super) struct Pending(Arc<Mutex<Table>>);

#[derive(Debug, Default)]
struct Table {
    closed: bool,
    entries: HashMap<Id, Entry>,
}

#[derive(Debug)]
struct Entry {
    budget: Budget,
    cancel: oneshot::Sender<()>,
}

/// One request's place in the table; leaves it when dropped.
#[derive(Debug)]
pub(super) struct Ticket {
    table: Pending,
    id: Id,
    /// Resolves when the request is cancelled.
    pub cancelled: oneshot::Receiver<()>,
}

impl Pending {
    /// Enters a request whose arithmetic runs under `budget`; `None` if its
    /// id is already in flight.
    pub(super) fn enter(&self, id: &Id, budget: &Budget) -> Option<Ticket> {
        let (cancel, cancelled) = oneshot::channel();
        let mut table = locked(&self.0);
        if table.entries.contains_key(id) {
            return None;
        }
        let entry = Entry { budget: budget.clone(), cancel };
        if table.closed {
            entry.stop();
        } else {
            table.entries.insert(id.clone(), entry);
        }
        Some(Ticket { table: self.clone(), id: id.clone(), cancelled })
    }

    /// Cancels one request; nothing happens if it was answered already.
    pub(super) fn cancel(&self, id: &Id) {
        let entry = locked(&self.0).entries.remove(id);
        if let Some(entry) = entry {
            entry.stop();
        }
    }

    /// Cancels all requests, those that are still to come included.
    pub(super) fn close(&self) {
        let entries = {
            let mut table = locked(&self.0);
            table.closed = true;
            std::mem::take(&mut table.entries)
        };
        entries.into_values().for_each(Entry::stop);
    }
}

impl Entry {
    fn stop(self) {
        self.budget.stop();
        // The request may just have been answered; then nobody listens.
        let _ = self.cancel.send(());
    }
}

impl Drop for Ticket {
    fn drop(&mut self) {
        locked(&self.table.0).entries.remove(&self.id);
    }
}
