//! The result of parsing: the tree and the errors.

use crate::kind::SyntaxNode;
use crate::nodes::Root;
use rowan::{GreenNode, TextRange, TextSize};
use std::sync::Arc;

/// Something the text says that the language does not allow.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct SyntaxError {
    /// The bytes of the file that the message is about; empty where something
    /// is missing.
    pub range: TextRange,
    /// What is wrong, in words for the reader of the file.
    pub message: String,
    /// The insertion that mends it, where there is one right answer.
    pub fix: Option<Insertion>,
}

/// A piece of text that is missing.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Insertion {
    /// Where it belongs.
    pub offset: TextSize,
    /// What to insert.
    pub text: String,
}

/// A parsed file. Clones share the tree, and any thread may hold one; the
/// nodes handed out by [`Parse::syntax`] stay on their thread.
#[derive(Clone, Debug)]
pub struct Parse {
    green: GreenNode,
    errors: Arc<[SyntaxError]>,
}

impl Parse {
    /// The root of the tree. Its text is the text that was parsed.
    pub fn syntax(&self) -> SyntaxNode {
        SyntaxNode::new_root(self.green.clone())
    }

    /// The typed view of the root.
    pub fn root(&self) -> Root {
        Root::new(self.syntax())
    }

    /// The shared tree itself.
    pub fn green(&self) -> &GreenNode {
        &self.green
    }

    /// What is wrong with the text, in its order.
    pub fn errors(&self) -> &[SyntaxError] {
        &self.errors
    }
}

/// Builds the tree of a text.
pub(crate) fn build(text: &str) -> Parse {
    let mut builder = rowan::GreenNodeBuilder::new();
    builder.start_node(crate::SyntaxKind::Root.into());
    builder.token(crate::SyntaxKind::UnknownText.into(), text);
    builder.finish_node();
    Parse { green: builder.finish(), errors: Arc::new([]) }
}
