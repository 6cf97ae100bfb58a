//! What the parser says about the tokens: a flat list of nodes opening and
//! closing around them.

use crate::kind::SyntaxKind;
use crate::parser::Parser;

/// One step of building the tree.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Event {
    /// A node opens. Without a kind it was given up: its children belong to
    /// the node around it. `parent` is the distance to a later `Open` that
    /// nevertheless opens before this one.
    Open { kind: Option<SyntaxKind>, parent: Option<u32> },
    /// The innermost open node closes.
    Close,
    /// The next token that is not skipped.
    Token,
}

/// A node that is open.
#[must_use = "a node must be completed or given up"]
pub(crate) struct Marker {
    index: usize,
}

/// A node that is closed.
#[derive(Clone, Copy)]
pub(crate) struct Completed {
    index: usize,
}

impl Marker {
    /// The marker of the `Open` event at this index.
    pub(crate) fn new(index: usize) -> Self {
        Self { index }
    }

    /// Closes the node and says what it was.
    pub(crate) fn complete(self, p: &mut Parser<'_>, kind: SyntaxKind) -> Completed {
        if let Some(Event::Open { kind: slot, .. }) = p.events.get_mut(self.index) {
            *slot = Some(kind);
        }
        p.events.push(Event::Close);
        Completed { index: self.index }
    }

    /// Gives the node up: its children go to the node around it.
    pub(crate) fn abandon(self, p: &mut Parser<'_>) {
        if self.index + 1 == p.events.len() {
            p.events.pop();
        }
    }
}

impl Completed {
    /// Opens a node around this one.
    pub(crate) fn precede(self, p: &mut Parser<'_>) -> Marker {
        let marker = p.start();
        if let Some(Event::Open { parent, .. }) = p.events.get_mut(self.index) {
            *parent = Some((marker.index - self.index) as u32);
        }
        marker
    }

    /// What the node was completed as.
    pub(crate) fn kind(self, p: &Parser<'_>) -> Option<SyntaxKind> {
        match p.events.get(self.index) {
            Some(Event::Open { kind, .. }) => *kind,
            _ => None,
        }
    }
}
