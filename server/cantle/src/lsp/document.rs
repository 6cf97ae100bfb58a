//! One state of one open text, and what is known about it.

use std::sync::{Arc, Mutex, Weak};

use operator::Budget;
use ropey::Rope;
use tower_lsp::lsp_types::{TextDocumentContentChangeEvent, Url};

use super::locked;
use crate::convert::{self, Encoding};

/// An open text at one version. Immutable: an edit makes a new one.
#[derive(Debug)]
pub(crate) struct Document {
    /// The client's name for it.
    pub uri: Url,
    /// The client's number of this state.
    pub version: i32,
    /// The text.
    pub text: Rope,
    live: Mutex<Live>,
}

/// The computations that speak of this state of the text.
#[derive(Debug, Default)]
struct Live {
    ended: bool,
    budgets: Vec<Weak<Budget>>,
}

impl Document {
    /// A text as the client opened it.
    pub(crate) fn new(uri: Url, version: i32, text: Rope) -> Self {
        Document { uri, version, text, live: Mutex::default() }
    }

    /// The text after `changes`, which apply one after another.
    pub(crate) fn edited(
        &self,
        version: i32,
        changes: &[TextDocumentContentChangeEvent],
        encoding: Encoding,
    ) -> Self {
        let mut text = self.text.clone();
        for change in changes {
            apply(&mut text, change, encoding);
        }
        Document::new(self.uri.clone(), version, text)
    }

    /// Ties a computation to this state of the text: it is stopped when the
    /// text moves on, at once if it already has.
    pub(crate) fn bind(&self, budget: &Arc<Budget>) {
        let mut live = locked(&self.live);
        if live.ended {
            budget.stop();
            return;
        }
        live.budgets.retain(|budget| budget.strong_count() > 0);
        live.budgets.push(Arc::downgrade(budget));
    }

    /// Stops all computations that speak of this state.
    pub(crate) fn end(&self) {
        let budgets = {
            let mut live = locked(&self.live);
            live.ended = true;
            std::mem::take(&mut live.budgets)
        };
        budgets.iter().filter_map(Weak::upgrade).for_each(|budget| budget.stop());
    }
}

/// Applies one change. `rangeLength` is ignored: clients count it in
/// different units and the range says everything.
fn apply(text: &mut Rope, change: &TextDocumentContentChangeEvent, encoding: Encoding) {
    let Some(range) = change.range else {
        *text = Rope::from_str(&change.text);
        return;
    };
    let range = convert::text_range(text, range, encoding);
    let start = text.byte_to_char(range.start().into());
    let end = text.byte_to_char(range.end().into());
    text.remove(start..end);
    text.insert(start, &change.text);
}
